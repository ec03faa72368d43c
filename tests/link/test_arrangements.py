"""Orders within sites: counted by hand, complete, uniform."""

from itertools import permutations
from math import factorial

import numpy as np
from scipy import stats

from socibrain.link.arrangements import (
    BLOCK,
    alike_within,
    count_distinct,
    every_distinct,
    inverted,
    shuffled,
)
from socibrain.streams import stream

SITES = np.array([0, 0, 0, 1, 1, 2])


def test_random_orders_are_permutations_that_stay_within_sites() -> None:
    sites = np.repeat(np.arange(7), [5, 1, 30, 2, 17, 9, 3])
    orders = shuffled(stream(1, "a"), sites)
    assert orders.shape == (BLOCK, 67)
    assert np.array_equal(np.sort(orders, axis=1), np.broadcast_to(np.arange(67), orders.shape))
    assert np.array_equal(sites[orders], np.broadcast_to(sites, orders.shape))


def test_random_orders_are_uniform() -> None:
    orders = np.vstack([shuffled(stream(5, "uniform", block), SITES) for block in range(12)])
    counts = np.unique(orders, axis=0, return_counts=True)[1]
    assert counts.size == 12  # 3! times 2!
    assert stats.chisquare(counts).pvalue > 1e-4


def test_distinct_arrangements_are_all_there_once() -> None:
    classes = np.array([0, 1, 0, 2, 3, 4])
    orders = np.vstack(list(every_distinct(classes, SITES)))
    seen = {tuple(classes[order]) for order in orders}
    wanted = {(*first, *second, 4) for first in permutations((0, 1, 0)) for second in permutations((2, 3))}
    assert seen == wanted
    assert len(orders) == len(wanted) == count_distinct(classes, SITES) == 6
    assert np.array_equal(np.sort(orders, axis=1), np.broadcast_to(np.arange(6), orders.shape))
    assert np.array_equal(SITES[orders], np.broadcast_to(SITES, orders.shape))


def test_a_rare_class_among_many_people_is_quick_to_go_through() -> None:
    classes = np.r_[0, np.ones(1199)].astype(int)
    blocks = list(every_distinct(classes, np.zeros(1200, dtype=int)))
    assert sum(map(len, blocks)) == 1200
    assert {int(np.flatnonzero(classes[order] == 0)[0]) for block in blocks for order in block} == set(
        range(1200)
    )


def test_counts_by_hand() -> None:
    assert count_distinct(np.arange(7), np.zeros(7, dtype=int)) == 5040
    assert count_distinct(np.arange(7), np.array([0, 0, 0, 0, 1, 1, 1])) == 144
    assert count_distinct(np.r_[np.zeros(5), np.ones(5)].astype(int), np.zeros(10, dtype=int)) == 252
    assert count_distinct(np.arange(200), np.zeros(200, dtype=int)) == factorial(200)


def test_alike_forgives_rounding_and_never_crosses_sites() -> None:
    rows = np.array([[0.3, 1e6], [0.1 + 0.2, 1e6], [0.3, 1e6 + 1], [0.3, 1e6], [-0.0, 0.0], [0.0, 0.0]])
    classes = alike_within(rows, np.array([0, 0, 0, 1, 1, 1]))
    assert classes[0] == classes[1] != classes[2]
    assert classes[3] != classes[0]
    assert classes[4] == classes[5]


def test_inverted_undoes() -> None:
    orders = shuffled(stream(2, "b"), SITES)
    both = np.take_along_axis(orders, inverted(orders), axis=1)
    assert np.array_equal(both, np.broadcast_to(np.arange(6), orders.shape))
