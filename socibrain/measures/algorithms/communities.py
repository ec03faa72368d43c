"""Communities of a weighted network, sought many times."""

from __future__ import annotations

import random
from dataclasses import dataclass

import igraph
import numpy as np
from numpy.typing import NDArray

from socibrain.measures.algorithms.partitions import adjusted_rand, members, numbered, together
from socibrain.networks.convert import weights_to_igraph
from socibrain.streams import small_seed

Array = NDArray[np.float64]
Labels = NDArray[np.int64]

TOGETHER_ENOUGH = 0.5
"""Pairs that share a community in fewer restarts than this share are cut before the next round."""
MOST_ROUNDS = 20
"""Rounds after which a consensus that has not settled is ended."""
SAME_QUALITY = 1e-12
"""Qualities that differ by no more than this are the same quality."""


@dataclass(frozen=True)
class Communities:
    """What all restarts found; read-only arrays.

    Communities are numbered from 1: by decreasing size, then by their first member.
    ``best`` (n,) is the partition of highest modularity ``best_quality`` (the first restart among
    equals), ``qualities`` (n_restarts,) what each restart reached.  ``consensus`` (n,) is the
    partition that the restarts settle on, of modularity ``consensus_quality``.  ``agreement`` is the
    mean adjusted Rand index over pairs of restarts: 1 = all alike, 0 = as alike as by chance.
    """

    best: Labels
    best_quality: float
    qualities: Array
    consensus: Labels
    consensus_quality: float
    agreement: float


def find_communities(weights: Array, *, resolution: float, restarts: int, seed: int) -> Communities:
    """Communities of ``weights`` (n, n): symmetric, non-negative, zero diagonal.

    Leiden (Traag, Waltman & van Eck 2019) for modularity at ``resolution``, run to stability from
    ``restarts`` (at least 2) random starts; each start has its own stream, so one more restart
    changes none of the others.  Consensus after Lancichinetti & Fortunato (2012), see `consensus_of`.
    Qualities are NaN where the network has no weight at all; each vertex is then on its own.
    Raises `ValueError` for fewer than 2 restarts.

    >>> trio = np.ones((3, 3)) - np.eye(3)
    >>> two_trios = np.kron(np.eye(2), trio)
    >>> found = find_communities(two_trios, resolution=1.0, restarts=5, seed=1)
    >>> found.best.tolist(), found.best_quality, found.agreement
    ([1, 1, 1, 2, 2, 2], 0.5, 1.0)
    """
    if restarts < 2:
        raise ValueError(f"agreement among restarts needs at least 2 of them, not {restarts}")
    partitions = leiden(weights, resolution=resolution, restarts=restarts, seed=seed)
    distinct, which, times = np.unique(partitions, axis=0, return_inverse=True, return_counts=True)
    qualities = np.array([modularity_of(weights, one, resolution=resolution) for one in distinct])[which]
    first_best = int(np.argmax(qualities >= qualities.max() - SAME_QUALITY))
    consensus = consensus_of(partitions, resolution=resolution, seed=seed)
    found = Communities(
        best=partitions[first_best].copy(),
        best_quality=float(qualities[first_best]),
        qualities=qualities,
        consensus=consensus,
        consensus_quality=modularity_of(weights, consensus, resolution=resolution),
        agreement=_mean_over_pairs(adjusted_rand(distinct), times),
    )
    for array in (found.best, found.qualities, found.consensus):
        array.flags.writeable = False
    return found


def leiden(weights: Array, *, resolution: float, restarts: int, seed: int) -> Labels:
    """One numbered partition a restart, (restarts, n).

    The search weighs its random moves in units of the weights, so it is given weights of mean 1:
    what is found depends on the scale of measurement no more than modularity does.
    Not safe in threads: igraph draws from one generator for the whole process, which is handed back
    to Python's own afterwards.
    """
    present = weights[weights > 0]
    graph = weights_to_igraph(weights / present.mean() if present.size else weights)
    found = np.empty((restarts, len(weights)), dtype=np.int64)
    draws = random.Random()
    igraph.set_random_number_generator(draws)
    try:
        for restart in range(restarts):
            draws.seed(small_seed(seed, "communities", restart))
            found[restart] = graph.community_leiden(
                objective_function="modularity", weights="weight", resolution=resolution, n_iterations=-1
            ).membership
    finally:
        igraph.set_random_number_generator(random)
    return numbered(found)


def consensus_of(partitions: Labels, *, resolution: float, seed: int) -> Labels:
    """The partition that ``partitions`` (n_partitions, n) settle on, (n,).

    Lancichinetti & Fortunato (2012): the share of partitions in which two vertices are together
    becomes the weight between them, shares below one half are cut (a vertex that would lose every
    tie keeps its strongest), and the communities of that network are sought as often as there are
    partitions; repeated until all are the same.  If they still differ after 20 rounds, the commonest
    of the last round.

    >>> consensus_of(np.array([[1, 1, 2, 2], [1, 1, 2, 2], [1, 1, 1, 2]]), resolution=1.0, seed=1).tolist()
    [1, 1, 2, 2]
    """
    distinct, times = np.unique(numbered(partitions), axis=0, return_counts=True)
    for turn in range(MOST_ROUNDS):
        if len(distinct) == 1:
            break
        shares = _kept(together(distinct, times))
        again = leiden(
            shares,
            resolution=resolution,
            restarts=len(partitions),
            seed=small_seed(seed, "consensus", turn),
        )
        distinct, times = np.unique(again, axis=0, return_counts=True)
    settled: Labels = distinct[np.argmax(times)]
    return settled


def modularity_of(weights: Array, partition: Labels, *, resolution: float) -> float:
    """Share of weight inside communities, less ``resolution`` times what strengths let expect.

    Q = Σ_c [w_c / w − γ (s_c / w)²], where w is the sum of ``weights`` (n, n) over ordered pairs,
    w_c the part of it inside community c and s_c the summed strength of its members; at most 1, and
    at least −1/2 at resolution 1.  NaN where w = 0.  Newman (2004); resolution: Reichardt &
    Bornholdt (2006).

    >>> two_pairs = np.array([[0, 1, 0, 0], [1, 0, 0, 0], [0, 0, 0, 1], [0, 0, 1, 0.0]])
    >>> modularity_of(two_pairs, np.array([1, 1, 2, 2]), resolution=1.0)
    0.5
    """
    total = float(weights.sum())
    if total == 0:
        return float("nan")
    belongs = members(partition)
    to_community = weights @ belongs
    inside = float((to_community * belongs).sum()) / total
    shares = to_community.sum(axis=0) / total
    return inside - resolution * float(shares @ shares)


def _kept(shares: Array) -> Array:
    """Shares without the diagonal and without those below one half."""
    apart = shares.copy()
    np.fill_diagonal(apart, 0.0)
    kept = np.where(apart >= TOGETHER_ENOUGH, apart, 0.0)
    lonely = np.flatnonzero(~kept.any(axis=1))
    strongest = apart[lonely].argmax(axis=1)
    kept[lonely, strongest] = kept[strongest, lonely] = apart[lonely, strongest]
    return kept


def _mean_over_pairs(index: Array, times: Labels) -> float:
    """Mean of ``index`` between partitions over pairs of restarts, each partition met ``times``."""
    restarts = int(times.sum())
    return float((times @ index @ times - restarts) / (restarts * (restarts - 1)))
