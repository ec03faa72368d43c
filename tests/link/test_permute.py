"""Shuffles within sites: the published toy, brute force, and what must not matter."""

from itertools import permutations
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from socibrain.link.arrangements import shuffled
from socibrain.link.design import make_designs
from socibrain.link.families import extremeness, p_values
from socibrain.link.mixed import fit
from socibrain.link.options import LinkOptions
from socibrain.link.permute import distinct_arrangements, null_distribution, pose
from socibrain.link.sample import draw_sample
from socibrain.streams import stream
from tests.link.dense_reml import best_ratio, gls
from tests.link.made_cohorts import ask, cohort_of, made_persons

TOY = pd.read_csv(Path(__file__).parents[1] / "references" / "freedman_lane" / "toy.csv")


def designs_of(persons, *hypotheses, sites="random"):
    options = LinkOptions(seed=1, alpha=0.05, shuffles=99, sites=sites, visit="")
    sample = draw_sample(cohort_of(persons), hypotheses, visit="", family="all")
    return make_designs(sample, hypotheses, options)


def posed(designs):
    return [pose(design.outcome, design.within, design.between, design.sites) for design in designs]


def null_of(designs, **options):
    settings = {"shuffles": 199, "seed": 1, "family": "all"} | options
    return null_distribution(posed(designs), designs[0].sites, **settings)


def shares(null, tail):
    return p_values(
        extremeness(null.observed, (tail,)), extremeness(null.shuffled, (tail,)), exhaustive=null.exhaustive
    )[0]


def test_freedman_lane_toy_through_all_5040_arrangements() -> None:
    designs = designs_of(TOY.assign(site="all"), ask("y", "x", "z"))
    null = null_of(designs, shuffles=5040)
    assert null.exhaustive
    assert null.shuffled.shape == (5040, 1)
    assert null.observed[0] == pytest.approx(7.816052773, abs=1e-8)
    assert shares(null, "both") == pytest.approx(23 / 5040)
    assert shares(null, "upper") == pytest.approx(15 / 5040)
    assert not null_of(designs, shuffles=5039).exhaustive


def test_freedman_lane_toy_within_blocks() -> None:
    designs = designs_of(TOY.assign(site=TOY["z"].astype(str)), ask("y", "x"), sites="fixed")
    null = null_of(designs)
    assert null.shuffled.shape == (144, 1)
    assert null.observed[0] == pytest.approx(7.816052773, abs=1e-8)
    assert shares(null, "both") == pytest.approx(1 / 144)


@pytest.mark.parametrize("slope", [0.0, 0.5])
@pytest.mark.parametrize("sites", [(9, 14, 6, 11, 8), (1, 2, 20, 3, 4, 6), (6, 6, 6, 6)])
def test_every_shuffle_agrees_with_a_dense_refit(slope: float, sites: tuple[int, ...]) -> None:
    """Added back to the reduced fit, refitted by brute force on the full covariance, ratio and all."""
    (design,) = designs_of(made_persons(3, slope=slope, sites=sites), ask("y", "x", "z", "sex"))
    found = null_of([design], shuffles=40)
    orders = shuffled(stream(1, "shuffle", "all", 0), design.sites)[:40]
    place = design.within.shape[1] - 1
    reduced = np.delete(design.columns, place, axis=1)
    y, codes = design.outcome, design.sites
    expected = reduced @ gls(best_ratio(y, reduced, codes), y, reduced, codes)[0]
    again = []
    for order in orders:
        shuffled_y = expected + (y - expected)[order]
        ratio = best_ratio(shuffled_y, design.columns, codes)
        coefficients, errors, _ = gls(ratio, shuffled_y, design.columns, codes)
        again.append(coefficients[place] / errors[place])
    np.testing.assert_allclose(found.shuffled[:, 0], again, rtol=0, atol=1e-5)
    assert np.ptp(again) > 1


def test_observed_statistic_is_that_of_the_fit() -> None:
    designs = designs_of(
        made_persons(5), ask("y", "x", "z"), ask("other", "x", "z", name="g"), ask("y", "z", name="f")
    )
    found = null_of(designs)
    for design, statistic in zip(designs, found.observed, strict=True):
        fitted = fit(design.outcome, design.columns, design.sites)
        assert statistic == pytest.approx(fitted.statistics[design.within.shape[1] - 1], abs=1e-8)


