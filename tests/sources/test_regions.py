"""The regions table: order, names and systems."""

from __future__ import annotations

from pathlib import Path

import pytest

from socibrain.errors import Fault, Faults
from socibrain.sources.records import RegionTable
from socibrain.sources.regions import read_regions
from socibrain.sources.study import read_study


def read(
    folder: Path, table: str | None, regions: str = "regions: {file: regions.tsv, system: system}\n"
) -> tuple[RegionTable | None, list[Fault]]:
    if table is not None:
        (folder / "regions.tsv").write_text(table, encoding="utf-8")
    (folder / "study.yaml").write_text(
        "socibrain: 1\nstudy: s\ntitle: t\npeople: {file: p.tsv}\n"
        "brain: {scan: {files: '{person}.tsv', edges: other, negative: refuse}}\n" + regions
    )
    faults = Faults()
    return read_regions(read_study(folder / "study.yaml"), faults), list(faults)


def test_names_and_systems_in_row_order(tmp_path: Path) -> None:
    regions, faults = read(tmp_path, "index\tname\tsystem\n1\tzor\tsea\n2\tNA\tland\n10\tabo\tsea\n")
    assert faults == []
    assert regions == RegionTable(("zor", "NA", "abo"), ("sea", "land", "sea"))
    assert len(regions) == 3


def test_systems_may_be_undeclared_or_missing(tmp_path: Path) -> None:
    table = "name\tsystem\na\tsea\nb\tn/a\n"
    regions, faults = read(tmp_path, table, "regions: {file: regions.tsv}\n")
    assert (regions, faults) == (RegionTable(("a", "b"), ("", "")), [])
    regions, faults = read(tmp_path, table)
    assert regions == RegionTable(("a", "b"), ("sea", ""))
    assert [(fault.place, fault.kind, fault.grave) for fault in faults] == [
        ("line 3, column system", "no-value", False)
    ]


def test_studies_without_a_regions_table(tmp_path: Path) -> None:
    assert read(tmp_path, None, "") == (None, [])


@pytest.mark.parametrize(
    ("table", "expected"),
    [
        (None, [("", "missing-file")]),
        ("name\tsystem\n", [("", "empty")]),
        ("nam\tsystem\na\ts\n", [("line 1", "missing-column")]),
        (
            "name\tsystem\na\ts\nb\ts\na\ts\n\ts\n",
            [("line 4, column name", "duplicate-region"), ("line 5, column name", "missing-name")],
        ),
    ],
)
def test_unusable_tables_are_refused(
    tmp_path: Path, table: str | None, expected: list[tuple[str, str]]
) -> None:
    regions, faults = read(tmp_path, table)
    assert regions is None
    assert [(fault.place, fault.kind) for fault in faults] == expected
    assert all(fault.grave for fault in faults)


def test_an_index_that_does_not_rise_is_said(tmp_path: Path) -> None:
    regions, faults = read(tmp_path, "index\tname\tsystem\n2\ta\ts\n1\tb\ts\n0\tc\ts\n")
    assert regions is not None
    assert [(fault.place, fault.kind, fault.grave) for fault in faults] == [
        ("line 3, column index", "order", False)
    ]
