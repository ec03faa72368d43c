"""The plan file: what it may say, and how it is refused."""

from __future__ import annotations

from pathlib import Path

import pytest

from socibrain.errors import DocumentRefused
from socibrain.plan.planfile import check_columns, read_plan

PLAN = """\
socibrain: 1
plan: toy
study: study.yaml
question: Does it?
seed: 3
hypotheses:
  - id: first
    says: it does
    outcome: rest.modularity
    predictor: advice.constraint
    adjust: [age]
"""


def write(tmp_path: Path, text: str) -> Path:
    path = tmp_path / "plan.yaml"
    path.write_text(text)
    return path


def test_a_plan_and_its_defaults(tmp_path: Path) -> None:
    plan = read_plan(write(tmp_path, PLAN))
    options = plan.options(("base", "later"))
    assert (options.alpha, options.shuffles, options.sites, options.visit) == (0.05, 9999, "random", "base")
    assert plan.options(()).visit == ""
    assert plan.study_path == tmp_path / "study.yaml"


@pytest.mark.parametrize(
    ("old", "new", "place", "mend"),
    [
        ("    outcome:", "    outcom:", "9:5", "did you mean 'outcome'?"),
        ("seed: 3", "sede: 3", "5:1", "did you mean 'seed'?"),
        ("adjust: [age]", "adjust: [age, rest.modularity]", "11:19", "take it out"),
        ("predictor: advice.constraint", "predictor: rest.modularity", "10:5", "name another column"),
        ("adjust: [age]", "one_sided: true", "11:5", "add `direction: positive` or `direction: negative`"),
        ("seed: 3", "seed: 3\nvisit: third", "6:1", "its visits: base, later"),
    ],
)
def test_faults_name_line_column_and_remedy(
    tmp_path: Path, old: str, new: str, place: str, mend: str
) -> None:
    with pytest.raises(DocumentRefused) as refused:
        read_plan(write(tmp_path, PLAN.replace(old, new))).options(("base", "later"))
    assert refused.value.exit_code == 3
    assert (place, mend) in [(fault.place, fault.mend) for fault in refused.value.faults]


def test_two_hypotheses_of_one_name(tmp_path: Path) -> None:
    twice = PLAN + PLAN[PLAN.index("  - id") :]
    with pytest.raises(DocumentRefused, match="'first' stands twice"):
        read_plan(write(tmp_path, twice))


@pytest.mark.parametrize(
    ("name", "found", "mend"),
    [
        ("advice.site_density", "'site_density' is measured by site; hypotheses", "`socibrain catalogue`"),
        ("rest.strength", "'strength' is measured by region;", "of people there is 'rest.mean_strength'"),
        ("rest.within_module_z", "by region", "'rest.mean_within_module_z' and 'rest.largest_within"),
        ("other.strength", "is no measure or attribute of this study", "did you mean 'rest.mean_strength'?"),
    ],
)  # fmt: skip
def test_measures_of_another_scale_are_told_as_such(tmp_path: Path, name: str, found: str, mend: str) -> None:
    plan = read_plan(write(tmp_path, PLAN.replace("rest.modularity", name)))
    z = dict.fromkeys(("rest.mean_within_module_z", "rest.largest_within_module_z"), True)
    known = {"rest.mean_strength": True, "advice.constraint": True, "age": True} | z
    with pytest.raises(DocumentRefused) as refused:
        check_columns(plan, known)
    (fault,) = refused.value.faults
    assert found in fault.found
    assert mend in fault.mend


def test_a_study_file_is_told_apart_from_a_plan(tmp_path: Path) -> None:
    study = "socibrain: 1\nstudy: toy\ntitle: Toy\npeople: {file: people.tsv}\nbrain: {}\n"
    with pytest.raises(DocumentRefused) as refused:
        read_plan(write(tmp_path, study))
    (fault,) = refused.value.faults
    assert (fault.kind, fault.found) == ("other-kind", "this is a study file, not a plan")


def test_unknown_columns_are_told_together(tmp_path: Path) -> None:
    plan = read_plan(write(tmp_path, PLAN.replace("rest.modularity", "rest.modularty")))
    known = {"rest.modularity": True, "advice.constraint": False}
    with pytest.raises(DocumentRefused) as refused:
        check_columns(plan, known)
    found = [(fault.place, fault.kind) for fault in refused.value.faults]
    assert found == [("9:5", "unknown-column"), ("10:5", "not-a-number"), ("11:14", "unknown-column")]
    assert refused.value.faults[0].mend == "did you mean 'rest.modularity'?"