def test_hypotheses_share_shuffles_and_do_not_disturb_each_other() -> None:
    """Many columns or few: another order of products, the same statistics."""
    persons = made_persons(7)
    asked = [ask("y", "x", "z"), ask("other", "x", "z", name="g"), ask("y", "z", name="f")]
    together = null_of(designs_of(persons, *asked)).shuffled
    for place, each in enumerate(asked):
        alone = null_of(designs_of(persons, each)).shuffled[:, 0]
        np.testing.assert_allclose(together[:, place], alone, rtol=0, atol=1e-9)
    many = [ask("y" if number % 2 else "other", "x", name=f"m{number}") for number in range(6)]
    crowd = null_of(designs_of(persons, *many)).shuffled
    np.testing.assert_allclose(crowd[:, 1], crowd[:, 5], rtol=0, atol=1e-9)
    alone = null_of(designs_of(persons, many[1])).shuffled[:, 0]
    np.testing.assert_allclose(crowd[:, 1], alone, rtol=0, atol=1e-9)


@pytest.mark.parametrize(
    "change",
    [
        lambda p: p.sample(frac=1, random_state=4),
        lambda p: p.assign(y=1e4 * p["y"] - 7),
        lambda p: p.assign(x=0.001 * p["x"] + 100),
        lambda p: p.assign(y=p["y"] + 3 * p["z"]),
        lambda p: p.assign(y=p["y"] - 2 * p["z"] + 5),
    ],
    ids=["rows in another order", "y rescaled", "x rescaled", "more of z", "less of z, constant"],
)
def test_what_must_not_matter_does_not(change) -> None:
    persons = cohort_of(made_persons(2)).persons
    plain = null_of(designs_of(persons, ask("y", "x", "z")))
    changed = null_of(designs_of(change(persons), ask("y", "x", "z")))
    np.testing.assert_allclose(changed.observed, plain.observed, rtol=1e-7)
    np.testing.assert_allclose(changed.shuffled, plain.shuffled, rtol=1e-6, atol=1e-7)


def test_turning_the_predictor_round_turns_the_statistic_round() -> None:
    persons = made_persons(2)
    plain = null_of(designs_of(persons, ask("y", "x", "z")))
    turned = null_of(designs_of(persons.assign(x=-persons["x"]), ask("y", "x", "z")))
    np.testing.assert_allclose(turned.observed, -plain.observed, rtol=1e-9)
    np.testing.assert_allclose(turned.shuffled, -plain.shuffled, rtol=1e-8, atol=1e-9)


def test_random_shuffles_depend_on_seed_and_family_and_begin_alike() -> None:
    designs = designs_of(made_persons(1), ask("y", "x"))
    one = null_of(designs, shuffles=700)
    assert np.array_equal(one.shuffled, null_of(designs, shuffles=700).shuffled)
    assert np.array_equal(one.shuffled[:199], null_of(designs).shuffled)
    assert not np.array_equal(one.shuffled, null_of(designs, shuffles=700, seed=2).shuffled)
    assert not np.array_equal(one.shuffled, null_of(designs, shuffles=700, family="b").shuffled)


@pytest.mark.parametrize("alike", ["outcome", "columns"])
def test_people_alike_reduce_the_arrangements_and_leave_p_as_it_is(alike: str) -> None:
    """Against all 6! orders, gone through one by one; |t| and |r| have the same order."""
    persons = pd.DataFrame(
        {"site": "all", "x": [0.0, 1.0, 2.0, 4.0, 5.0, 7.0], "y": [1.0, 3.0, 2.0, 5.0, 4.0, 9.0]}
    )
    name = "y" if alike == "outcome" else "x"
    persons[name] = [0.0, 1.0, 1.0, 1.0, 0.0, 1.0]
    designs = designs_of(persons, ask("y", "x"))
    null = null_of(designs, shuffles=99)
    assert distinct_arrangements(posed(designs), designs[0].sites) == 15
    assert null.shuffled.shape == (15, 1)
    x, y = persons["x"].to_numpy(), persons["y"].to_numpy()
    r = [abs(np.corrcoef(x, y[list(order)])[0, 1]) for order in permutations(range(6))]
    observed = abs(np.corrcoef(x, y)[0, 1])
    assert shares(null, "both") == pytest.approx(np.mean(np.array(r) >= observed - 1e-9))


def test_people_out_of_site_order_are_refused() -> None:
    problem = pose(
        np.arange(4.0), np.array([[-1.0], [1], [1], [-1]]), np.ones((4, 1)), np.array([0, 1, 0, 1])
    )
    with pytest.raises(ValueError, match="site by site"):
        null_distribution([problem], np.array([0, 1, 0, 1]), shuffles=9, seed=1, family="all")
