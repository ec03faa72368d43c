"""The study file: what it may say, and what cannot be meant."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from socibrain.errors import DocumentRefused, Fault
from socibrain.sources.study import Study, read_study

HEAD = "socibrain: 1\nstudy: coast\ntitle: A coast\npeople: {file: people.tsv}\n"
BRAIN = "brain:\n  rest: {files: 'b/{person}.tsv', edges: correlation, negative: drop}\n"
SOCIAL = """questionnaire:
  questions:
    advice: {asks: whom?, file: a.tsv, layout: long, chooser: who, chosen: whom, ties: directed}
"""

Read = Callable[[str], Study]
Refused = Callable[[str], list[Fault]]


@pytest.fixture
def read(tmp_path: Path) -> Read:
    def reader(text: str) -> Study:
        (tmp_path / "study.yaml").write_text(text, encoding="utf-8")
        return read_study(tmp_path / "study.yaml")

    return reader


@pytest.fixture
def refused(read: Read) -> Refused:
    def reader(text: str) -> list[Fault]:
        with pytest.raises(DocumentRefused) as caught:
            read(text)
        return list(caught.value.faults)

    return reader


@pytest.mark.parametrize("sides", [BRAIN, SOCIAL, BRAIN + SOCIAL])
def test_each_side_may_stand_alone(read: Read, sides: str) -> None:
    says = read(HEAD + sides).says
    assert bool(says.brain) == ("brain" in sides)
    assert bool(says.questionnaire) == ("questionnaire" in sides)
    assert says.people.site is None


def test_paths_start_at_the_study_file(tmp_path: Path, read: Read, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir("/")
    study = read(HEAD + BRAIN)
    assert study.folder == tmp_path
    assert study.path("b/x.tsv") == tmp_path / "b" / "x.tsv"


def test_labels_are_text_as_written(read: Read) -> None:
    says = read(
        HEAD.replace("people.tsv", "people.tsv, scanned: {column: seen, values: [1, 01, NA, 1.0]}")
        + "visits: [01, 2]\n"
        + BRAIN.replace("{person}", "{person}_{visit}")
    ).says
    assert says.visits == ("01", "2")
    assert says.people.scanned is not None
    assert says.people.scanned.values == ("1", "01", "NA", "1.0")


def test_both_halves_must_not_be_empty(refused: Refused) -> None:
    (fault,) = refused(HEAD)
    assert (fault.kind, fault.place) == ("nothing-to-read", "2:1")


@pytest.mark.parametrize(
    ("text", "place", "kind"),
    [
        (HEAD + "visits: [a, b]\n" + BRAIN, "7:10", "no-visit"),
        (HEAD + BRAIN.replace("{person}", "{person}{visit}"), "6:10", "no-visit"),
        (HEAD + "visits: [a, a]\n" + BRAIN.replace("{person}", "{person}{visit}"), "5:1", "duplicate-visit"),
        (HEAD + BRAIN.replace("{person}", "all"), "6:10", "no-person"),
        (HEAD + BRAIN.replace("{person}", "{person}{run}"), "6:10", "unknown-placeholder"),
        (HEAD + BRAIN.replace("rest:", "at rest:"), "6:3", "bad-name"),
        (HEAD + BRAIN.replace("drop", "drop, first_index: 1"), "6:71", "not-used"),
        (HEAD + SOCIAL.replace("advice:", "for-advice:"), "7:5", "bad-name"),
        (HEAD + SOCIAL.replace("advice:", "rest:") + BRAIN, "7:5", "bad-name"),
        (HEAD + SOCIAL.replace("long", "wide"), "7:68", "no-pattern"),
        (HEAD + SOCIAL + "exclusions: [{column: a, above: 1, because: b}]\n", "8:14", "nothing-to-exclude"),
        (
            HEAD + BRAIN + "exclusions: [{column: a, above: 1, because: b, leaves_out_of: social}]\n",
            "7:14",
            "nothing-to-exclude",
        ),
        (
            HEAD + BRAIN + "exclusions: [{file: f, visit: v, column: a, above: 1, because: b}]\n",
            "7:24",
            "no-visit",
        ),
        (HEAD + BRAIN + "exclusions: [{person: p, column: a, above: 1, because: b}]\n", "7:15", "not-used"),
        (HEAD + BRAIN + "exclusions: [{column: a, above: 1, below: 2, because: b}]\n", "7:14", "bad-value"),
        (HEAD + BRAIN + "exclusions: [{column: a, because: b}]\n", "7:14", "bad-value"),
        (
            HEAD.replace("people.tsv", "people.tsv, site: hut, numbers: [age, hut]") + BRAIN,
            "4:54",
            "not-a-number",
        ),
    ],
)
def test_what_cannot_be_meant_is_refused_at_its_place(
    refused: Refused, text: str, place: str, kind: str
) -> None:
    faults = refused(text)
    assert [(fault.place, fault.kind) for fault in faults] == [(place, kind)]
    assert faults[0].mend


def test_there_is_no_silent_rule_for_ties_edges_or_negative_weights(refused: Refused) -> None:
    text = (
        HEAD
        + SOCIAL.replace(", ties: directed", "")
        + BRAIN.replace(", edges: correlation, negative: drop", "")
    )
    faults = refused(text)
    assert [fault.found.rpartition(".")[2] for fault in faults] == [
        "ties: this entry is missing",
        "edges: this entry is missing",
        "negative: this entry is missing",
    ]
    assert "'directed', 'either', 'both'" in faults[0].mend


def test_contradictions_come_together(refused: Refused) -> None:
    text = (
        HEAD + BRAIN.replace("{person}", "{visit}") + SOCIAL.replace("advice", "rest").replace("long", "wide")
    )
    assert [fault.kind for fault in refused(text)] == ["bad-name", "no-pattern", "no-person", "no-visit"]


@pytest.mark.parametrize(
    ("wrong", "mend"),
    [
        ("peple: {file: a}", "did you mean 'people'?"),
        ("quesionnaire: {}", "did you mean 'questionnaire'?"),
        ("exclusion: []", "did you mean 'exclusions'?"),
        ("visit: []", "did you mean 'visits'?"),
    ],
)
def test_misspelt_entries_offer_the_right_one(refused: Refused, wrong: str, mend: str) -> None:
    faults = refused(HEAD + BRAIN + wrong + "\n")
    assert [(fault.place, fault.mend) for fault in faults] == [("7:1", mend)]


def test_another_format_number_is_refused(refused: Refused) -> None:
    (fault,) = refused(HEAD.replace("socibrain: 1", "socibrain: 2") + BRAIN)
    assert (fault.place, fault.found, fault.mend) == ("1:1", "socibrain: found 2", "write 1")


def test_a_plan_is_told_apart_from_a_study_file(tmp_path: Path) -> None:
    path = tmp_path / "plan.yaml"
    path.write_text("socibrain: 1\nplan: p\nstudy: study.yaml\nquestion: q\nseed: 1\nhypotheses: []\n")
    with pytest.raises(DocumentRefused) as refused:
        read_study(path)
    (fault,) = refused.value.faults
    assert (fault.kind, fault.found) == ("other-kind", "this is a plan, not a study file")
