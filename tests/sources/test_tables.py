"""Text tables: cells as written, lines kept, shape checked."""

from __future__ import annotations

from pathlib import Path

import pytest

from socibrain.errors import Fault, Faults
from socibrain.sources.tables import TextTable, as_number, lookalike, loose_form, read_table


def read(
    folder: Path, content: str | bytes, name: str = "t.tsv", needed: tuple[str, ...] = ()
) -> tuple[TextTable | None, list[Fault]]:
    raw = content.encode() if isinstance(content, str) else content
    (folder / name).write_bytes(raw)
    faults = Faults()
    return read_table(folder / name, f"data/{name}", dict.fromkeys(needed, ""), faults), list(faults)


def kinds(faults: list[Fault]) -> list[tuple[str, str]]:
    return [(fault.place, fault.kind) for fault in faults]


@pytest.mark.parametrize(
    ("name", "text"),
    [
        ("t.tsv", "id\tname\n007\tNA\n 1e5 \tn/a\n"),
        ("t.csv", "id,name\n007,NA\n1e5,n/a\n"),
        ("t.CSV", '"id","name"\r\n"007","NA"\r\n1e5,n/a\r\n'),
        ("t.tsv", "\ufeffid\tname\r007\tNA\r1e5\tn/a"),
    ],
)
def test_cells_are_text_as_written(tmp_path: Path, name: str, text: str) -> None:
    table, faults = read(tmp_path, text, name)
    assert faults == []
    assert table == TextTable(
        f"data/{name}", ("id", "name"), (("007", "NA"), ("1e5", "n/a")), table.lines if table else ()
    )
    assert table.lines == (2, 3)
    assert table.column("name") == ("NA", "n/a")
    assert next(iter(table)) == (2, {"id": "007", "name": "NA"})


def test_lines_are_those_of_the_file(tmp_path: Path) -> None:
    text = '\nid,says\n1,"two\nlines"\n\n  \n2,"a ""word"""\n'
    table, faults = read(tmp_path, text, "t.csv")
    assert faults == []
    assert table is not None
    assert table.lines == (3, 7)
    assert table.rows == (("1", "two\nlines"), ("2", 'a "word"'))


@pytest.mark.parametrize(
    ("text", "needed", "expected"),
    [
        ("", (), [("", "empty")]),
        ("\n\t\n", (), [("", "empty")]),
        ("a\tb\n1\n1\t2\t3\n1\t2\n", (), [("line 2", "ragged"), ("line 3", "ragged")]),
        ("a\tb\tc\n" + "1\t2\n" * 9, (), [(f"line {n}", "ragged") for n in (2, 3, 4, 5, 6, 1)]),
        ("a\tb\ta\n1\t2\t3\n", (), [("line 1", "duplicate-column")]),
        ("a\t\tb\t\n1\t2\t3\t4\n", (), [("line 1", "nameless-column")] * 2),
        ("a\tb\n", ("a", "c", "d"), [("line 1", "missing-column")] * 2),
        ("a;b\n1;2\n", ("a",), [("line 1", "separator")]),
        ("a,b\n1,2\n", ("a",), [("line 1", "separator")]),
        ('a\tb\n1\t2\n1\t"open\n', (), [("line 3", "table")]),
        ('a\tb\n"x" y\t2\n', (), [("line 2", "table")]),
        (b"a\tb\n1\t2\n3\t\xe9\n", (), [("line 3", "encoding")]),
        ("a\tb\n".encode("utf-16"), (), [("line 1", "encoding")]),
    ],
)
def test_bad_shapes_are_refused_with_the_line(
    tmp_path: Path, text: str | bytes, needed: tuple[str, ...], expected: list[tuple[str, str]]
) -> None:
    table, faults = read(tmp_path, text, needed=needed)
    assert table is None
    assert kinds(faults) == expected
    assert all(fault.file == "data/t.tsv" and fault.grave and fault.mend for fault in faults)


def test_semicolons_in_csv_are_named(tmp_path: Path) -> None:
    _, faults = read(tmp_path, "a;b\n1;2\n", "t.csv")
    assert "semicolon" in faults[0].found


def test_a_missing_column_offers_the_nearest(tmp_path: Path) -> None:
    _, faults = read(tmp_path, "participant_id\tharbour\n", needed=("harbor",))
    assert faults[0].mend == "did you mean 'harbour'?"


@pytest.mark.parametrize(("name", "kind"), [("none.tsv", "missing-file"), ("", "unreadable")])
def test_what_is_no_file_is_refused(tmp_path: Path, name: str, kind: str) -> None:
    faults = Faults()
    assert read_table(tmp_path / name, name, {}, faults) is None
    assert [fault.kind for fault in faults] == [kind]


def test_one_column_is_a_table(tmp_path: Path) -> None:
    table, faults = read(tmp_path, "participant_id\n1\n2\n")
    assert faults == []
    assert table is not None
    assert table.rows == (("1",), ("2",))


@pytest.mark.parametrize(
    ("cell", "number"),
    [("3", 3.0), ("-0.5", -0.5), ("+.5e-1", 0.05), ("7.", 7.0), ("007", 7.0), ("1E3", 1000.0)],
)
def test_numbers_in_plain_digits(cell: str, number: float) -> None:
    assert as_number(cell) == number


@pytest.mark.parametrize(
    "cell", ["", "n/a", "nan", "inf", "1,5", "1_0", "0x1", "1 2", "٣", "e5", ".", "--1", "1\n"]
)
def test_what_is_no_number(cell: str) -> None:
    assert as_number(cell) is None


def test_lookalikes_differ_by_case_or_leading_zeros_only() -> None:
    assert loose_form("Sub-007A010") == "sub-7a10"
    assert lookalike("7", ["70", "007"]) == "007"
    assert lookalike("0", ["000"]) == "000"
    assert lookalike("a1", ["a10", "a-1"]) is None
    assert lookalike("1.05", ["1.5"]) == "1.5", "an id with a point is still an id"
