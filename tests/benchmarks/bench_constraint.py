"""Constraint of everyone in a large network against a graph library's own."""

from __future__ import annotations

import igraph
import numpy as np
from scipy import sparse

from socibrain.measures.algorithms.holes import constraint
from tests.benchmarks.pairing import Result, compare

PEOPLE, TIES = 1_000, 8_000


def run() -> list[Result]:
    """Each side starts from ties in its own sparse form."""
    rng = np.random.default_rng(1)
    rows, columns = np.triu_indices(PEOPLE, 1)
    chosen = rng.choice(len(rows), TIES, replace=False)
    pairs = np.stack((rows[chosen], columns[chosen]), axis=1)
    graph = igraph.Graph(n=PEOPLE, edges=pairs)
    both = np.concatenate((pairs, pairs[:, ::-1]))
    ties = sparse.csr_array((np.ones(len(both)), (both[:, 0], both[:, 1])), shape=(PEOPLE, PEOPLE))
    np.testing.assert_allclose(constraint(ties), graph.constraint(), rtol=1e-10)
    return [
        compare(
            f"constraint, {PEOPLE} people, {TIES} ties",
            lambda: constraint(ties),
            graph.constraint,
            against="igraph's own constraint",
            goal=3.0,
            rounds=51,
        )
    ]
