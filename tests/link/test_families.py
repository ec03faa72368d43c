"""p-values, alone and over a family."""

import numpy as np
import pytest
from scipy import stats

from socibrain.link.families import extremeness, family_p, p_values, smallest_p


def made(seed: int, hypotheses: int = 4, shuffles: int = 499):
    draw = np.random.default_rng(seed)
    shared = draw.normal(size=(shuffles + 1, 1))
    values = np.abs(0.7 * shared + draw.normal(size=(shuffles + 1, hypotheses)))
    return values[0] + np.arange(hypotheses) * 0.7, values[1:]


def test_phipson_smyth_upper_bound_holds_above_the_exact_value() -> None:
    """b = 0 in m = 99 of 252: upper .01; the exact p is .0081454631 (tests/references/freedman_lane)."""
    upper = p_values(np.array([9.0]), np.zeros((99, 1)), exhaustive=False)[0]
    exact = stats.binom.cdf(0, 99, np.arange(1, 253) / 252).mean()
    assert upper == pytest.approx(0.01)
    assert exact == pytest.approx(0.0081454631, abs=5e-11)
    assert exact < upper


def test_exhaustive_p_counts_the_observed_once() -> None:
    null = np.arange(1.0, 21.0)[:, None]
    assert p_values(np.array([20.0]), null, exhaustive=True).tolist() == [0.05]


def test_ties_count_within_rounding_and_not_beyond() -> None:
    null = np.array([[3.0 * (1 - 1e-10)], [3.0 * (1 - 1e-6)], [1.0]])
    assert p_values(np.array([3.0]), null, exhaustive=False).tolist() == [0.5]


def test_smallest_p_of_a_two_sided_symmetric_null_is_twice_one_over_all() -> None:
    null = extremeness(np.array([[-2.0], [-1.0], [1.0], [2.0]]), ("both",))
    assert smallest_p(np.array([1.0]), null, exhaustive=True).tolist() == [0.5]
    assert smallest_p(np.array([1.0]), np.zeros((99, 1)), exhaustive=False).tolist() == [0.01]


@pytest.mark.parametrize("seed", range(5))
def test_step_down_lies_between_alone_and_single_step(seed: int) -> None:
    observed, null = made(seed)
    alone = p_values(observed, null, exhaustive=False)
    together = family_p(observed, null, ("both",) * 4, exhaustive=False)
    largest = np.repeat(null.max(axis=1, keepdims=True), 4, axis=1)
    single = p_values(observed, largest, exhaustive=False)
    assert np.all(alone <= together)
    assert np.all(together <= single)
    assert together[observed.argmax()] == single[observed.argmax()]
    assert np.all(np.diff(together[np.argsort(-observed)]) >= 0)
    assert np.any(together < single)


def test_step_down_by_hand() -> None:
    null = np.array([[1.0, 5.0, 0.0], [4.0, 0.0, 2.0], [0.0, 1.0, 0.0], [2.5, 0.0, 0.0]])
    # 4.5 against max of all: 1 of 4; 3 against max of the first and last: 1 of 4; 1 against the last: 1 of 4
    found = family_p(np.array([3.0, 4.5, 1.0]), null, ("both",) * 3, exhaustive=False)
    assert found.tolist() == [0.4, 0.4, 0.4]
    # 2.2 lets the fourth shuffle in as well
    found = family_p(np.array([2.2, 4.5, 1.0]), null, ("both",) * 3, exhaustive=False)
    assert found.tolist() == [0.6, 0.4, 0.6]


def test_a_family_of_one_is_its_own_p() -> None:
    observed, null = made(1, 1)
    assert family_p(observed, null, ("upper",), exhaustive=False) == p_values(
        observed, null, exhaustive=False
    )


def test_a_mixed_family_compares_ranks() -> None:
    """The scale of one member's statistics must not matter once sides are mixed."""
    observed, null = made(3, 3)
    tails = ("both", "upper", "both")
    scaled = np.array([1.0, 1000.0, 1.0])
    first = family_p(observed, null, tails, exhaustive=False)
    second = family_p(observed * scaled, null * scaled, tails, exhaustive=False)
    assert np.array_equal(first, second)
    assert np.all(first >= p_values(observed, null, exhaustive=False))


def test_extremeness_follows_the_tail() -> None:
    t = np.array([[-3.0, -3.0, -3.0], [1.0, 1.0, 1.0]])
    assert extremeness(t, ("both", "upper", "lower")).tolist() == [[3, -3, 3], [1, 1, -1]]
