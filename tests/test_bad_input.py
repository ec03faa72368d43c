"""Bad input from the command line: one clear message a fault, the right exit code, nothing half written."""

from __future__ import annotations

import io
import os
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from tests.broken_study import (
    EVERYONE,
    Break,
    Message,
    added,
    assert_told,
    cell,
    changed,
    cut,
    gone,
    put,
    weights,
)
from tests.made_study import SITES, MadeStudy, call, make_study


@pytest.fixture
def study(tmp_path: Path) -> MadeStudy:
    return make_study(tmp_path / "study")


def names_alike(study: MadeStudy) -> None:
    study.change("roster.tsv", "Name N02", "name, n01")
    study.change("roster.tsv", "Name N01", "N01 Name")


N03 = "brain/n03.tsv"
NO_FILE, CORRECT = "there is no such file", "correct the path"
DATA: dict[str, tuple[Break, Message]] = {
    "missing people table": (gone("people.tsv"), ("people.tsv", NO_FILE, CORRECT)),
    "missing roster": (gone("roster.tsv"), ("roster.tsv", NO_FILE, CORRECT)),
    "missing answers": (gone("advice.tsv"), ("advice.tsv", NO_FILE, CORRECT)),
    "missing regions": (gone("regions.tsv"), ("regions.tsv", NO_FILE, CORRECT)),
    "no matrix at all": (
        gone(*(f"brain/{person}.tsv" for person in EVERYONE)),
        ("brain/{person}.tsv", "no file of brain input 'rest' was found", "for example brain/n01.tsv"),
    ),
    "matrix not square": (
        weights(lambda matrix: matrix[:9]),
        (N03, "is 9 × 10, not a square matrix", "a row and a column per region"),
    ),
    "matrix not symmetric": (
        put(3, 4, 0.8),
        (f"{N03}:row 3, column 4", "holds 0.8 where row 4, column 3 holds", "one weight"),
    ),
    "matrix of wrong size": (
        weights(lambda matrix: matrix[:9, :9]),
        (N03, "is 9 × 9 where the region table has 10 regions", "the same regions"),
    ),
    "nan in matrix": (
        put(3, 4, np.nan),
        (f"{N03}:row 3, column 4", "the weight is nan", "compute the matrix again"),
    ),
    "infinity in matrix": (
        put(3, 4, np.inf, both=True),
        (f"{N03}:row 3, column 4", "the weight is inf (and 1 more cells", "compute the matrix again"),
    ),
    "weights that cannot be squared": (
        put(3, 4, 1e300, both=True),
        (f"{N03}:row 3, column 4", "the weight is 1e+300 (and 1 more cells", "compute the matrix again"),
    ),
    "text in matrix": (
        lambda study: study.write(N03, study.text(N03).replace("\t", "\tabc", 1)),
        (f"{N03}:line 1, column 2", "'abc0.", "write a number with a decimal point"),
    ),
    "empty matrix": (lambda study: study.write(N03, ""), (N03, "is empty", "save the matrix again")),
    "truncated matrix": (cut(-30), (f"{N03}:line 10", "the last line has 7 cells", "was cut short")),
    "matrix cut in the middle": (cut(400), (f"{N03}:line 5", "the last line has", "was cut short")),
    "region table of another length": (
        lambda study: study.without("regions.tsv", "area9"),
        (
            "brain/n01.tsv; brain/n02.tsv; brain/n03.tsv and 21 more",
            "is 10 × 10 where the region table has 9 regions",
            "the same regions",
        ),
    ),
    "person in roster only": (
        added("roster.tsv", "n13\tnorth\tName N13\tyes"),
        ("roster.tsv:line 26, column person", "'n13' is not in the people table", "add the person"),
    ),
    "person in answers only": (
        added("advice.tsv", "n13\tName N01"),
        ("advice.tsv:line 74", "who answers is not on the roster", "put the person on the roster"),
    ),
    "duplicate id": (
        added("people.tsv", "n01\tnorth\tcrew\t40"),
        ("people.tsv:line 26", "id 'n01' stands on lines 2, 26", "one row per person"),
    ),
    "duplicate id on the roster": (
        added("roster.tsv", "n01\tnorth\tOther\tyes"),
        ("roster.tsv:line 26", "'n01' stands on line 2 already", "one row per person"),
    ),
    "id that differs by case": (
        added("people.tsv", "N01\tnorth\tcrew\t40"),
        ("people.tsv:line 26", "'n01' (line 2), 'N01' (line 26)", "one person's id one way"),
    ),
    "id that differs by padding": (
        cell("roster.tsv", "person", n01="N1"),
        ("roster.tsv:line 2, column person", "'N1' is not in the people table", "did you mean 'n01'?"),
    ),
    "chooser that differs by padding": (
        added("advice.tsv", "n1\tName N02"),
        ("advice.tsv:line 74", "who answers is not on the roster", "did you mean 'n01'?"),
    ),
    "id composed otherwise": (
        lambda study: (
            [
                study.write(file, study.text(file).replace("n02", "n\u00e92"))
                for file in ("people.tsv", "advice.tsv")
            ]
            + [study.write("roster.tsv", study.text("roster.tsv").replace("n02", "ne\u03012"))]
            + [(study.folder / "brain/n02.tsv").rename(study.folder / "brain/n\u00e92.tsv")]
        ),
        ("roster.tsv:line 3, column person", "is not in the people table", "did you mean 'n\u00e92'?"),
    ),
    "sites that differ by case": (
        cell("people.tsv", "site", n05="North"),
        ("people.tsv:line 6, column site", "site 'North' is 'north' on line 2", "one site one way"),
    ),
    "a roster name twice in one site": (
        names_alike,
        ("roster.tsv:lines 2 and 3", "one name stands for two people of site 'north'", "a second name"),
    ),
    "unknown site": (
        cell("roster.tsv", "site", n01="nroth"),
        ("roster.tsv:line 2, column site", "no site 'nroth'", "did you mean 'north'?"),
    ),
    "answers of everyone missing": (
        lambda study: study.write("advice.tsv", "person\tasks\n"),
        ("advice.tsv", "no rows, and 24 people answered by the status table", "export the answers again"),
    ),
}


