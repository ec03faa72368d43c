"""Rich club by hand, its p where there is no club, and its members where there is one."""

from __future__ import annotations

import networkx
import numpy as np
import pytest
from scipy.stats import binom

from socibrain.measures.algorithms.rewiring import rewire
from socibrain.measures.algorithms.rich_club import RichClub, rich_club, rich_club_density
from socibrain.streams import stream
from tests.measures.made_sites import planted_club, random_ties


def club_of(ties: np.ndarray, *, draws: int = 199, seed: int = 1, level: float = 0.05) -> RichClub:
    drawn = rewire(ties, draws=draws, rng=stream(seed, "club"))
    return rich_club(ties, drawn.mutual, level=level, fewest=3)


def test_density_agrees_with_an_independent_library() -> None:
    for seed in range(5):
        ties = random_ties(seed, people=30)
        levels, density = rich_club_density(ties)
        reference = networkx.rich_club_coefficient(networkx.from_numpy_array(ties), normalized=False)
        assert {k: pytest.approx(reference[k], abs=1e-12) for k in reference} == dict(
            zip(levels.tolist(), density.tolist(), strict=True)
        )


def test_curve_by_hand() -> None:
    """Observed: 0, 1, 2 are tied in a triangle, and each to one of 3, 4, 5: degrees 3 3 3 1 1 1.

    Two draws are the same again; in the third 0–1, 1–2, 0–3, 0–4, 2–5, 2–3 two of three ties stay.
    k = 0: 6 ties of 15 possible, always.  k = 1, 2: three people, 3 of 3 ties observed, 2 in one draw,
    3 in the other two.  Over all four curves: mean 11/4, SD √(3)/4, deviation (1/4)/(√3/4) = 1/√3.
    Two of three draws are as extreme: p = 3/4.
    """
    ties = np.zeros((6, 6), dtype=bool)
    pairs = [(0, 1), (0, 2), (1, 2), (0, 3), (1, 4), (2, 5)]
    for a, b in pairs:
        ties[a, b] = ties[b, a] = True
    other = [(0, 1), (1, 2), (0, 3), (0, 4), (2, 5), (2, 3)]
    drawn = np.array([pairs, pairs, other])
    club = rich_club(ties, drawn, level=0.05, fewest=3)
    assert club.levels.tolist() == [0, 1, 2]
    np.testing.assert_allclose(club.density, [6 / 15, 1.0, 1.0])
    np.testing.assert_allclose(club.ratio, [1.0, 9 / 8, 9 / 8])
    np.testing.assert_allclose(club.deviation, [np.nan, 3**-0.5, 3**-0.5])
    assert club.p == 0.75
    assert np.isnan(club.from_degree)


def test_members_lie_above_the_lower_end_of_the_run_around_the_maximum() -> None:
    """The rule walked through level by level, on curves counted tie by tie."""
    ties = planted_club(2)
    found = club_of(ties, draws=999)
    drawn = rewire(ties, draws=999, rng=stream(1, "club")).mutual
    degrees = ties.sum(axis=1)
    curves = []
    for pairs in (np.argwhere(np.triu(ties)), *drawn):
        poorer = degrees[pairs].min(axis=1)
        curves.append([(poorer > k).sum() for k in found.levels])
    counts = np.array(curves, dtype=float)
    keep = counts.std(axis=0) > 0
    z = (counts[:, keep] - counts[:, keep].mean(axis=0)) / counts[:, keep].std(axis=0)
    largest = z.max(axis=1)
    p_by_level = np.array([(largest >= value - 1e-9).mean() for value in z[0]])
    levels = found.levels[keep]
    place = int(z[0].argmax())
    while place > 0 and p_by_level[place - 1] <= 0.05 and levels[place - 1] == levels[place] - 1:
        place -= 1
    assert found.p == pytest.approx(p_by_level.min(), abs=1e-12)
    assert found.from_degree == degrees[degrees > levels[place]].min()


def test_p_is_valid_among_networks_that_are_alike_by_design() -> None:
    """1,500 networks, each ranked among 39 others with the same degrees (99.95 % bound).

    Small networks have few different curves, so ties make the p conservative: hence a wide lower bound.
    """
    p = []
    for seed in range(5):
        ties = random_ties(seed, people=14, chance=0.3)
        pairs = rewire(ties, draws=300 * 40, rng=stream(seed, "alike")).mutual.reshape(300, 40, -1, 2)
        for own, *others in pairs:
            dense = np.zeros((14, 14), dtype=bool)
            dense[own[:, 0], own[:, 1]] = dense[own[:, 1], own[:, 0]] = True
            p.append(rich_club(dense, np.array(others), level=0.05, fewest=3).p)
    p_values = np.array(p)
    for level in (0.05, 0.2, 0.5):
        rejected = int((p_values <= level).sum())
        assert level / 4 * len(p) < rejected <= binom.ppf(0.9995, len(p), level)


def test_p_is_valid_on_random_networks() -> None:
    """120 random networks from start to end: no more rejections than chance allows (99.9 %)."""
    found = [club_of(random_ties(seed, people=10, chance=0.3), draws=39, seed=seed).p for seed in range(120)]
    p = np.array(found)[~np.isnan(found)]
    assert len(p) > 100
    for level in (0.05, 0.2):
        assert (p <= level).sum() <= binom.ppf(0.999, len(p), level)


def test_planted_club_is_found() -> None:
    for seed in range(4):
        ties = planted_club(seed)
        club = club_of(ties)
        assert club.p <= 0.05
        assert (ties.sum(axis=1)[:9] >= club.from_degree).all()


def test_fewest_members_bound_the_curve() -> None:
    ties = planted_club(5)
    degrees = ties.sum(axis=1)
    for fewest in (2, 3, 5):
        levels, _ = rich_club_density(ties, fewest=fewest)
        assert (degrees > levels[-1]).sum() >= fewest > (degrees > levels[-1] + 1).sum()


def test_nothing_to_compare() -> None:
    ring = np.roll(np.eye(6, dtype=bool), 1, axis=1)
    empty = np.zeros((4, 4), dtype=bool)
    for ties in (ring | ring.T, empty):
        club = club_of(ties)
        assert np.isnan(club.p)
        assert np.isnan(club.from_degree)
