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
    n_mutual, n_one_way = kinds
    ties = n_mutual + n_one_way
    drawn = np.tile(start, (draws, 1, 1))
    end = drawn.reshape(-1)
    one_joined = np.eye(people, dtype=bool)
    one_joined[start[:, 0], start[:, 1]] = one_joined[start[:, 1], start[:, 0]] = True
    joined = np.tile(one_joined.reshape(-1), draws)
    first_end = np.arange(draws) * ties * 2
    first_cell = np.arange(draws) * people**2

    free = 1.0 - 2.0 * ties / (people * (people - 1))
    steps = ties * MOST_TRIES_PER_TIE
    if MOST_TRIES_PER_TIE * free**2 > TRIES_PER_TIE:
        steps = int(np.ceil(ties * TRIES_PER_TIE / free**2))
    for done in range(0, steps, _AHEAD):
        shape = (min(_AHEAD, steps - done), draws)
        one = rng.integers(ties, size=shape)
        one_way = one >= n_mutual
        other = (rng.random(shape) * np.where(one_way, n_one_way, n_mutual)).astype(np.int64)
        other += np.where(one_way, n_mutual, 0)
        turned = (rng.random(shape) < 0.5) & ~one_way
        at_b, at_d = first_end + 2 * one + 1, first_end + 2 * other + ~turned
        for to_b, to_d, directed in zip(at_b, at_d, one_way, strict=True):
            a, b, c, d = end[to_b - 1], end[to_b], end[to_d ^ 1], end[to_d]
            joined_ad = joined[first_cell + a * people + d]
            if n_one_way:
                _turn_cycles(drawn, np.flatnonzero((b == c) & joined_ad & directed), to_b, to_d, n_mutual)
            k = np.flatnonzero(~(joined_ad | joined[first_cell + c * people + b]))
            a, b, c, d, cell = a[k], b[k], c[k], d[k], first_cell[k]
            end[to_b[k]], end[to_d[k]] = d, b
            from_a, from_b = cell + a * people, cell + b * people
            from_c, from_d = cell + c * people, cell + d * people
            joined[from_a + b] = joined[from_b + a] = joined[from_c + d] = joined[from_d + c] = False
            joined[from_a + d] = joined[from_d + a] = joined[from_c + b] = joined[from_b + c] = True
    return drawn


def _turn_cycles(drawn: Codes, chains: Codes, to_b: Codes, to_d: Codes, n_mutual: int) -> None:
    """In the draws ``chains``, where a → b → d and a tie joins d and a: turn the cycle round if d → a."""
    if not len(chains):
        return
    end = drawn.reshape(-1)
    a, d = end[to_b[chains] - 1], end[to_d[chains]]
    one_way = drawn[chains, n_mutual:]
    cycle, last = np.nonzero((one_way[..., 0] == d[:, None]) & (one_way[..., 1] == a[:, None]))
    cycle = chains[cycle]
    closing = (cycle * drawn.shape[1] + n_mutual + last) * 2 + 1
    for head in (to_b[cycle], to_d[cycle], closing):
        end[head], end[head - 1] = end[head - 1], end[head]
