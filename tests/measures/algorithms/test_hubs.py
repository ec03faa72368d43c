"""Hubs: participation, within-module z, roles."""

from __future__ import annotations

import numpy as np
import pytest

from socibrain.measures.algorithms.hubs import participation, roles, within_module_z


def random_case(seed: int) -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(seed)
    weights = np.triu(rng.exponential(size=(24, 24)) * (rng.random((24, 24)) < 0.5), 1)
    return weights + weights.T, rng.integers(4, size=24)


def test_participation_by_hand() -> None:
    # Vertex 0 has weight 2 to its own community and 1 to each of two others: 1 − (4 + 1 + 1)/16.
    weights = np.zeros((4, 4))
    weights[0, 1:] = weights[1:, 0] = [2.0, 1.0, 1.0]
    values = participation(weights, np.array([1, 1, 2, 3]))
    assert values.tolist() == [0.625, 0.0, 0.0, 0.0]


def test_within_module_z_by_hand() -> None:
    # Weights inside the first community: 3, 2, 1 (mean 2, SD √(2/3)); the second is a pair of equals.
    weights = np.zeros((5, 5))
    for one, other, weight in ((0, 1, 2.0), (0, 2, 1.0), (3, 4, 7.0), (2, 3, 9.0)):
        weights[one, other] = weights[other, one] = weight
    values = within_module_z(weights, np.array([1, 1, 1, 2, 2]))
    np.testing.assert_allclose(values, [1.5**0.5, 0.0, -(1.5**0.5), 0.0, 0.0], atol=1e-14)


@pytest.mark.parametrize("seed", range(4))
def test_both_agree_with_the_definitions_written_out(seed: int) -> None:
    weights, partition = random_case(seed)
    spread, z = participation(weights, partition), within_module_z(weights, partition)
    for vertex in range(len(weights)):
        total = weights[vertex].sum()
        shares = [weights[vertex, partition == label].sum() / total for label in range(4)]
        assert spread[vertex] == pytest.approx(1 - sum(share**2 for share in shares), abs=1e-13)
        mates = np.flatnonzero(partition == partition[vertex])
        inside = [weights[mate, mates].sum() for mate in mates]
        own = weights[vertex, mates].sum()
        assert z[vertex] == pytest.approx((own - np.mean(inside)) / np.std(inside), abs=1e-12)


def test_no_weight_means_no_participation() -> None:
    weights = np.zeros((3, 3))
    weights[0, 1] = weights[1, 0] = 1.0
    values = participation(weights, np.array([1, 1, 2]))
    assert np.isnan(values).tolist() == [False, False, True]
    assert within_module_z(weights, np.array([1, 1, 2])).tolist() == [0.0, 0.0, 0.0]


def test_equal_up_to_rounding_is_no_spread() -> None:
    # Every vertex has the same three weights inside, but added in different orders.
    weights = np.array([[0, 0.1, 0.2, 0.3], [0.1, 0, 0.3, 0.2], [0.2, 0.3, 0, 0.1], [0.3, 0.2, 0.1, 0]])
    weights[3, 2] = weights[2, 3] = 0.1 + 1e-16
    assert within_module_z(weights, np.ones(4, dtype=int)).tolist() == [0.0] * 4


def test_z_is_standardised_in_every_community() -> None:
    weights, partition = random_case(5)
    z = within_module_z(weights, partition)
    for label in range(4):
        assert z[partition == label].mean() == pytest.approx(0, abs=1e-12)
        assert z[partition == label].std() == pytest.approx(1, abs=1e-12)


def test_z_reaches_its_bound_in_a_star() -> None:
    star = np.zeros((8, 8))
    star[0, 1:] = star[1:, 0] = 1.0
    z = within_module_z(star, np.ones(8, dtype=int))
    assert z.max() == pytest.approx(7**0.5, rel=1e-12)


@pytest.mark.parametrize("measured", [participation, within_module_z])
def test_relabelling_permutes_and_scaling_leaves(measured) -> None:  # type: ignore[no-untyped-def]
    weights, partition = random_case(6)
    values = measured(weights, partition)
    order = np.random.default_rng(7).permutation(len(weights))
    permuted = measured(weights[np.ix_(order, order)], partition[order])
    np.testing.assert_allclose(permuted, values[order], rtol=1e-12, atol=1e-13)
    np.testing.assert_allclose(measured(weights * 1e5, partition), values, rtol=1e-12, atol=1e-13)
    np.testing.assert_allclose(measured(weights * 1e-7, partition), values, rtol=1e-12, atol=1e-13)
    np.testing.assert_allclose(measured(weights, 9 - partition), values, rtol=1e-12, atol=1e-13)


@pytest.mark.parametrize(
    ("spread", "z", "role"),
    [
        (0.0, 2.49, 1), (0.05, 0.0, 1), (0.06, 0.0, 2), (0.62, 0.0, 2), (0.63, 0.0, 3),
        (0.80, 0.0, 3), (0.81, -1.0, 4), (0.0, 2.5, 5), (0.30, 3.0, 5), (0.31, 3.0, 6),
        (0.75, 3.0, 6), (0.76, 3.0, 7),
    ],
)  # fmt: skip
def test_roles_at_the_published_thresholds(spread: float, z: float, role: int) -> None:
    assert roles(np.array([spread]), np.array([z])).tolist() == [role]


def test_rounding_moves_nobody_over_a_threshold() -> None:
    spread = np.array([0.62 + 4e-16, 0.05 + 1e-16, 0.30 + 1e-16])
    z = np.array([0.0, 0.0, 2.5 - 4e-16])
    assert roles(spread, z).tolist() == [2.0, 1.0, 5.0]


def test_no_participation_no_role() -> None:
    assert np.isnan(roles(np.array([np.nan, np.nan]), np.array([0.0, 3.0]))).all()
