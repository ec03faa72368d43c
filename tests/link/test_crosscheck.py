"""The library's fit beside ours."""

from dataclasses import replace

import numpy as np
import pytest

from socibrain.link.crosscheck import cross_check
from socibrain.link.mixed import fit
from tests.link.made_cohorts import ask, made_persons
from tests.link.test_design import design_of


@pytest.mark.parametrize("seed", range(4))
@pytest.mark.parametrize("sites", ["random", "fixed"])
def test_both_agree(seed: int, sites: str) -> None:
    design = design_of(made_persons(seed, sites=(9, 14, 6, 11, 8, 3, 12)), ask("y", "x", "z"), sites)
    ours = fit(design.outcome, design.columns, design.sites)
    check = cross_check(design, ours)
    place = design.within.shape[1] - 1
    assert check.estimate == pytest.approx(ours.coefficients[place], abs=1e-6)
    assert check.statistic == pytest.approx(ours.statistics[place], abs=2e-3)
    assert check.largest_difference < 2e-3
    assert check.note == ""
    assert np.isnan(check.variance_ratio) == (sites == "fixed")


def test_on_the_boundary_both_agree() -> None:
    persons = made_persons(3, sites=(10, 10, 10, 10, 10, 10))
    persons["y"] -= persons.groupby("site")["y"].transform("mean")
    design = design_of(persons, ask("y", "x"))
    ours = fit(design.outcome, design.columns, design.sites)
    assert ours.ratio == 0
    check = cross_check(design, ours)
    assert check.variance_ratio < 1e-4
    assert check.largest_difference < 1e-2


def test_a_wrong_fit_of_ours_is_seen() -> None:
    design = design_of(made_persons(1), ask("y", "x"))
    ours = fit(design.outcome, design.columns, design.sites)
    wrong = replace(ours, coefficients=ours.coefficients * 1.1, log_likelihood=ours.log_likelihood + 2)
    check = cross_check(design, wrong)
    assert check.largest_difference > 0.1
    assert "below the maximum" in check.note
