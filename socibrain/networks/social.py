"""One site's people and ties, checked and immutable."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from socibrain.sources.study import TieRule

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]


@dataclass(frozen=True)
class SocialNetwork:
    """Who named whom in one site, over everyone on its roster.

    ``named[i, j]`` is True where person i named person j: (n_people, n_people), no self-naming,
    read-only.  ``answered[i]`` says whether i answered; the row of a person who did not answer is
    all False and means *unknown*, not *nobody*.  ``roles`` is the class of each person for
    brokerage, None where missing.
    """

    site: str
    question: str
    people: tuple[str, ...]
    named: Mask
    answered: Mask
    roles: tuple[str | None, ...]
    rule: TieRule

    @property
    def ties(self) -> Array:
        """The network after the tie rule: 0/1 float64, symmetric unless the rule is ``directed``."""
        return apply_rule(self.named, self.rule)


def apply_rule(named: Mask, rule: TieRule) -> Array:
    """Ties from nominations, (n, n) 0/1 float64.

    >>> named = np.array([[False, True], [False, False]])
    >>> apply_rule(named, "either").tolist(), apply_rule(named, "both").tolist()
    ([[0.0, 1.0], [1.0, 0.0]], [[0.0, 0.0], [0.0, 0.0]])
    """
    if rule == "either":
        return (named | named.T).astype(np.float64)
    if rule == "both":
        return (named & named.T).astype(np.float64)
    return named.astype(np.float64)
