"""The roster as it is, and every way in which it can be wrong."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pandas as pd
import pytest

from socibrain.errors import Fault, Faults
from socibrain.sources.records import PeopleTable, RosterEntry
from socibrain.sources.roster import read_roster
from socibrain.sources.study import read_study

PEOPLE = PeopleTable(
    pd.DataFrame({"site": ["north", "north", "south"]}, index=["007", "NA", "12"], dtype=object), {}
)
Reader = Callable[..., tuple[tuple[RosterEntry, ...], list[Fault]]]


@pytest.fixture
def read(tmp_path: Path) -> Reader:
    def reader(*rows: str, declared: str = "{file: crew.tsv, name: called, site: station}") -> object:
        header = "participant_id\tcalled\tstation"
        (tmp_path / "crew.tsv").write_text("\n".join([header, *rows]) + "\n", encoding="utf-8")
        (tmp_path / "study.yaml").write_text(
            "socibrain: 1\nstudy: s\ntitle: t\npeople: {file: people.tsv, site: station}\n"
            + (f"roster: {declared}\n" if declared else "")
            + "brain: {scan: {files: '{person}.tsv', edges: other, negative: refuse}}\n",
            encoding="utf-8",
        )
        faults = Faults()
        return read_roster(read_study(tmp_path / "study.yaml"), PEOPLE, faults), list(faults)

    return reader  # type: ignore[return-value]


def test_a_roster_with_another_id_column_is_told_which_entry_names_it(read: Reader) -> None:
    _, faults = read(declared="{file: crew.tsv, person: pupil, name: called}")
    (fault,) = faults
    assert fault.found == "there is no column 'pupil'"
    assert fault.mend.endswith("; write the right one as `person: ...` in roster")


def test_ids_stay_text_and_rows_keep_their_order(read: Reader) -> None:
    roster, faults = read("NA\tKim Lee\tnorth", "007\tÄnna Berg\tnorth", "12\tKim Lee\tsouth")
    assert roster == (
        RosterEntry("NA", "north", "Kim Lee"),
        RosterEntry("007", "north", "Änna Berg"),
        RosterEntry("12", "south", "Kim Lee"),  # one name in two sites is nobody's fault
    )
    assert faults == []


def test_without_a_roster_everyone_can_be_named_by_id(read: Reader) -> None:
    roster, faults = read(declared="")
    assert roster[0] == RosterEntry("007", "north", "007")
    assert [entry.person for entry in roster] == ["007", "NA", "12"]
    assert faults == []


def test_site_and_name_may_be_left_out(read: Reader) -> None:
    roster, faults = read("12\tx\tignored", "007\tx\tignored", declared="{file: crew.tsv}")
    assert roster == (RosterEntry("12", "south", "12"), RosterEntry("007", "north", "007"))
    assert faults == []


@pytest.mark.parametrize(
    ("rows", "kind", "place", "says"),
    [
        (("007\tÄnna  Berg\tnorth", "NA\tBERG, anna\tnorth"), "duplicate-name", "lines 2 and 3", "'north'"),
        (
            ("007\tAnna Berg\tnorth", "007\tKim Lee\tnorth"),
            "duplicate-id",
            "line 3",
            "'007' stands on line 2",
        ),
        (("08\tKim Lee\tnorth",), "unknown-person", "line 2, column participant_id", "add the person"),
        (("7\tKim Lee\tnorth",), "unknown-person", "line 2, column participant_id", "did you mean '007'?"),
        (("na\tKim Lee\tnorth",), "unknown-person", "line 2, column participant_id", "did you mean 'NA'?"),
        (("007\tKim Lee\tnrth",), "unknown-site", "line 2, column station", "did you mean 'north'?"),
        (("007\tKim Lee\tsouth",), "two-sites", "line 2, column station", "'north'"),
        (("007\tKim Lee\tn/a",), "missing-site", "line 2, column station", "site"),
        (("007\t\tnorth",), "missing-name", "line 2, column called", "name"),
        (("007\t--\tnorth",), "missing-name", "line 2, column called", "name"),
        (("\tKim Lee\tnorth",), "missing-id", "line 2, column participant_id", "id"),
    ],
)
def test_each_fault_is_grave_cites_its_place_and_holds_no_name(
    read: Reader, rows: tuple[str, ...], kind: str, place: str, says: str
) -> None:
    _, faults = read(*rows)
    assert [(fault.kind, fault.file, fault.place, fault.grave) for fault in faults] == [
        (kind, "crew.tsv", place, True)
    ]
    assert says in str(faults[0])
    assert not any(part in str(faults[0]).casefold() for part in ("berg", "anna", "kim", "lee"))


def test_all_faults_are_told_together(read: Reader) -> None:
    _, faults = read("8\t\tnrth", "9\tKim Lee\tnorth")
    assert [fault.kind for fault in faults] == [
        "unknown-person",
        "missing-name",
        "unknown-site",
        "unknown-person",
    ]


def test_one_fault_does_not_bring_forth_others(read: Reader) -> None:
    roster, _ = read("007\t\tnorth", "NA\tKim Lee\tnorth", "12\tKim Lee\tnrth", "12\tx\tsouth")
    assert {entry.person: entry.site for entry in roster} == {"007": "north", "NA": "north", "12": "south"}
    roster, faults = read("007\tKim Lee\tnorth", "NA\tKim Lee\tnorth")
    assert [entry.person for entry in roster] == ["007", "NA"]
    assert [fault.kind for fault in faults] == ["duplicate-name"]
