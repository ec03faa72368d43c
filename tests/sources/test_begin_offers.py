"""What a first study file finds of who answered, and what it offers besides."""

from __future__ import annotations

import re
from pathlib import Path

from socibrain.errors import Faults
from socibrain.sources.answered import read_answered
from socibrain.sources.begin import begin
from socibrain.sources.study import Communities, read_study
from tests.sources.made_folder import IDS, decided, study_of, write, write_matrix, write_people

WIDE = [
    ("pupil", "answer_status", "friend_1", "friend_2"),
    ("007", "yes", "012", "NA"), ("012", "absent", "", ""), ("NA", "yes", "", ""), ("31", "yes", "007", "NA"),
]  # fmt: skip


def test_a_status_beside_wide_answers_says_who_answered(tmp_path: Path) -> None:
    write_people(tmp_path)
    write(tmp_path, "friends.csv", WIDE, ",")
    study, faults = study_of(tmp_path), Faults()
    assert read_answered(study, faults) == {"007", "NA", "31"}
    assert list(faults) == []
    renamed = [("pupil", "present", "answer_1", "answer_2"), *WIDE[1:]]
    write(tmp_path, "friends.csv", renamed, ",")
    (tmp_path / "study.yaml").unlink()
    assert '{file: friends.csv, person: pupil, column: present, values: ["yes"]}' in begin(tmp_path)


def test_where_nothing_says_who_answered_it_is_shown_as_a_decision(tmp_path: Path) -> None:
    write_people(tmp_path)
    write(tmp_path, "friends.csv", [(who, *names) for who, _, *names in WIDE], ",")
    text = begin(tmp_path)
    assert "  # decide: who answered?" in text
    assert "  # answered: {file: friends.csv, person: pupil, column: ..., values: [...]}" in text
    assert study_of(tmp_path).says.questionnaire.answered is None
    (tmp_path / "study.yaml").unlink()
    write(
        tmp_path, "friends.csv", [("pupil", "answer_1", "answer_2"), *((w, *n) for w, _, *n in WIDE[1:])], ","
    )
    assert "  # decide: who answered?" in begin(tmp_path)  # columns of names are no status


def test_entries_that_may_be_left_out_are_offered(tmp_path: Path) -> None:
    write(tmp_path, "participants.tsv", [("participant_id", "mri", "hand", "sex", "drives"),
          *((*cells, "yes") for cells in zip(IDS, "1010", "yYny", "1212", strict=True))])  # fmt: skip
    write(tmp_path, "friends.csv", WIDE, ",")
    text = begin(tmp_path)
    assert "scanned:" not in text
    assert "invited:" not in text
    for person in IDS:
        write_matrix(tmp_path, f"{person}.tsv")
    text = begin(tmp_path)
    assert re.findall(r"^  # scanned: .*column: (\w+)", text, re.M) == ["mri", "hand"]
    assert "  # scanned: {column: hand, values: [y, Y]}" in text
    assert "  # invited: {column: ..., values: [...]}" in text
    offered = {"own_answers_missing": "from_others", "dead_regions": "exclude_person"}
    for entry, value in offered.items():
        text = re.sub(rf"# {entry}: {value}", f"{entry}: {value}", text)
    text = text.replace("# communities:", "communities:").replace(
        "# scanned: {column: mri", "scanned: {column: mri"
    )
    (tmp_path / "study.yaml").write_text(decided(text))
    says = read_study(tmp_path / "study.yaml").says
    assert says.questionnaire.own_answers_missing == "from_others"
    assert says.people.scanned.column == "mri"
    (source,) = says.brain.values()
    assert (source.dead_regions, source.communities) == ("exclude_person", Communities())


def test_old_runs_are_passed_over_whatever_they_are_called(tmp_path: Path) -> None:
    write_people(tmp_path)
    for marks in (["run.json"], ["ledger.json", "flow.json"]):
        for folder in ("first try", "deep/second"):
            for name in (*marks, "sub/persons.csv", "notes.csv"):
                write(tmp_path, f"{folder} {marks[0]}/{name}", [("topic", "text"), ("a", "b")], ",")
    assert "not used" not in begin(tmp_path)
    write(tmp_path, "kept/notes.csv", [("topic", "text"), ("a", "b")], ",")
    assert "# not used: kept/notes.csv" in begin(tmp_path)
