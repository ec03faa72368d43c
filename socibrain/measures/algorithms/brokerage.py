"""Brokerage roles: whom a go-between stands between, by class (Gould & Fernandez 1989)."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
Codes = NDArray[np.int64]

ROLES = ("coordinator", "itinerant", "gatekeeper", "representative", "liaison")
UNKNOWN = -1
_COORDINATOR, _ITINERANT, _GATEKEEPER, _REPRESENTATIVE, _LIAISON, _IMPOSSIBLE = range(6)
_ROLE_BY_EQUALITIES = np.array(
    [_LIAISON, _ITINERANT, _GATEKEEPER, _IMPOSSIBLE, _REPRESENTATIVE, _IMPOSSIBLE, _IMPOSSIBLE, _COORDINATOR]
)
"""Indexed by 4·(source like broker) + 2·(broker like target) + (source like target)."""


def role_counts(ties: Mask, classes: Codes) -> Array:
    """Open paths that lead through each person, by role: shape (5, m, n), roles ordered as `ROLES`.

    ``ties`` is (m, n, n): m networks over the same people, ties[., a, v] True for a tie from a to v,
    no diagonal.  ``classes`` is (n,), a whole number per class, `UNKNOWN` where missing.
    Counted are paths a → v → c with a ≠ c and no tie a → c; v is the broker.  Classes of a, v, c:
    coordinator all the same; itinerant a and c the same, v another; gatekeeper v and c the same;
    representative a and v the same; liaison three classes.  On symmetric ties each open triad is
    walked both ways and so counts twice.  Paths touching somebody without a class are not counted,
    and for that person the counts are NaN.  Gould & Fernandez (1989), Sociological Methodology 19.

    Class 0 holds persons 0, 1, 2; class 1 persons 3, 4; class 2 person 5.  Through person 1:

    >>> ties = np.zeros((1, 6, 6), dtype=bool)
    >>> for a, b in [(0, 1), (1, 2), (3, 1), (1, 4), (5, 1), (1, 5)]:
    ...     ties[0, a, b] = True
    >>> role_counts(ties, np.array([0, 0, 0, 1, 1, 2]))[:, 0, 1].tolist()
    [1.0, 1.0, 2.0, 2.0, 2.0]
    """
    networks, people = ties.shape[:2]
    network, source, broker = np.nonzero(ties)
    onward = np.bincount(network * people + source, minlength=networks * people)
    first = np.cumsum(onward) - onward
    place = network * people + broker
    branches = onward[place]
    into = np.repeat(np.arange(len(source)), branches)
    branch = np.arange(len(into)) - np.repeat(np.cumsum(branches) - branches, branches)
    a, v, c = source[into], broker[into], broker[first[place[into]] + branch]

    known = classes != UNKNOWN
    counted = (a != c) & ~ties[network[into], a, c] & known[a] & known[v] & known[c]
    place, a, v, c = place[into][counted], classes[a[counted]], classes[v[counted]], classes[c[counted]]
    role = _ROLE_BY_EQUALITIES[4 * (a == v) + 2 * (v == c) + (a == c)]
    size = networks * people
    counts = np.bincount(role * size + place, minlength=len(ROLES) * size).astype(np.float64)
    counts = counts.reshape(len(ROLES), networks, people)
    counts[:, :, ~known] = np.nan
    return counts


def expected_role_counts(classes: Codes, *, density: float) -> Array:
    """Mean of each role count when every directed tie stands with the same chance, shape (5, n).

    ``density`` is that chance p, ties independent; ``classes`` as in `role_counts`, with N people
    of known class, n of them in the broker's own class g.  p² (1 − p) times:
    coordinator (n−1)(n−2); itinerant Σ_{h≠g} n_h (n_h − 1); gatekeeper and representative
    (N−n)(n−1) each; liaison Σ_{h≠g} Σ_{k≠g,h} n_h n_k.  The five sum to (N−1)(N−2).
    NaN for people without a class.  Gould & Fernandez (1989), Sociological Methodology 19.

    Three classes of 3, 2 and 1; for the people of the first class, times p² (1 − p) = 1/8:

    >>> (8 * expected_role_counts(np.array([0, 0, 0, 1, 1, 2]), density=0.5))[:, 0].tolist()
    [2.0, 2.0, 6.0, 6.0, 4.0]
    """
    known = classes != UNKNOWN
    names, codes, sizes = np.unique(classes[known], return_inverse=True, return_counts=True)
    everyone, squares = float(sizes.sum()), float((sizes**2).sum())
    own = sizes.astype(np.float64)
    others = everyone - own
    other_squares = squares - own**2
    by_class = np.empty((len(ROLES), len(names)))
    by_class[_COORDINATOR] = (own - 1) * (own - 2)
    by_class[_ITINERANT] = other_squares - others
    by_class[_GATEKEEPER] = by_class[_REPRESENTATIVE] = others * (own - 1)
    by_class[_LIAISON] = others**2 - other_squares
    expected = np.full((len(ROLES), len(classes)), np.nan)
    expected[:, known] = density**2 * (1 - density) * by_class[:, codes]
    return expected
