"""Networks drawn at random that leave every person's number of ties as it was."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
Codes = NDArray[np.int64]

TRIES_PER_TIE = 10
"""Exchanges per tie before a network counts as drawn, where both places for the new ties are free:
common practice.  Many places are taken in dense networks, so more are tried there."""
MOST_TRIES_PER_TIE = 50
"""A bound for networks so dense that hardly any exchange is possible."""
_AHEAD = 64
"""Steps whose random numbers are drawn together."""
_CELLS = 1 << 25
"""Bytes for who is joined to whom in the walks side by side; blocks depend on the number of people
alone, so draws do too."""
_DENSE = 1 << 19
"""Cells of dense networks handed out at once."""


@dataclass(frozen=True)
class Rewired:
    """Drawn networks over the same people.

    ``mutual`` is (draws, n_mutual, 2): the two people of each tie that stands both ways.
    ``one_way`` is (draws, n_one_way, 2): from, to.  ``moved`` is the share of ties that join two
    people (one way: in that order) whom the observed network does not so join, mean over draws;
    NaN without ties.  ``distinct`` is the number of different networks among the draws.
    """

    people: int
    mutual: Codes
    one_way: Codes
    moved: float
    distinct: int

    @property
    def draws(self) -> int:
        """How many networks were drawn."""
        return len(self.mutual)

    def networks(self) -> Iterator[Mask]:
        """The draws as dense networks, (block, n, n) each, in order, in blocks that fit in memory."""
        block = max(1, _DENSE // max(1, self.people**2))
        for start in range(0, self.draws, block):
            mutual, one_way = self.mutual[start : start + block], self.one_way[start : start + block]
            dense = np.zeros((len(mutual), self.people, self.people), dtype=bool)
            draw = np.arange(len(mutual))[:, None]
            dense[draw, mutual[..., 0], mutual[..., 1]] = True
            dense[draw, mutual[..., 1], mutual[..., 0]] = True
            dense[draw, one_way[..., 0], one_way[..., 1]] = True
            yield dense


def rewire(ties: Mask, *, draws: int, rng: np.random.Generator) -> Rewired:
    """``draws`` networks with each person's mutual ties, ties sent and ties received as observed.

    ``ties`` is (n, n) without diagonal; symmetric ties give symmetric draws.  The dyad census
    stays as it is too.  Two ties of the same kind exchange partners (a–b, c–d become a–d, c–b)
    unless that would join people already joined; three one-way ties that form a cycle can
    turn round, which exchanges alone cannot do (Rao, Jana & Bandyopadhyay 1996, Sankhyā A 58).
    Every step is as likely as its undoing, so each such network is as likely as any other that can be
    reached: all of them without one-way ties; beside one-way ties in small dense networks some
    cannot be.
    One walk leads from the observed network to a hidden one, and every draw is a walk from
    there: the observed network and the draws are then exchangeable however short the walks, and a p
    from ranking them is exact (Besag & Clifford 1989, Biometrika 76; their parallel method).
    Degree-preserving exchange: Maslov & Sneppen (2002), Science 296.

    A square of four people, each with two ties, can only become one of three squares:

    >>> square = np.zeros((4, 4), dtype=bool)
    >>> for a, b in [(0, 1), (1, 2), (2, 3), (3, 0)]:
    ...     square[a, b] = square[b, a] = True
    >>> drawn = rewire(square, draws=200, rng=np.random.default_rng(1))
    >>> drawn.distinct, next(drawn.networks()).sum(axis=2).tolist()[0]
    (3, [2, 2, 2, 2])
    """
    both = ties & ties.T
    mutual = np.argwhere(np.triu(both))
    observed = np.concatenate((mutual, np.argwhere(ties & ~both)))
    people, kinds = len(ties), (len(mutual), len(observed) - len(mutual))
    start = observed
    drawn = np.empty((draws, len(observed), 2), dtype=np.int64)
    if len(observed):
        start = _walk(observed, kinds, people, 1, rng)[0]
        block = max(1, _CELLS // people**2)
        for first in range(0, draws, block):
            here = drawn[first : first + block]
            here[:] = _walk(start, kinds, people, len(here), rng)
    names = drawn[..., 0] * people + drawn[..., 1]
    turned = drawn[..., 1] * people + drawn[..., 0]
    names[:, : kinds[0]] = np.minimum(names, turned)[:, : kinds[0]]
    names[:, kinds[0] :] += people**2
    stood = observed[:, 0] * people + observed[:, 1]
    stood[kinds[0] :] += people**2
    moved = float(1.0 - np.isin(names, stood).mean()) if names.size else np.nan
    distinct = len({row.tobytes() for row in np.sort(names, axis=1)})
    return Rewired(people, drawn[:, : kinds[0]], drawn[:, kinds[0] :], moved, distinct)


def _walk(start: Codes, kinds: tuple[int, int], people: int, draws: int, rng: np.random.Generator) -> Codes:
    """``draws`` independent walks side by side, (draws, n_ties, 2), mutual ties first."""
    n_mutual, ties = kinds[0], sum(kinds)
    tails, heads = np.tile(start[:, 0], (draws, 1)), np.tile(start[:, 1], (draws, 1))
    tail, head = tails.reshape(-1), heads.reshape(-1)
    one_joined = np.eye(people, dtype=bool)
    one_joined[start[:, 0], start[:, 1]] = one_joined[start[:, 1], start[:, 0]] = True
    joined = np.tile(one_joined.ravel(), draws)
    base = np.arange(draws) * ties
    cell = np.arange(draws) * people**2

    free = 1.0 - 2.0 * ties / (people * (people - 1))
    steps = ties * MOST_TRIES_PER_TIE
    if MOST_TRIES_PER_TIE * free**2 > TRIES_PER_TIE:
        steps = int(np.ceil(ties * TRIES_PER_TIE / free**2))
    for done in range(0, steps, _AHEAD):
        ahead = min(_AHEAD, steps - done)
        one = rng.integers(ties, size=(ahead, draws))
        one_way = one >= n_mutual
        span = np.where(one_way, kinds[1], n_mutual)
        other = (rng.random((ahead, draws)) * span).astype(np.int64) + np.where(one_way, n_mutual, 0)
        turned = (rng.random((ahead, draws)) < 0.5) & ~one_way
        for step in range(ahead):
            i, j = base + one[step], base + other[step]
            a, b, c, d = tail[i], head[i], tail[j], head[j]
            c, d = np.where(turned[step], d, c), np.where(turned[step], c, d)
            chain = np.flatnonzero((b == c) & one_way[step])
            if len(chain):
                closing = (tails[chain] == d[chain, None]) & (heads[chain] == a[chain, None])
                cycle, last = np.nonzero(closing[:, n_mutual:])
                cycle = chain[cycle]
                for tie in (i[cycle], j[cycle], base[cycle] + n_mutual + last):
                    tail[tie], head[tie] = head[tie], tail[tie]
            k = np.flatnonzero(~(joined[cell + a * people + d] | joined[cell + c * people + b]))
            i, j, a, b, c, d, at = i[k], j[k], a[k], b[k], c[k], d[k], cell[k]
            joined[at + a * people + b] = joined[at + b * people + a] = False
            joined[at + c * people + d] = joined[at + d * people + c] = False
            joined[at + a * people + d] = joined[at + d * people + a] = True
            joined[at + c * people + b] = joined[at + b * people + c] = True
            head[i], tail[j], head[j] = d, c, b
    return np.stack((tail, head), axis=1).reshape(draws, ties, 2)
