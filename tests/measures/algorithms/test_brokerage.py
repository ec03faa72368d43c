"""Brokerage roles against counting by hand and by a triple loop, and their expectation."""

from __future__ import annotations

from itertools import permutations

import numpy as np
import pytest

from socibrain.measures.algorithms.brokerage import ROLES, UNKNOWN, expected_role_counts, role_counts


def by_triple_loop(ties: np.ndarray, classes: np.ndarray) -> np.ndarray:
    """The definition, word by word."""
    counts = np.zeros((len(ROLES), len(ties)))
    for a, v, c in permutations(range(len(ties)), 3):
        if not ties[a, v] or not ties[v, c] or ties[a, c] or UNKNOWN in classes[[a, v, c]]:
            continue
        source, broker, target = classes[[a, v, c]]
        if source == broker == target:
            role = "coordinator"
        elif source == target:
            role = "itinerant"
        elif broker == target:
            role = "gatekeeper"
        elif source == broker:
            role = "representative"
        else:
            role = "liaison"
        counts[ROLES.index(role), v] += 1
    counts[:, classes == UNKNOWN] = np.nan
    return counts


def random_networks(seed: int, *, networks: int, people: int, chance: float) -> np.ndarray:
    ties = np.random.default_rng(seed).random((networks, people, people)) < chance
    ties[:, np.arange(people), np.arange(people)] = False
    return ties


@pytest.mark.parametrize("chance", [0.0, 0.1, 0.4, 1.0])
def test_agrees_with_a_triple_loop(chance: float) -> None:
    ties = random_networks(1, networks=4, people=12, chance=chance)
    classes = np.array([0, 1, 2, UNKNOWN] * 3)
    counts = role_counts(ties, classes)
    for place, network in enumerate(ties):
        np.testing.assert_array_equal(counts[:, place], by_triple_loop(network, classes))


def test_every_open_path_has_exactly_one_role() -> None:
    ties = random_networks(2, networks=3, people=15, chance=0.2)
    paths = ties.astype(int)
    within = np.einsum("mav,mvc->mavc", paths, paths) * ~ties[:, :, None, :]
    open_paths = within.sum(axis=(1, 3)) - np.einsum("mav,mva->mv", paths, paths)
    np.testing.assert_array_equal(role_counts(ties, np.arange(15) % 4).sum(axis=0), open_paths)


def test_turning_all_ties_round_exchanges_gatekeepers_and_representatives() -> None:
    ties = random_networks(3, networks=2, people=15, chance=0.2)
    classes = np.arange(15) % 3
    turned = role_counts(ties.transpose(0, 2, 1), classes)
    np.testing.assert_array_equal(turned[[0, 1, 3, 2, 4]], role_counts(ties, classes))


def test_expectation_matches_random_networks() -> None:
    """30,000 directed networks of 7 people in classes of 4, 2 and 1, density .3."""
    classes = np.array([0, 0, 0, 0, 1, 1, 2])
    counts = role_counts(random_networks(4, networks=30_000, people=7, chance=0.3), classes)
    error = counts.std(axis=1) / np.sqrt(30_000)
    expected = expected_role_counts(classes, density=0.3)
    assert (np.abs(counts.mean(axis=1) - expected) <= 4.5 * error).all()


def test_expectation_sums_to_all_ordered_pairs_of_others() -> None:
    classes = np.array([0] * 5 + [1] * 3 + [2] * 2 + [UNKNOWN])
    total = expected_role_counts(classes, density=0.4).sum(axis=0)
    np.testing.assert_allclose(total[:-1], 0.4**2 * 0.6 * 9 * 8, rtol=1e-12)
    assert np.isnan(total[-1])


def test_nobody_has_a_role_without_classes() -> None:
    ties = random_networks(5, networks=1, people=5, chance=0.5)
    assert np.isnan(role_counts(ties, np.full(5, UNKNOWN))).all()
    assert np.isnan(expected_role_counts(np.full(5, UNKNOWN), density=0.5)).all()
