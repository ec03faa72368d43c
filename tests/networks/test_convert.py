"""Networks handed to igraph and networkx: every edge, weight and label arrives."""

from __future__ import annotations

import networkx
import numpy as np
import pytest

from socibrain.networks.brain import BrainNetwork
from socibrain.networks.convert import brain_to_networkx, ties_to_igraph, to_networkx, weights_to_igraph
from socibrain.networks.social import SocialNetwork
from socibrain.sources.records import RegionTable
from socibrain.streams import stream


def test_directed_ties_keep_direction_and_isolates() -> None:
    ties = np.zeros((4, 4))
    ties[0, 1] = ties[1, 0] = ties[2, 1] = 1.0
    graph = ties_to_igraph(ties, directed=True)
    assert graph.vcount() == 4
    assert graph.is_directed()
    assert sorted(graph.get_edgelist()) == [(0, 1), (1, 0), (2, 1)]
    assert graph.es["weight"] == [1.0, 1.0, 1.0]


def test_undirected_ties_are_one_edge_per_pair() -> None:
    ties = np.zeros((3, 3))
    ties[0, 1] = ties[1, 0] = 1.0
    graph = ties_to_igraph(ties, directed=False)
    assert not graph.is_directed()
    assert graph.get_edgelist() == [(0, 1)]


def test_undirected_refuses_asymmetric_ties() -> None:
    ties = np.zeros((3, 3))
    ties[0, 1] = 1.0
    with pytest.raises(ValueError, match="symmetric"):
        ties_to_igraph(ties, directed=False)


def test_no_edges_is_a_graph_too() -> None:
    graph = weights_to_igraph(np.zeros((3, 3)))
    assert (graph.vcount(), graph.ecount()) == (3, 0)


def test_weights_agree_with_networkx_own_reading() -> None:
    rng = stream(4, "convert")
    weights = np.triu(rng.normal(size=(30, 30)) * (rng.random((30, 30)) < 0.4), 1)
    weights += weights.T
    graph = weights_to_igraph(weights)
    reference = networkx.from_numpy_array(weights)
    ours = {edge.tuple: edge["weight"] for edge in graph.es}
    theirs = {tuple(sorted(pair)): reference.edges[pair]["weight"] for pair in reference.edges}
    assert ours == theirs


def test_social_network_carries_people_and_their_attributes() -> None:
    named = np.array([[False, True], [False, False]])
    network = SocialNetwork(
        "A", "advice", ("007", "NA"), named, np.array([True, False]), ("crew", None), "directed"
    )
    graph = to_networkx(network)
    assert list(graph.edges) == [("007", "NA")]
    assert dict(graph.nodes["NA"]) == {"answered": False, "role": None}
    assert graph.graph == {"site": "A", "question": "advice", "rule": "directed"}


def test_brain_network_carries_regions_systems_and_weights() -> None:
    weights = np.array([[0.0, 0.25, 0.0], [0.25, 0.0, 0.0], [0.0, 0.0, 0.0]])
    network = BrainNetwork("rest", "007", "1", RegionTable(("r1", "r2", "r3"), ("s", "s", "t")), weights, 0.1)
    graph = brain_to_networkx(network)
    assert list(graph.edges(data="weight")) == [("r1", "r2", 0.25)]
    assert graph.nodes["r3"] == {"system": "t"}
