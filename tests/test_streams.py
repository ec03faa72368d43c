"""Random streams depend on seed and address alone."""

from __future__ import annotations

import hashlib

import numpy as np
import pytest
from scipy import stats

from socibrain.streams import address, small_seed, stream


def test_the_address_is_the_hash_it_says_it_is() -> None:
    text = "7\x1fmodules\x1fsub-01\x1f3"
    by_hand = int.from_bytes(hashlib.blake2b(text.encode(), digest_size=16).digest(), "big")
    assert address(7, "modules", "sub-01", 3) == by_hand
    assert 0 <= by_hand < 2**128


def test_numbers_of_a_stream_stay_the_same_from_release_to_release() -> None:
    assert stream(7, "shuffle", 3).integers(10**9, size=3).tolist() == [766085746, 214849262, 971145318]


def test_order_and_number_of_calls_do_not_matter() -> None:
    alone = stream(7, "b").random(5)
    stream(7, "a").random(100)
    np.testing.assert_array_equal(stream(7, "b").random(5), alone)


@pytest.mark.parametrize(
    "other", [(8, "a", "b"), (7, "b", "a"), (7, "ab"), (7, "a", "b", ""), (7, "a"), (7, "a", "B")]
)
def test_every_part_of_an_address_counts(other: tuple[int, str]) -> None:
    assert address(*other) != address(7, "a", "b")
    assert stream(*other).integers(2**62) != stream(7, "a", "b").integers(2**62)


def test_small_seeds_fit_31_bits_and_spread_evenly() -> None:
    seeds = np.array([small_seed(1, "restart", number) for number in range(2000)])
    assert seeds.min() >= 0
    assert seeds.max() < 2**31
    assert len(set(seeds.tolist())) == 2000
    assert stats.kstest(seeds / 2**31, "uniform").pvalue > 0.001


def test_neighbouring_addresses_are_unrelated() -> None:
    first = np.array([stream(1, "task", number).standard_normal() for number in range(2000)])
    assert stats.kstest(first, "norm").pvalue > 0.001
    assert abs(np.corrcoef(first[:-1], first[1:])[0, 1]) < 4 / np.sqrt(2000)
