"""Random networks keep degrees and dyads, reach every such network, and each equally often."""

from __future__ import annotations

from collections import Counter
from functools import cache
from itertools import combinations, product

import numpy as np
import pytest
from scipy.stats import chi2

from socibrain.measures.algorithms.rewiring import Rewired, rewire
from socibrain.streams import stream


def dense(drawn: Rewired) -> np.ndarray:
    return np.concatenate(list(drawn.networks()))


def directed(seed: int, *, people: int = 20, chance: float = 0.2) -> np.ndarray:
    ties = np.random.default_rng(seed).random((people, people)) < chance
    np.fill_diagonal(ties, False)
    return ties


def margins(ties: np.ndarray) -> np.ndarray:
    """Mutual ties, ties sent, ties received of every person."""
    mutual = ties & np.swapaxes(ties, -1, -2)
    return np.stack((mutual.sum(axis=-1), ties.sum(axis=-1), ties.sum(axis=-2)))


@cache
def all_networks_of_five() -> np.ndarray:
    """Every way in which five people can name each other, (4^10, 5, 5)."""
    states = np.array(list(product(range(4), repeat=10)), dtype=np.int8)
    networks = np.zeros((len(states), 5, 5), dtype=bool)
    for place, (i, j) in enumerate(combinations(range(5), 2)):
        networks[:, i, j] = states[:, place] % 2 == 1
        networks[:, j, i] = states[:, place] >= 2
    return networks


def every_network_like(ties: np.ndarray) -> set[bytes]:
    """All networks of five people with the same margins."""
    networks = all_networks_of_five()
    for axis in (2, 1):
        networks = networks[(networks.sum(axis=axis) == ties.sum(axis=axis - 1)).all(axis=1)]
    networks = networks[(margins(networks) == margins(ties)[:, None]).all(axis=(0, 2))]
    return {network.tobytes() for network in networks}


@pytest.mark.parametrize("symmetric", [True, False])
def test_margins_and_dyad_census_stay(*, symmetric: bool) -> None:
    ties = directed(1)
    ties = ties | ties.T if symmetric else ties
    drawn = rewire(ties, draws=200, rng=stream(1, "rewiring"))
    networks = dense(drawn)
    assert len(networks) == drawn.draws == 200
    np.testing.assert_array_equal(margins(networks), np.repeat(margins(ties)[:, None], 200, axis=1))
    assert not networks[:, np.arange(20), np.arange(20)].any()
    if symmetric:
        np.testing.assert_array_equal(networks, networks.transpose(0, 2, 1))


@pytest.mark.parametrize(
    ("text", "how_many"),
    [
        ("01 10 12 21 23 32 34 43", 7),  # a chain: mutual ties alone
        ("01 12 20", 2),  # a cycle, which exchanges cannot turn
        ("13 31 04 40 24 12 30 23 02 41", 24),  # both kinds
        ("01 12 23 34 40 02 24 41 13 30", 24),  # everyone joined to everyone, one way
    ],
)
def test_every_network_with_these_margins_is_drawn_equally_often(text: str, how_many: int) -> None:
    ties = np.zeros((5, 5), dtype=bool)
    for pair in text.split():
        ties[int(pair[0]), int(pair[1])] = True
    possible = every_network_like(ties)
    assert len(possible) == how_many
    counts = Counter(network.tobytes() for network in dense(rewire(ties, draws=4000, rng=stream(2, text))))
    assert set(counts) == possible
    share = 4000 / how_many
    statistic = sum((count - share) ** 2 / share for count in counts.values())
    assert statistic <= chi2.ppf(0.9999, how_many - 1)


def test_account_of_moved_ties_and_distinct_networks() -> None:
    ties = directed(3)
    drawn = rewire(ties, draws=50, rng=stream(3, "rewiring"))
    networks = dense(drawn)
    assert drawn.distinct == len({network.tobytes() for network in networks})
    mutual = np.triu(networks & networks.transpose(0, 2, 1))
    one_way = networks & ~networks.transpose(0, 2, 1)
    stayed = (mutual & (ties & ties.T)).sum() + (one_way & (ties & ~ties.T)).sum()
    assert drawn.moved == pytest.approx(1 - stayed / (mutual.sum() + one_way.sum()), abs=1e-12)


def test_networks_that_cannot_change() -> None:
    star = np.zeros((5, 5), dtype=bool)
    star[0, 1:] = star[1:, 0] = True
    drawn = rewire(star, draws=20, rng=stream(4, "rewiring"))
    assert (drawn.moved, drawn.distinct) == (0.0, 1)
    np.testing.assert_array_equal(dense(drawn), np.repeat(star[None], 20, axis=0))
    empty = rewire(np.zeros((3, 3), dtype=bool), draws=5, rng=stream(4, "rewiring"))
    assert np.isnan(empty.moved)
    assert dense(empty).shape == (5, 3, 3)


def test_same_stream_same_networks() -> None:
    ties = directed(5)
    one, two = (dense(rewire(ties, draws=30, rng=stream(5, "rewiring"))) for _ in range(2))
    np.testing.assert_array_equal(one, two)
    assert not np.array_equal(one, dense(rewire(ties, draws=30, rng=stream(6, "rewiring"))))
