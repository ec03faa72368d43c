"""Exclusion rules and the status of respondents: nobody is left out, or kept in, silently."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import pytest

from socibrain.errors import Fault, Faults
from socibrain.sources.answered import read_answered
from socibrain.sources.exclusions import LeftOut, read_exclusions, read_rule_values
from socibrain.sources.people import read_people
from socibrain.sources.study import Study, read_study

PEOPLE = (
    "participant_id\tseen\tage\tflag\n007\tyes\t17\tn/a\nNA\tyes\t40\tdrop\nc\tno\t90\tok\nd\tyes\tn/a\t\n"
)
MOTION = "id\tvisit\tmotion\n007\t1\t0.5\n007\t2\t0.51\nNA\t1\t0.1\nNA\t2\tn/a\nd\t1\t2e0\n"
BY_MOTION = "{file: motion.tsv, person: id, visit: visit, column: motion, above: 0.5, because: moved}"


def study(
    folder: Path,
    rules: Sequence[str] = (),
    *,
    motion: str = MOTION,
    scanned: str = "",
    status: str | None = None,
    values: str = "[done]",
) -> Study:
    (folder / "people.tsv").write_text(PEOPLE)
    (folder / "motion.tsv").write_text(motion)
    (folder / "status.tsv").write_text(status or "")
    answered = f"answered: {{file: status.tsv, person: id, column: status, values: {values}}}, "
    (folder / "study.yaml").write_text(
        f"socibrain: 1\nstudy: s\ntitle: t\npeople: {{file: people.tsv{scanned}}}\nvisits: ['1', '2']\n"
        "brain: {scan: {files: '{person}{visit}.tsv', edges: other, negative: refuse}}\n"
        f"questionnaire: {{{answered if status is not None else ''}questions: {{q: {{asks: w, file: a.tsv,"
        " layout: long, chooser: a, chosen: b, ties: both}}}\n"
        "exclusions:\n" + ("".join(f"- {rule}\n" for rule in rules) or "  []\n")
    )
    return read_study(folder / "study.yaml")


def applied(of: Study) -> tuple[list[tuple[str, str, str, str]], list[Fault]]:
    faults = Faults()
    people = read_people(of, faults)
    assert people is not None
    left_out = read_exclusions(of, people, faults)
    assert all(isinstance(each, LeftOut) for each in left_out)
    return [(each.person, each.visit, each.leaves_out_of, each.reason) for each in left_out], list(faults)


def places(faults: list[Fault]) -> list[tuple[str, str, bool]]:
    return [(fault.where, fault.kind, fault.grave) for fault in faults]


def test_a_limit_leaves_out_what_is_beyond_it_visit_by_visit(tmp_path: Path) -> None:
    left_out, faults = applied(
        study(tmp_path, [BY_MOTION], scanned=", scanned: {column: seen, values: ['yes']}")
    )
    assert left_out == [("007", "2", "brain", "moved"), ("d", "1", "brain", "moved")]
    assert places(faults) == [("motion.tsv:line 5, column motion", "no-value", False)]
    assert "not applied" in faults[0].found


def test_who_has_no_row_is_said_when_nobody_says_who_was_scanned(tmp_path: Path) -> None:
    _, faults = applied(study(tmp_path, [BY_MOTION]))
    assert places(faults)[1:] == [("motion.tsv:column id", "no-value", False)]
    assert "no row for c:" in faults[1].found


def test_rules_on_the_people_table(tmp_path: Path) -> None:
    left_out, faults = applied(
        study(
            tmp_path,
            [
                "{column: age, below: 18, leaves_out_of: both, because: minor}",
                "{column: flag, values: [drop], leaves_out_of: social, because: withdrew}",
            ],
        )
    )
    assert left_out == [("007", "", "both", "minor"), ("NA", "", "social", "withdrew")]
    assert places(faults) == [
        ("people.tsv:line 5, column age", "no-value", False),
        ("people.tsv:line 2, column flag", "no-value", False),
        ("people.tsv:line 5, column flag", "no-value", False),
    ]


def test_a_rule_may_name_the_missing_itself(tmp_path: Path) -> None:
    left_out, faults = applied(study(tmp_path, ["{column: flag, values: [n/a, drop], because: unclear}"]))
    assert [person for person, *_ in left_out] == ["007", "NA"]
    assert places(faults) == [("people.tsv:line 5, column flag", "no-value", False)]


def test_below_and_above_leave_the_limit_in(tmp_path: Path) -> None:
    rules = ["{column: age, below: 17, because: a}", "{column: age, above: 90, because: b}"]
    assert applied(study(tmp_path, rules))[0] == []


@pytest.mark.parametrize(
    ("row", "kind", "column", "grave"),
    [
        ("007\t1\t0.9", "duplicate-id", "", True),
        ("\t1\t0.9", "missing-id", "", True),
        ("c\tn/a\t0.9", "missing-id", "", True),
        ("C\t1\t0.9", "unknown-person", ", column id", True),
        ("7\t1\t0.9", "unknown-person", ", column id", True),
        ("zz\t1\t0.9", "unknown-person", ", column id", True),
        ("c\t01\t0.9", "alike-visit", ", column visit", True),
        ("c\t3\t0.9", "unknown-visit", ", column visit", False),
        ("c\t1\tmuch", "not-a-number", ", column motion", True),
    ],
)
def test_rows_that_cannot_be_used_are_cited(
    tmp_path: Path, row: str, kind: str, column: str, grave: bool
) -> None:
    left_out, faults = applied(study(tmp_path, [BY_MOTION], motion=MOTION + row + "\n"))
    told = [fault for fault in faults if fault.kind != "no-value"]
    assert places(told) == [(f"motion.tsv:line 7{column}", kind, grave)]
    assert left_out == applied(study(tmp_path, [BY_MOTION]))[0]


def test_two_rows_of_one_person_need_a_visit_column(tmp_path: Path) -> None:
    rule = BY_MOTION.replace("visit: visit, ", "")
    _, faults = applied(study(tmp_path, [rule]))
    told = [fault for fault in faults if fault.kind == "duplicate-id"]
    assert len(told) == 2
    assert "visit" in told[0].mend


def test_missing_columns_and_files_are_refused(tmp_path: Path) -> None:
    rules = [
        BY_MOTION.replace("column: motion", "column: moton"),
        BY_MOTION.replace("motion.tsv", "none.tsv"),
    ]
    left_out, faults = applied(study(tmp_path, rules))
    assert left_out == []
    assert [fault.kind for fault in faults] == ["missing-column", "missing-file"]
    assert faults[0].mend == "did you mean 'motion'? write it as `column: ...` in exclusions[0]"


def test_the_numbers_behind_the_rules(tmp_path: Path) -> None:
    of = study(tmp_path, [BY_MOTION, "{column: age, below: 18, because: minor}"])
    people = read_people(of, Faults())
    assert people is not None
    assert read_rule_values(of, people) == {
        "motion.motion": {("007", "1"): 0.5, ("007", "2"): 0.51, ("NA", "1"): 0.1, ("d", "1"): 2.0}
    }


STATUS = "id\tstatus\n007\tdone\nNA\trefused\nc\tn/a\nzz\tdone\n"


def test_who_answered(tmp_path: Path) -> None:
    faults = Faults()
    of = study(tmp_path, status=STATUS)
    assert read_answered(of, faults, known={"007", "NA", "c", "d"}) == {"007"}
    assert places(list(faults)) == [
        ("status.tsv:line 5, column id", "unknown-person", True),
        ("status.tsv:line 4, column status", "no-value", False),
    ]
    assert read_answered(of, Faults()) == {"007", "zz"}


def test_without_a_status_table_nothing_is_said(tmp_path: Path) -> None:
    faults = Faults()
    assert read_answered(study(tmp_path), faults) is None
    assert list(faults) == []


def test_a_status_that_nobody_has_is_said_and_an_unusable_table_refused(tmp_path: Path) -> None:
    faults = Faults()
    assert read_answered(study(tmp_path, status=STATUS, values="[Done]"), faults) == frozenset()
    assert next(iter(faults)).kind == "unused-value"
    assert next(iter(faults)).mend == "did you mean 'done'?"
    faults = Faults()
    assert read_answered(study(tmp_path, status="id\tstat\n1\t2\n"), faults) is None
    assert faults.any_grave


def test_a_column_that_is_not_there_is_told_with_the_entry_that_names_it(tmp_path: Path) -> None:
    faults = Faults()
    assert read_answered(study(tmp_path, status="pupil\tstatus\n007\tdone\n"), faults) is None
    (fault,) = faults
    assert (fault.where, fault.found) == ("status.tsv:line 1", "there is no column 'id'")
    here = "write the right one as `person: ...` in questionnaire.answered"
    assert fault.mend == f"valid here: pupil, status; {here}"
    _, told = applied(study(tmp_path, [BY_MOTION.replace("person: id, ", "")]))
    assert told[0].mend.endswith(" as `person: ...` in exclusions[0]")
