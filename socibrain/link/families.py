"""From null statistics to p-values, alone and over a family of hypotheses."""

from __future__ import annotations

from typing import Literal

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Tail = Literal["both", "upper", "lower"]
TIE = 1e-8
"""Statistics closer than this, relative to the larger of 1 and the statistic, count as equal."""


def extremeness(statistics: Array, tails: tuple[Tail, ...]) -> Array:
    """How far each statistic (..., H) speaks for its hypothesis; larger is further.

    >>> extremeness(np.array([-2.0, -2.0, -2.0]), ("both", "upper", "lower")).tolist()
    [2.0, -2.0, 2.0]
    """
    sign = np.array([-1.0 if tail == "lower" else 1.0 for tail in tails])
    both = np.array([tail == "both" for tail in tails])
    return np.where(both, np.abs(statistics), statistics * sign)


def p_values(observed: Array, null: Array, *, exhaustive: bool) -> Array:
    """Share of arrangements at least as extreme as observed, (H,), for extremenesses of (M, H).

    b/M over all arrangements, the observed among them; (b+1)/(M+1) over random ones, which is
    never 0 and never too small (Phipson & Smyth 2010).

    >>> p_values(np.array([5.0]), np.zeros((99, 1)), exhaustive=False).tolist()
    [0.01]
    """
    count = (null >= _tied(observed)).sum(axis=0)
    return np.asarray(count / len(null) if exhaustive else (count + 1) / (len(null) + 1))


def smallest_p(observed: Array, null: Array, *, exhaustive: bool) -> Array:
    """The smallest p that was attainable, (H,): the share of arrangements tied at the top.

    >>> smallest_p(np.array([1.0]), np.array([[1.0], [3.0], [3.0], [2.0]]), exhaustive=True).tolist()
    [0.5]
    """
    values = null if exhaustive else np.vstack([null, observed])
    return np.asarray((values >= _tied(values.max(axis=0))).mean(axis=0))


def family_p(observed: Array, null: Array, tails: tuple[Tail, ...], *, exhaustive: bool) -> Array:
    """Step-down p over the family, (H,), after Westfall & Young (1993).

    For extremenesses, (H,) and (M, H), of the same shuffles.  From the most extreme hypothesis to
    the least, each is held against the largest of those not yet passed, and no p is smaller than
    the one before.  One-sided and two-sided statistics have different null laws; a family that
    mixes them compares each statistic's rank in its own null instead (smallest p).

    >>> null = np.array([[1.0, 4.0], [2.0, 0.0], [3.0, 1.0]])
    >>> family_p(np.array([2.5, 5.0]), null, ("both", "both"), exhaustive=False).tolist()
    [0.5, 0.25]
    """
    if len(set(tails)) > 1 and "both" in tails:
        pooled = null if exhaustive else np.vstack([null, observed])
        observed, null = _ranks(observed[None, :], pooled)[0], _ranks(null, pooled)
    order = np.argsort(-observed, kind="stable")
    largest = np.maximum.accumulate(null[:, order[::-1]], axis=1)[:, ::-1]
    alone = p_values(observed[order], largest, exhaustive=exhaustive)
    adjusted = np.empty_like(alone)
    adjusted[order] = np.maximum.accumulate(alone)
    return adjusted


def _ranks(values: Array, pooled: Array) -> Array:
    """Share of each hypothesis's own ``pooled`` statistics that lies below its ``values``."""
    ordered = np.sort(pooled, axis=0)
    below = [np.searchsorted(own, tied) for own, tied in zip(ordered.T, _tied(values).T, strict=True)]
    return np.stack(below, axis=1) / len(pooled)


def _tied(statistics: Array) -> Array:
    """The lowest value that still counts as equal to each statistic."""
    return statistics - TIE * np.maximum(1.0, np.abs(statistics))