@pytest.mark.parametrize(("breaking", "message"), DATA.values(), ids=DATA.keys())
def test_data_that_cannot_be_used(study: MadeStudy, breaking: Break, message: Message) -> None:
    breaking(study)
    told = study.run("measure")
    assert_told(told, 4, message)
    assert study.left() == []
    assert "Name N" not in told.err


UNKNOWN = "is no measure or attribute of this study"
PLAN: dict[str, tuple[Break, Message]] = {
    "missing plan": (gone("plan.yaml"), ("", NO_FILE, "check the path")),
    "missing study file": (gone("study.yaml"), (":3:1", "there is no such study file", CORRECT)),
    "unknown measure": (
        changed("plan.yaml", "advice.in_degree", "advice.in_degre"),
        (
            ":11:5",
            f"hypotheses[0].predictor: 'advice.in_degre' {UNKNOWN}",
            "did you mean 'advice.in_degree'?",
        ),
    ),
    "unknown attribute": (
        changed("plan.yaml", "[age]", "[agee]"),
        (":12:14", f"hypotheses[0].adjust[0]: 'agee' {UNKNOWN}", "did you mean 'age'?"),
    ),
    "unknown key": (
        changed("plan.yaml", "    outcome:", "    outcom:"),
        (":10:5", "hypotheses[0].outcom: unknown entry", "did you mean 'outcome'?"),
    ),
    "text where a number must be": (
        changed("plan.yaml", "predictor: advice.in_degree", "predictor: role"),
        (":11:5", "'role' holds text", "name a column of numbers"),
    ),
    "plan that points to itself": (
        changed("plan.yaml", "study: study.yaml", "study: ../study/plan.yaml"),
        (":3:1", "study: is the plan itself", "name the study file"),
    ),
}


@pytest.mark.parametrize(("breaking", "message"), PLAN.values(), ids=PLAN.keys())
def test_plans_that_cannot_be_meant(study: MadeStudy, breaking: Break, message: Message) -> None:
    breaking(study)
    place, *rest = message
    assert_told(study.run("link"), 3, (f"{study.folder / 'plan.yaml'}{place}", *rest))
    assert study.left() == []


