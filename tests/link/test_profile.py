"""The profile of the variance ratio: by hand, by brute force, at its limits."""

import numpy as np
import pytest

from socibrain.link.profile import FLOOR, Contrasts, Profile


def brute(sizes, squares, freedom, within):
    """Best ratio over a grid a hundred times finer than the profile's own, and its height."""
    s = np.linspace(0, 25, 200_001)
    ratio = np.expm1(s) / sizes.max()
    spread = 1 + ratio[:, None] * sizes
    height = freedom * np.log(within + (squares / spread).sum(1)) + np.log(spread).sum(1)
    return ratio[height.argmin()], height.min()


def test_balanced_sites_have_the_closed_form_of_the_analysis_of_variance() -> None:
    # 5 sites of 4: E(mean square between) = σ² + 4τ²; 4 and 15 degrees of freedom
    squares = np.array([9.0, 1.0, 4.0, 6.0])
    profile = Profile([Contrasts(np.full(4, 4.0), squares, 19, 30.0)])
    within = np.array([[30.0], [7.5], [75.0], [80.0]])
    between_mean, within_mean = squares.sum() / 4, within[:, 0] / 15
    expected = np.maximum((between_mean / within_mean - 1) / 4, 0)
    assert expected[2] == 0
    assert expected[3] == 0
    np.testing.assert_allclose(profile.best(within)[:, 0], expected, rtol=1e-9, atol=1e-12)


@pytest.mark.parametrize("seed", range(6))
def test_unequal_sites_agree_with_a_fine_grid(seed: int) -> None:
    draw = np.random.default_rng(seed)
    models = []
    for _ in range(4):
        sizes = draw.uniform(0.5, 60, draw.integers(1, 12))
        squares = draw.chisquare(1, sizes.size) * (1 + draw.gamma(1) * sizes)
        models.append(Contrasts(sizes, squares, 80, 160.0))
    within = draw.uniform(5, 160, (5, 4))
    found = Profile(models).best(within)
    for model, contrasts in enumerate(models):
        for row in range(5):
            args = contrasts.sizes, contrasts.squares, contrasts.freedom, within[row, model]
            ratio, height = brute(*args)
            spread = 1 + found[row, model] * contrasts.sizes
            here = 80 * np.log(within[row, model] + (contrasts.squares / spread).sum()) + np.log(spread).sum()
            assert here <= height + 1e-9
            assert found[row, model] == pytest.approx(ratio, rel=1e-3, abs=1e-6)


def test_of_two_minima_the_lower_one_is_taken() -> None:
    # one large quiet site and one small loud one pull the ratio to different places
    sizes, squares, freedom = np.array([400.0, 400.0, 400.0, 0.5]), np.array([0.3, 0.3, 0.3, 60.0]), 6
    profile = Profile([Contrasts(sizes, squares, freedom, 2.0)])
    within = np.linspace(0.2, 2.0, 10)[:, None]
    found = profile.best(within)[:, 0]
    twice = 0
    s = np.linspace(0, 25, 20_001)
    spread = 1 + (np.expm1(s) / 400)[:, None] * sizes
    for row, r in enumerate(within[:, 0]):
        height = freedom * np.log(r + (squares / spread).sum(1)) + np.log(spread).sum(1)
        padded = np.concatenate([[np.inf], height])
        twice += ((padded[1:-1] < padded[:-2]) & (padded[1:-1] < padded[2:])).sum() > 1
        at = 1 + found[row] * sizes
        here = freedom * np.log(r + (squares / at).sum()) + np.log(at).sum()
        assert here <= height.min() + 1e-9
    assert twice > 0, "the case has lost its second minimum"


def test_an_entry_depends_on_its_own_sum_of_squares_alone() -> None:
    draw = np.random.default_rng(3)
    model = Contrasts(draw.uniform(2, 30, 8), draw.chisquare(1, 8) * 20, 100, 200.0)
    within = draw.uniform(10, 200, (300, 1))
    profile = Profile([model])
    together = profile.best(within)
    alone = np.array([profile.best(within[row : row + 1])[0] for row in range(300)])
    assert np.array_equal(together, alone)
    beside = Profile([model, Contrasts(np.array([3.0]), np.array([50.0]), 90, 200.0)])
    padded = beside.best(np.column_stack([within[:, 0], within[:, 0]]))[:, :1]
    np.testing.assert_allclose(padded, together, rtol=1e-8, atol=1e-12)


def test_limits() -> None:
    model = Contrasts(np.array([4.0, 6.0]), np.array([30.0, 50.0]), 20, 10.0)
    ratio = Profile([model]).best(np.array([[0.0], [FLOOR * 10.0], [1e9]]))[:, 0]
    assert ratio[0] == ratio[1] > 1e6  # nothing left within sites: as at the floor
    assert ratio[2] == 0
    empty = Profile([Contrasts(np.empty(0), np.empty(0), 20, 10.0)])
    assert empty.best(np.array([[5.0]])).tolist() == [[0.0]]
    assert empty.between(np.array([[0.0]])).tolist() == [[0.0]]
