"""Brokerage roles against outside counts; see passport.md."""

from __future__ import annotations

import networkx
import numpy as np

from socibrain.measures.algorithms.brokerage import ROLES
from socibrain.measures.catalogue import find_measure
from socibrain.measures.social.at_hand import SiteAtHand
from tests.measures.made_sites import site_of


def all_roles(site: SiteAtHand) -> np.ndarray:
    """Counts, (5, n), in the order of the passport."""
    assert ROLES == ("coordinator", "itinerant", "gatekeeper", "representative", "liaison")
    return np.array([find_measure(role).function(site) for role in ROLES])


def test_three_classes() -> None:
    named = np.zeros((6, 6), dtype=bool)
    for source, target in [(0, 1), (1, 2), (3, 1), (1, 4), (5, 1), (1, 5)]:
        named[source, target] = True
    counts = all_roles(site_of(named, roles=tuple("XXXYYZ")))
    assert counts[:, 1].tolist() == [1, 1, 2, 2, 2]
    assert not counts[:, [0, 2, 3, 4]].any()
    assert counts[:, 5].tolist() == [0, 0, 0, 0, 0]


def test_karate_club() -> None:
    graph = networkx.karate_club_graph()
    clubs = tuple(graph.nodes[node]["club"] for node in graph)
    counts = all_roles(site_of(networkx.to_numpy_array(graph, weight=None), rule="either", roles=clubs))
    assert counts[:, 0].tolist() == [174, 0, 15, 15, 0]
    assert counts[:, 33].tolist() == [156, 6, 40, 40, 0]
    assert counts.sum(axis=1).tolist() == [510, 20, 128, 128, 0]