def test_an_unknown_key_in_the_study_file(study: MadeStudy) -> None:
    study.change("study.yaml", "    edges:", "    edgse:")
    where = f"{study.folder / 'study.yaml'}:29:5"
    for command in ("audit", "measure", "link"):
        assert_told(
            study.run(command), 3, (where, "brain.rest.edgse: unknown entry", "did you mean 'edges'?")
        )
    assert study.left() == []


def test_all_faults_of_a_kind_are_told_in_one_run(study: MadeStudy) -> None:
    gone("people.tsv", "roster.tsv", "advice.tsv", "regions.tsv")(study)
    files = "people.tsv; roster.tsv; regions.tsv and 1 more"
    assert_told(study.run("measure"), 4, (files, NO_FILE, CORRECT))


def test_faults_of_many_kinds_are_told_in_one_run(study: MadeStudy) -> None:
    study.write("brain/n02.tsv", "")
    put(3, 4, np.nan)(study)
    cell("roster.tsv", "site", n01="nroth")(study)
    added("advice.tsv", "n13\tName N01")(study)
    study.change("roster.tsv", "Name S02", "Name S01")
    assert_told(
        study.run("measure"),
        4,
        ("roster.tsv:line 2, column site", "'nroth'", "'north'"),
        ("roster.tsv:lines 14 and 15", "one name stands for two people", "a second name"),
        ("advice.tsv:line 74", "is not on the roster", "put the person"),
        ("brain/n02.tsv", "is empty", "save the matrix again"),
        (f"{N03}:row 3, column 4", "the weight is nan", "compute the matrix again"),
    )
    assert study.left() == []


def test_a_person_in_the_status_table_only(study: MadeStudy) -> None:
    rows = "".join(f"{person}\tyes\n" for person in [*EVERYONE, "n99", "N7"])
    study.write("status.tsv", "person\tanswered\n" + rows)
    study.change("study.yaml", "answered: {file: roster.tsv", "answered: {file: status.tsv")
    what = "is not in the people table"
    assert_told(
        study.run("measure"),
        4,
        ("status.tsv:line 26, column person", f"'n99' {what}", "take the row out"),
        ("status.tsv:line 27, column person", f"'N7' {what}", "did you mean 'n07'?"),
    )


def test_a_person_in_a_table_of_scans_only(study: MadeStudy) -> None:
    study.write("scans.tsv", "participant_id\tmotion\nn01\t0.1\nq1\t0.9\n")
    rule = "exclusions: [{file: scans.tsv, column: motion, above: 0.5, because: moved}]\n"
    study.write("study.yaml", study.text("study.yaml") + rule)
    message = (
        "scans.tsv:line 3, column participant_id",
        "'q1' is not in the people table",
        "take the row out",
    )
    assert_told(study.run("measure"), 4, message)


@pytest.mark.parametrize("command", ["audit", "measure"])
def test_all_answers_of_one_person_are_missing(study: MadeStudy, command: str) -> None:
    study.without("advice.tsv", "n05")
    message = ("advice.tsv", "'n05' answered by the status table and has no row", "an empty row if they")
    assert_told(study.run(command), 4, message)


def test_a_matrix_of_nobody_known(study: MadeStudy) -> None:
    study.write("brain/N13.tsv", study.text("brain/n01.tsv"))
    message = ("brain/N13.tsv", "the people table has no 'N13'", "add the person to the people table")
    assert_told(study.run("measure"), 4, message)


@pytest.mark.parametrize("command", ["audit", "measure"])
@pytest.mark.parametrize(
    ("breaking", "said"),
    [
        (
            added("people.tsv", "n13\tnorth\tcrew\t40"),
            "not-on-roster: roster.tsv:column person  no row for n13 of the people table",
        ),
    ],
    ids=["person in people table only"],
)
def test_what_does_not_stop_the_run_is_told(
    study: MadeStudy, command: str, breaking: Break, said: str
) -> None:
    """Half-collected data look like this as well, so it is told and put on record, and the run goes on."""
    breaking(study)
    told = study.run(command)
    assert told.code == 0
    assert f"problems that do not stop the run (all of them: {study.out / 'problems.csv'}):" in told.err
    assert said in told.err
    assert "    to mend: " in told.err
    problems = pd.read_csv(study.out / "problems.csv")
    assert list(problems["kind"]) == [said.partition(":")[0]]
    assert not problems["grave"].any()


