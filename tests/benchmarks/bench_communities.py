"""Times the search for communities against bare igraph calls."""

from __future__ import annotations

from functools import partial

import igraph
import numpy as np

from socibrain.measures.algorithms.communities import find_communities, leiden
from tests.benchmarks.pairing import Result, compare

RESTARTS = 50
N_SYSTEMS = 8


def correlations(n: int) -> np.ndarray:
    """Dense weights such as scans give: correlations of noisy series, negative ones dropped."""
    rng = np.random.default_rng(n)
    systems = np.arange(n) % N_SYSTEMS
    series = rng.standard_normal((n, 150)) + 0.45 * rng.standard_normal((N_SYSTEMS, 150))[systems]
    weights = np.maximum(np.corrcoef(series), 0.0)
    np.fill_diagonal(weights, 0.0)
    return weights


def graph_of(weights: np.ndarray) -> igraph.Graph:
    """The graph that the bare calls search, made before the clock starts; weights of mean 1."""
    return igraph.Graph.Weighted_Adjacency(weights / weights[weights > 0].mean(), mode="upper")


def bare(graph: igraph.Graph) -> list[list[int]]:
    """The same calls with nothing around them."""
    return [
        graph.community_leiden(objective_function="modularity", weights="weight", n_iterations=-1).membership
        for _ in range(RESTARTS)
    ]


def run() -> list[Result]:
    """The search alone, and with the consensus, which searches again where restarts differ."""
    results = []
    for n in (80, 200):
        weights = correlations(n)
        calls = partial(bare, graph_of(weights))
        options = {"resolution": 1.0, "restarts": RESTARTS, "seed": 1}
        seeking = partial(leiden, weights, **options)
        finding = partial(find_communities, weights, **options)
        against = f"{RESTARTS} bare igraph calls"
        results += [
            compare(f"{RESTARTS} restarts, {n} dense regions", seeking, calls, against=against, goal=1.5),
            compare(
                f"with consensus and agreement, counted apart, {n}", finding, calls, against=against, goal=2.0
            ),
        ]
    return results
