"""How often the test is wrong where the truth is known, and how often it finds what is there.

Sites differ in level, in the mean of x and in the mean of the adjustment, and the slopes between
sites are not those within: raw columns would blend the two.
"""

import numpy as np
from scipy import stats

from socibrain.link.families import extremeness, family_p, p_values
from socibrain.link.mixed import fit
from socibrain.link.permute import null_distribution, pose
from socibrain.streams import stream

SIZES = np.array([8, 25, 12, 15, 20, 10, 18, 9, 22, 11])
SITES = np.repeat(np.arange(10), SIZES)
PEOPLE = SITES.size


def means(values):
    sums = np.zeros((10, *values.shape[1:]))
    np.add.at(sums, SITES, values)
    return (sums.T / SIZES).T


def world(draw, outcomes: int, slope: float, rho: float = 0.0):
    """x, z and outcomes (n, outcomes) correlated rho among themselves.

    Site means explain about 44 % of their variance, mostly through the means of x and z.
    """
    between = draw.normal(size=(10, 2))
    x = draw.normal(size=PEOPLE) + between[SITES, 0]
    z = 0.5 * x + draw.normal(size=PEOPLE) + between[SITES, 1]

    def correlated(rows):
        shared = draw.normal(size=(rows, 1))
        return np.sqrt(rho) * shared + np.sqrt(1 - rho) * draw.normal(size=(rows, outcomes))

    x_mean, z_mean = means(x)[SITES], means(z)[SITES]
    fixed = slope * (x - x_mean) + 0.3 * (z - z_mean) + x_mean - 0.5 * z_mean
    return x, z, fixed[:, None] + 0.3 * correlated(10)[SITES] + correlated(PEOPLE)


def split(x, z):
    within = np.column_stack([z - means(z)[SITES], x - means(x)[SITES]])
    between = np.column_stack([np.ones(PEOPLE), means(x)[SITES], means(z)[SITES]])
    return within, between


def null_of(x, z, outcomes, number: int):
    within, between = split(x, z)
    problems = [pose(y, within, between, SITES) for y in outcomes.T]
    return null_distribution(problems, SITES, shuffles=199, seed=7, family=f"world {number}")


def rate_of(slope: float, worlds: int, outcomes: int) -> tuple[int, int]:
    """Rejections at .05 among worlds × outcomes data sets."""
    wrong = 0
    for number in range(worlds):
        null = null_of(*world(stream(2026, "rates", slope, number), outcomes, slope), number)
        tails = ("both",) * outcomes
        p = p_values(
            extremeness(null.observed, tails), extremeness(null.shuffled, tails), exhaustive=null.exhaustive
        )
        wrong += int((p <= 0.05).sum())
    return wrong, worlds * outcomes


def inside(count: int, of: int, rate: float) -> bool:
    low, high = stats.binom.interval(0.999, of, rate)
    return bool(low <= count <= high)


def test_without_an_effect_one_in_twenty_is_called_one() -> None:
    wrong, of = rate_of(0.0, 40, 25)
    assert inside(wrong, of, 0.05), wrong / of


def test_the_worlds_hold_the_trap_that_splitting_avoids() -> None:
    """With raw columns the same worlds are called an effect far too often by Wald's test."""
    wrong = of = 0
    for number in range(40):
        x, z, outcomes = world(stream(2026, "rates", 0.0, number), 10, 0.0)
        columns = np.column_stack([x, z, np.ones(PEOPLE)])
        for y in outcomes.T:
            found = fit(y, columns, SITES)
            wrong += 2 * stats.t.sf(abs(found.statistics[0]), found.df[0]) <= 0.05
            of += 1
    assert wrong / of > 0.1


def test_a_planted_effect_is_found_as_often_as_theory_says() -> None:
    """β .25: with the mean information about x, the noncentral t gives the power."""
    found, of = rate_of(0.25, 20, 20)
    expected = []
    for number in range(20):
        x, z, _ = world(stream(2026, "rates", 0.25, number), 20, 0.25)
        within, _ = split(x, z)
        others = within[:, :1]
        own = within[:, 1] - others[:, 0] * (others[:, 0] @ within[:, 1]) / (others[:, 0] @ others[:, 0])
        df, shift = PEOPLE - 12, 0.25 * np.sqrt(own @ own)
        expected.append(stats.nct.sf(stats.t.ppf(0.975, df), df, shift))
    assert 0.6 < np.mean(expected) < 0.95
    # so few shuffles cost a little power (common practice puts it at one or two in a hundred)
    assert inside(found, of, float(np.mean(expected)) - 0.015), (found / of, np.mean(expected))


def test_over_a_family_of_three_at_most_one_in_twenty_has_any_false_answer() -> None:
    wrong = single = 0
    for number in range(400):
        null = null_of(*world(stream(2026, "families", number), 3, 0.0, rho=0.5), number)
        tails = ("both",) * 3
        observed, shuffled = extremeness(null.observed, tails), extremeness(null.shuffled, tails)
        wrong += bool((family_p(observed, shuffled, tails, exhaustive=null.exhaustive) <= 0.05).any())
        single += bool((p_values(observed, shuffled, exhaustive=null.exhaustive) <= 0.05).any())
    assert inside(wrong, 400, 0.05), wrong / 400
    assert single > wrong
    assert single / 400 > 0.08, "without a correction the family must err more often, or the case is void"