def constant_predictor(study: MadeStudy) -> None:
    study.column("people.tsv", "age", {person: "30" if person[0] == "n" else "40" for person in EVERYONE})
    study.change("plan.yaml", "predictor: advice.in_degree\n    adjust: [age]", "predictor: age")


def few_people(study: MadeStudy) -> None:
    gone(*(f"brain/{site[0]}{number:02d}.tsv" for site in SITES for number in range(3, 13)))(study)


@pytest.mark.parametrize(
    ("breaking", "reason"),
    [
        (constant_predictor, "predictor 'age' is the same for everyone within each site"),
        (few_people, "4 people in 2 sites are too few for 2 within-site effects"),
    ],
)
def test_hypotheses_that_the_study_cannot_answer(study: MadeStudy, breaking: Break, reason: str) -> None:
    """The findings say refused, each with its reason; so do the messages, with the place in the plan."""
    breaking(study)
    told = study.run("link")
    where = f"{study.folder / 'plan.yaml'}:8:5"
    assert_told(told, 4, (where, f"hypotheses[0]: 'asked' cannot be answered: {reason}", "take it out"))
    findings = pd.read_csv(study.out / "findings.csv")
    assert list(findings["status"]) == ["refused"]
    assert reason in findings["reason"][0]
    assert findings["p_permutation"].isna().all()


class Intruder:
    """An object whose pickle makes a folder when it is loaded."""

    def __init__(self, mark: Path) -> None:
        self.mark = mark

    def __reduce__(self) -> tuple[object, ...]:
        return os.mkdir, (str(self.mark),)


@pytest.mark.parametrize("suffix", ["npy", "npz"])
def test_pickled_objects_are_never_run(study: MadeStudy, suffix: str) -> None:
    mark, buffer = study.folder / "ran", io.BytesIO()
    save = np.save if suffix == "npy" else np.savez
    save(buffer, np.array([[Intruder(mark)]], dtype=object), allow_pickle=True)
    study.change("study.yaml", "brain/{person}.tsv", f"brain/{{person}}.{suffix}")
    study.write(f"brain/n01.{suffix}", buffer.getvalue())
    message = (f"brain/n01.{suffix}", "holds pickled objects", "a plain array of numbers")
    assert_told(study.run("measure"), 4, message)
    assert not mark.exists()
    assert study.left() == []
    loaded = np.load(io.BytesIO(buffer.getvalue()), allow_pickle=True)  # what would have happened
    assert suffix == "npy" or loaded["arr_0"] is not None
    assert mark.exists()


@pytest.mark.parametrize("content", ["", "[]", '{"plan_file": "plan.yaml"}'])
def test_a_record_that_is_none(study: MadeStudy, content: str) -> None:
    study.out.mkdir()
    (study.out / "run.json").write_text(content)
    message = (str(study.out / "run.json"), "is not the record of a run", "socibrain link")
    assert_told(call("report", str(study.out)), 4, message)


def test_no_run_to_report(study: MadeStudy) -> None:
    message = (str(study.out), "there is no finished run here", "socibrain link")
    assert_told(call("report", str(study.out)), 4, message)


def test_an_audit_writes_all_problems_even_where_nobody_can_be_read(study: MadeStudy) -> None:
    rows = study.text("people.tsv")
    study.write("people.tsv", rows + "".join(f"n0{number}\tnorth\tcrew\t40\n" for number in range(1, 9)))
    told = study.run("audit")
    assert told.code == 4
    assert "and 3 more of this kind: `socibrain audit` writes all of them to problems.csv" in told.err
    assert len(pd.read_csv(study.out / "problems.csv")) == 8
