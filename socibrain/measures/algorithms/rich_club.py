"""Rich club: do the best-connected tie more to each other than their many ties alone would bring?"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
Codes = NDArray[np.int64]

_SAME = 1e-9
"""Two curves' deviations closer than this (in SDs, relative above 1) are tied: rounding."""


@dataclass(frozen=True)
class RichClub:
    """The curve over k with its test.

    ``levels`` are the k looked at; ``density`` is φ(k), ties among people of degree > k over
    possible ones; ``ratio`` is φ(k) over its mean in the draws (NaN where that is 0);
    ``deviation`` is (φ − mean) / SD over observed and draws together, NaN where nothing varies.
    ``p`` is for the whole curve, NaN when it varies at no k.
    ``from_degree`` is the smallest degree of a member, NaN when there is no club.
    """

    levels: Codes
    density: Array
    ratio: Array
    deviation: Array
    p: float
    from_degree: float


def rich_club_density(ties: Mask, *, fewest: int = 2) -> tuple[Codes, Array]:
    """Levels k = 0, 1, … at which ``fewest`` or more people have degree > k, and φ(k) at them.

    ``ties`` is (n, n), symmetric, without diagonal.  φ(k) = 2 E_k / (N_k (N_k − 1)) with N_k people
    of degree > k who share E_k ties; from 0 to 1.  ``fewest`` is at least 2.
    Zhou & Mondragón (2004), IEEE Communications Letters 8; Colizza et al. (2006), Nature Physics 2.

    A triangle with a fourth person hanging on the first: degrees 3, 2, 2, 1.

    >>> ties = np.zeros((4, 4), dtype=bool)
    >>> for a, b in [(0, 1), (0, 2), (1, 2), (0, 3)]:
    ...     ties[a, b] = ties[b, a] = True
    >>> levels, density = rich_club_density(ties)
    >>> levels.tolist(), density.round(3).tolist()
    ([0, 1], [0.667, 1.0])
    """
    degrees = ties.sum(axis=1)
    levels, members = _levels(degrees, fewest)
    pairs = np.argwhere(np.triu(ties))[None]
    return levels, _among_the_rich(degrees, pairs, levels)[0] / (members * (members - 1) / 2)


def rich_club(ties: Mask, drawn: Codes, *, level: float, fewest: int) -> RichClub:
    """Rich-club curve of ``ties`` against networks with the same degrees, with one p for all k.

    ``ties`` as in `rich_club_density`; ``drawn`` is (draws, n_ties, 2), the ties of each drawn
    network.  The statistic is the largest deviation over k, towards more ties among the rich, so
    that p = (1 + draws at least as extreme) / (1 + draws) accounts for looking at every k; it is
    exact when observed and drawn networks are exchangeable.  k where no network differs are left
    out.  With p ≤ ``level`` members are the people above the lower end of the unbroken run of k
    that each reach ``level`` by the same largest-deviation null and that contains the maximum.
    """
    degrees = ties.sum(axis=1)
    levels, members = _levels(degrees, fewest)
    possible = members * (members - 1) / 2
    own = np.argwhere(np.triu(ties))[None]
    counts = np.concatenate((_among_the_rich(degrees, own, levels), _among_the_rich(degrees, drawn, levels)))
    varied = np.ptp(counts, axis=0) > 0
    chance = counts[1:].mean(axis=0)
    ratio = np.divide(counts[0], chance, out=np.full(len(levels), np.nan), where=chance > 0)
    deviation = np.full(len(levels), np.nan)
    if not varied.any():
        return RichClub(levels, counts[0] / possible, ratio, deviation, np.nan, np.nan)

    curves = (counts[:, varied] - counts[:, varied].mean(axis=0)) / counts[:, varied].std(axis=0)
    deviation[varied] = curves[0]
    largest = curves[1:].max(axis=1)
    tolerance = _SAME * np.maximum(1.0, np.abs(curves[0]))
    p_by_level = np.ones(len(levels))
    p_by_level[varied] = (1 + (largest[:, None] >= curves[0] - tolerance).sum(axis=0)) / (1 + len(drawn))
    p = float(p_by_level[varied].min())
    from_degree = np.nan
    if p <= level:
        outside = np.flatnonzero(p_by_level[: int(np.nanargmax(deviation))] > level)
        lower = levels[outside[-1] + 1] if len(outside) else levels[0]
        from_degree = float(degrees[degrees > lower].min())
    return RichClub(levels, counts[0] / possible, ratio, deviation, p, from_degree)


def _levels(degrees: Codes, fewest: int) -> tuple[Codes, Codes]:
    """Every k with ``fewest`` people or more above it, and how many they are."""
    above = len(degrees) - np.cumsum(np.bincount(degrees, minlength=1))
    levels = np.flatnonzero(above >= max(2, fewest))
    return levels, above[levels]


def _among_the_rich(degrees: Codes, pairs: Codes, levels: Codes) -> Array:
    """Ties between two people of degree > k, (m, n_levels), for ``pairs`` (m, n_ties, 2)."""
    poorer = np.minimum(degrees[pairs[..., 0]], degrees[pairs[..., 1]])
    width = int(degrees.max(initial=0)) + 1
    place = np.arange(len(pairs))[:, None] * width + poorer
    by_poorer = np.bincount(place.ravel(), minlength=len(pairs) * width).reshape(len(pairs), width)
    above = by_poorer.sum(axis=1, keepdims=True) - np.cumsum(by_poorer, axis=1)
    counts: Array = above[:, levels].astype(np.float64)
    return counts
