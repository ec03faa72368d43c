"""Partitions: canonical numbers, shares together, adjusted Rand index."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from sklearn.metrics import adjusted_rand_score

from socibrain.measures.algorithms.partitions import adjusted_rand, members, numbered, together


def some_partitions(seed: int, *, n_partitions: int = 12, n: int = 30) -> np.ndarray:
    rng = np.random.default_rng(seed)
    return np.array([rng.integers(rng.integers(1, 9), size=n) for _ in range(n_partitions)])


def test_numbers_follow_size_then_first_member() -> None:
    partitions = some_partitions(1)
    for before, after in zip(partitions, numbered(partitions), strict=True):
        groups = [np.flatnonzero(before == label) for label in np.unique(before)]
        groups.sort(key=lambda group: (-len(group), group[0]))
        for number, group in enumerate(groups, start=1):
            assert (after[group] == number).all()


def test_numbers_do_not_depend_on_the_labels_used() -> None:
    partitions = some_partitions(2)
    rng = np.random.default_rng(3)
    renamed = np.array([rng.permutation(50)[partition] for partition in partitions])
    assert not np.array_equal(renamed, partitions)
    np.testing.assert_array_equal(numbered(renamed), numbered(partitions))


def test_members_sum_to_one_community_each() -> None:
    partition = np.array([5, 2, 2, 9, 5])
    belongs = members(partition)
    np.testing.assert_array_equal(belongs, [[0, 1, 0], [1, 0, 0], [1, 0, 0], [0, 0, 1], [0, 1, 0]])


def test_shares_together_count_partitions() -> None:
    partitions = some_partitions(4, n_partitions=5, n=9)
    times = np.array([1, 4, 2, 1, 7])
    expected = sum(
        count * (one[:, None] == one[None, :]) for count, one in zip(times, partitions, strict=True)
    )
    np.testing.assert_allclose(together(partitions, times), expected / 15, rtol=1e-14)


def test_adjusted_rand_agrees_with_an_independent_implementation() -> None:
    partitions = some_partitions(5)
    index = adjusted_rand(partitions)
    for one, other in itertools.product(range(len(partitions)), repeat=2):
        expected = adjusted_rand_score(partitions[one], partitions[other])
        assert index[one, other] == pytest.approx(expected, abs=1e-12)


def test_adjusted_rand_by_hand() -> None:
    # 123|45 and 12|345: 2 pairs stay together in both (12, 45), 4 in each; expected 4·4/10 = 1.6.
    index = adjusted_rand(np.array([[1, 1, 1, 2, 2], [1, 1, 2, 2, 2]]))
    assert index[0, 1] == pytest.approx((2 - 1.6) / (4 - 1.6), rel=1e-14)


@pytest.mark.parametrize("without_choice", [[1, 1, 1], [1, 2, 3]])
def test_partitions_without_choice_count_as_alike(without_choice: list[int]) -> None:
    np.testing.assert_array_equal(adjusted_rand(np.array([without_choice, without_choice])), np.ones((2, 2)))


def test_all_in_one_against_each_alone_is_chance() -> None:
    assert adjusted_rand(np.array([[1, 1, 1], [1, 2, 3]]))[0, 1] == 0.0


def test_unrelated_partitions_agree_by_chance_only() -> None:
    rng = np.random.default_rng(6)
    index = adjusted_rand(rng.integers(5, size=(60, 200)))
    off_diagonal = index[~np.eye(60, dtype=bool)]
    assert abs(off_diagonal.mean()) < 0.005
