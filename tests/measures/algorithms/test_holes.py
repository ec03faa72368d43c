"""Structural holes by hand, against an independent library and by their properties."""

from __future__ import annotations

import networkx
import numpy as np
import pytest
from scipy import sparse

from socibrain.measures.algorithms.holes import constraint, effective_size


def of(ties: np.ndarray) -> sparse.csr_array:
    return sparse.csr_array(ties.astype(np.float64))


def random_network(seed: int, *, directed: bool, weighted: bool) -> np.ndarray:
    rng = np.random.default_rng(seed)
    ties = (rng.random((25, 25)) < 0.12) * (rng.integers(1, 6, (25, 25)) if weighted else 1)
    np.fill_diagonal(ties, 0)
    return ties.astype(np.float64) if directed else (np.triu(ties) + np.triu(ties).T).astype(np.float64)


KINDS = pytest.mark.parametrize(
    ("directed", "weighted"), [(False, False), (False, True), (True, False), (True, True)]
)


@KINDS
def test_constraint_agrees_with_an_independent_library(*, directed: bool, weighted: bool) -> None:
    """Over all nodes at once: asked node by node, networkx leaves in-neighbours of sinks out."""
    for seed in range(10):
        ties = random_network(seed, directed=directed, weighted=weighted)
        graph = networkx.from_numpy_array(ties, create_using=networkx.DiGraph if directed else networkx.Graph)
        reference = networkx.constraint(graph, weight="weight")
        np.testing.assert_allclose(constraint(of(ties)), [reference[node] for node in range(25)], rtol=1e-12)


@KINDS
def test_effective_size_agrees_with_an_independent_library(*, directed: bool, weighted: bool) -> None:
    """Node by node: over all nodes at once networkx divides by the maximum of q, not of j.

    Node by node it calls a person who named nobody undefined, so those are not compared.
    """
    for seed in range(10):
        ties = random_network(seed, directed=directed, weighted=weighted)
        graph = networkx.from_numpy_array(ties, create_using=networkx.DiGraph if directed else networkx.Graph)
        reference = networkx.effective_size(graph, nodes=list(graph), weight="weight")
        compared = ties.any(axis=1)
        assert compared.sum() > 15
        theirs = np.array([reference[node] for node in range(25)])
        np.testing.assert_allclose(effective_size(of(ties))[compared], theirs[compared], rtol=1e-12)


def test_three_people_with_weights_by_hand() -> None:
    """0–1 weighs 3, 0–2 weighs 1, 1–2 weighs 1 (one way each).

    Shares: p01 3/4, p02 1/4, p12 1/4, p10 3/4, p20 = p21 1/2.  Constraint of 0:
    (3/4 + 1/4·1/2)² + (1/4 + 3/4·1/4)² = .765625 + .19140625.
    Effective size of 0: contact 1 shares p02·m12 = 1/4·1/3, contact 2 shares p01·m21 = 3/4·1.
    """
    ties = np.array([[0, 3, 1], [0, 0, 1], [0, 0, 0]])
    assert constraint(of(ties))[0] == pytest.approx(0.95703125, abs=1e-15)
    assert effective_size(of(ties))[0] == pytest.approx(2 - 1 / 12 - 3 / 4, abs=1e-15)


def test_isolates_and_empty_networks_are_undefined() -> None:
    assert np.isnan(constraint(of(np.zeros((3, 3))))).all()
    assert np.isnan(effective_size(of(np.zeros((3, 3))))).all()


def test_constraint_above_one_is_possible() -> None:
    triangle = np.triu(np.ones((3, 3)), 1)
    np.testing.assert_allclose(constraint(of(triangle)), 1.125)


def test_direction_relabelling_and_scale_change_nothing() -> None:
    ties = random_network(3, directed=True, weighted=True)
    order = np.random.default_rng(0).permutation(25)
    for measure in (constraint, effective_size):
        plain = measure(of(ties))
        np.testing.assert_allclose(measure(of(ties.T)), plain, rtol=1e-12)
        np.testing.assert_allclose(measure(of(7 * ties)), plain, rtol=1e-12)
        np.testing.assert_allclose(measure(of(ties[np.ix_(order, order)])), plain[order], rtol=1e-12)


def test_stored_zeros_are_no_contacts() -> None:
    ties = sparse.csr_array((np.array([1.0, 0.0]), (np.array([0, 0]), np.array([1, 2]))), shape=(3, 3))
    assert np.isnan(constraint(ties)[2])
    assert effective_size(ties)[0] == 1.0
