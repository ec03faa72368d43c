"""The only adapter to igraph and networkx objects."""

from __future__ import annotations

import igraph
import networkx
import numpy as np
from numpy.typing import NDArray

from socibrain.networks.brain import BrainNetwork
from socibrain.networks.social import SocialNetwork

Array = NDArray[np.float64]


def ties_to_igraph(ties: Array, *, directed: bool) -> igraph.Graph:
    """Graph of every non-zero entry of ``ties`` (n, n) off the diagonal, in row order.

    Vertex i is row i.  Directed: edge i to j for entry [i, j].  Undirected: one edge per pair,
    from the upper triangle.  Edge attribute ``weight`` keeps the entries.
    Raises `ValueError` when an undirected graph is asked of asymmetric ties.

    >>> one_way = np.array([[0.0, 1.0], [0.0, 0.0]])
    >>> ties_to_igraph(one_way, directed=True).get_edgelist()
    [(0, 1)]
    """
    if directed:
        return _graph(ties, directed=True)
    if not np.array_equal(ties, ties.T):
        raise ValueError("an undirected graph needs symmetric ties")
    return weights_to_igraph(ties)


def weights_to_igraph(weights: Array) -> igraph.Graph:
    """Undirected graph of the non-zero entries above the diagonal of ``weights`` (n, n).

    Vertex i is row i; edge attribute ``weight`` keeps the entries, negative ones too.

    >>> graph = weights_to_igraph(np.array([[0.0, 0.5], [0.5, 0.0]]))
    >>> graph.get_edgelist(), graph.es["weight"]
    ([(0, 1)], [0.5])
    """
    return _graph(np.triu(weights, 1), directed=False)


def to_networkx(network: SocialNetwork) -> networkx.DiGraph[str]:
    """Who named whom as a directed graph over person ids, before any tie rule.

    Every person of the roster is a node with attributes ``answered`` and ``role``; the graph has
    attributes ``site``, ``question`` and ``rule``.  No edge leaves a person who did not answer,
    which means unknown, not nobody.
    """
    graph: networkx.DiGraph[str] = networkx.DiGraph(
        site=network.site, question=network.question, rule=network.rule
    )
    for person, answered, role in zip(network.people, network.answered, network.roles, strict=True):
        graph.add_node(person, answered=bool(answered), role=role)
    for chooser, chosen in np.argwhere(network.named):
        graph.add_edge(network.people[chooser], network.people[chosen])
    return graph


def brain_to_networkx(network: BrainNetwork) -> networkx.Graph[str]:
    """The brain network as an undirected graph over region names.

    Node attribute ``system``, edge attribute ``weight``; regions without any tie are nodes too.
    """
    graph: networkx.Graph[str] = networkx.Graph(
        source=network.source, person=network.person, visit=network.visit
    )
    names = network.regions.names
    for name, system in zip(names, network.regions.systems, strict=True):
        graph.add_node(name, system=system)
    for one, other in np.argwhere(np.triu(network.weights, 1)):
        graph.add_edge(names[one], names[other], weight=float(network.weights[one, other]))
    return graph


def _graph(weights: Array, *, directed: bool) -> igraph.Graph:
    """Edges in row order, straight from arrays: no Python loop over entries."""
    tails, heads = np.nonzero(weights)
    apart = tails != heads
    tails, heads = tails[apart], heads[apart]
    graph = igraph.Graph(n=len(weights), edges=np.column_stack((tails, heads)), directed=directed)
    graph.es["weight"] = weights[tails, heads].tolist()
    return graph
