"""The people table and its sidecar, as they are and as they should not be."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest

from socibrain.errors import Fault, Faults
from socibrain.sources.people import holds, invited, read_people, scanned
from socibrain.sources.records import PeopleTable
from socibrain.sources.study import read_study

TABLE = """participant_id\tharbour\tduty\tage\theight\tconsent
007\tnorth\tdeck\t41\t1.80\tyes
NA\tnorth\tn/a\tn/a\t1.75\tno
12\tsouth\tengine\t29\t\tyes
"""
PEOPLE = (
    "{file: people.tsv, site: harbour, role: duty, numbers: [age], invited: {column: consent, values: [yes]}}"
)

Reader = Callable[..., tuple[PeopleTable | None, list[Fault]]]


@pytest.fixture
def read(tmp_path: Path) -> Reader:
    def reader(
        table: str, people: str = "{file: people.tsv}", sidecar: object = None
    ) -> tuple[PeopleTable | None, list[Fault]]:
        (tmp_path / "people.tsv").write_text(table, encoding="utf-8")
        if sidecar is not None:
            text = sidecar if isinstance(sidecar, str) else json.dumps(sidecar)
            (tmp_path / "people.json").write_text(text, encoding="utf-8")
        (tmp_path / "study.yaml").write_text(
            f"socibrain: 1\nstudy: s\ntitle: t\npeople: {people}\n"
            "brain: {scan: {files: '{person}.tsv', edges: other, negative: refuse}}\n"
        )
        faults = Faults()
        return read_people(read_study(tmp_path / "study.yaml"), faults), list(faults)

    return reader


def only(faults: list[Fault]) -> Fault:
    assert len(faults) == 1, faults
    return faults[0]


def test_ids_stay_text_and_attributes_keep_their_names(read: Reader) -> None:
    people, faults = read(TABLE, PEOPLE, {"height": {"Description": "stature", "Units": "m"}})
    assert faults == []
    assert people is not None
    assert people.ids == ("007", "NA", "12")
    assert list(people.table.columns) == ["harbour", "duty", "age", "height", "consent", "site", "role"]
    assert people.table["site"].tolist() == ["north", "north", "south"]
    assert people.table["role"].tolist() == ["deck", None, "engine"]
    np.testing.assert_array_equal(people.table["age"], [41.0, np.nan, 29.0])
    np.testing.assert_array_equal(people.table["height"], [1.8, 1.75, np.nan])
    assert people.labels["height"] == {"Description": "stature", "Units": "m"}


def test_without_sites_everyone_is_in_one(read: Reader) -> None:
    people, faults = read(TABLE)
    assert faults == []
    assert people is not None
    assert set(people.table["site"]) == {"all"}
    assert people.table["role"].tolist() == [None] * 3
    assert people.table["age"].tolist() == ["41", None, "29"], "undeclared columns stay text"


def test_invited_and_scanned_are_told_apart_from_undeclared(tmp_path: Path, read: Reader) -> None:
    people, _ = read(TABLE, PEOPLE)
    assert people is not None
    study = read_study(tmp_path / "study.yaml")
    assert invited(study, people) == {"007", "12"}
    assert scanned(study, people) is None


def test_numbers_are_chosen_by_value_and_not_by_spelling(tmp_path: Path, read: Reader) -> None:
    table = "participant_id\tseen\na\t1\nb\t0\nc\tn/a\n"
    people, faults = read(table, "{file: people.tsv, numbers: [seen], scanned: {column: seen, values: [1]}}")
    assert people is not None
    assert scanned(read_study(tmp_path / "study.yaml"), people) == {"a"}
    assert only(faults).place == "line 4, column seen"
    assert not only(faults).grave
    assert holds(None, ("n/a",)) is False


def test_a_value_that_nobody_has_is_said(read: Reader) -> None:
    people, faults = read(TABLE, "{file: people.tsv, scanned: {column: consent, values: [Yes]}}")
    assert people is not None
    fault = only(faults)
    assert (fault.kind, fault.place, fault.grave) == ("unused-value", "column consent", False)
    assert fault.mend == "did you mean 'yes'?"


@pytest.mark.parametrize("cell", ["forty", "1,5", "nan", "inf", "1_000", "٣"])
def test_text_among_numbers_is_cited_by_line_and_column(read: Reader, cell: str) -> None:
    people, faults = read(
        f"participant_id\tage\na\t3\nb\t{cell}\nc\t-2.5e-1\n", "{file: people.tsv, numbers: [age]}"
    )
    assert people is None
    fault = only(faults)
    assert (fault.where, fault.kind) == ("people.tsv:line 3, column age", "not-a-number")
    assert cell in fault.found


def test_every_bad_number_of_every_column_is_told_at_once(read: Reader) -> None:
    table = "participant_id\tage\theight\na\tx\t1\nb\t2\ty\nc\tz\t3\n"
    _, faults = read(table, "{file: people.tsv, numbers: [age]}", {"height": {"Units": "m"}})
    assert [fault.place for fault in faults] == [
        "line 2, column age",
        "line 4, column age",
        "line 3, column height",
    ]
    assert "sidecar" in faults[2].found


def test_duplicate_ids_cite_all_lines(read: Reader) -> None:
    people, faults = read("participant_id\na\nb\na\na\n")
    assert people is None
    fault = only(faults)
    assert (fault.kind, fault.place, fault.grave) == ("duplicate-id", "line 4", True)
    assert "2, 4, 5" in fault.found


@pytest.mark.parametrize(("one", "other"), [("sub-7", "sub-007"), ("ab1", "AB1"), ("x01y2", "X1y002")])
def test_ids_that_look_the_same_are_refused_together(read: Reader, one: str, other: str) -> None:
    people, faults = read(f"participant_id\n{one}\nzz\n{other}\n")
    assert people is None
    fault = only(faults)
    assert (fault.kind, fault.place) == ("alike-ids", "line 4")
    assert f"'{one}' (line 2), '{other}' (line 4)" in fault.found


@pytest.mark.parametrize(("one", "other"), [("1", "10"), ("s1", "s11"), ("a0", "a"), ("100", "1")])
def test_ids_that_only_resemble_each_other_are_fine(read: Reader, one: str, other: str) -> None:
    people, faults = read(f"participant_id\n{one}\n{other}\n")
    assert people is not None
    assert faults == []


def test_missing_ids_and_sites_are_cited(read: Reader) -> None:
    people, faults = read(
        "participant_id\tharbour\n\tnorth\nn/a\tnorth\nc\t\n", "{file: people.tsv, site: harbour}"
    )
    assert people is None
    assert [(fault.kind, fault.place) for fault in faults] == [
        ("missing-id", "line 2, column participant_id"),
        ("missing-id", "line 3, column participant_id"),
        ("missing-site", "line 4, column harbour"),
    ]


def test_declared_columns_must_exist_and_the_nearest_is_offered(read: Reader) -> None:
    people, faults = read(
        "participant_id\tharbour\tage\na\tnorth\t3\n",
        "{file: people.tsv, site: harbor, role: duty, numbers: [agee],"
        " invited: {column: asked, values: [yes]}}",
    )
    assert people is None
    assert [fault.kind for fault in faults] == ["missing-column"] * 4
    assert faults[0].mend == "did you mean 'harbour'? write it as `site: ...` in people"
    assert faults[2].mend.endswith("; write the right one as `column: ...` in people.invited")
    assert {fault.found for fault in faults} >= {"there is no column 'duty'", "there is no column 'asked'"}


@pytest.mark.parametrize("name", ["site", "role", "person", "visit"])
def test_a_column_may_not_carry_a_name_with_another_meaning(read: Reader, name: str) -> None:
    people, faults = read(
        f"participant_id\tharbour\t{name}\na\tnorth\tx\n", "{file: people.tsv, site: harbour}"
    )
    assert people is None
    assert only(faults).kind == "taken-name"


def test_declared_columns_may_be_called_site_and_role_and_person(read: Reader) -> None:
    people, faults = read(
        "person\tsite\trole\na\tnorth\tdeck\n", "{file: people.tsv, id: person, site: site, role: role}"
    )
    assert faults == []
    assert people is not None
    assert people.table.loc["a"].tolist() == ["north", "deck"]


def test_broken_sidecars_are_refused_with_the_line(read: Reader) -> None:
    people, faults = read(TABLE, sidecar='{"age":\n {"Units": "years",}\n}')
    assert people is None
    fault = only(faults)
    assert (fault.file, fault.kind) == ("people.json", "json")
    assert fault.place.startswith("2:")


@pytest.mark.parametrize("sidecar", ["[]", '{"age": "years"}', "[" * 100_000, "3"])
def test_sidecars_of_another_shape_are_refused(read: Reader, sidecar: str) -> None:
    people, faults = read(TABLE, sidecar=sidecar)
    assert people is None
    assert only(faults).file == "people.json"


def test_sidecar_labels_without_a_column_and_cells_without_a_level_are_noted(read: Reader) -> None:
    people, faults = read(
        TABLE,
        sidecar={"agee": {"Units": "years"}, "consent": {"Levels": {"yes": "agreed", "nay": "did not"}}},
    )
    assert people is not None
    assert not any(fault.grave for fault in faults)
    assert [fault.kind for fault in faults] == ["unknown-column", "unknown-level"]
    assert faults[0].mend == "did you mean 'age'?"
    assert faults[1].place == "line 3, column consent"


@pytest.mark.parametrize(
    ("table", "kind"),
    [("participant_id\tage\n", "empty"), ("", "empty"), ("participant_id;age\n1;2\n", "separator")],
)
def test_tables_without_people_are_refused(read: Reader, table: str, kind: str) -> None:
    people, faults = read(table)
    assert people is None
    assert only(faults).kind == kind


def test_a_missing_table_is_refused(tmp_path: Path, read: Reader) -> None:
    read(TABLE)
    (tmp_path / "people.tsv").unlink()
    faults = Faults()
    assert read_people(read_study(tmp_path / "study.yaml"), faults) is None
    assert only(list(faults)).kind == "missing-file"
