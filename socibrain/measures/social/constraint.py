"""How much a person's contacts lead back to each other."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.algorithms import holes
from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand

Array = NDArray[np.float64]


@measure(
    label="Constraint",
    side="social",
    scale="person",
    unit="no unit",
    low=0,
    high=np.inf,
    reading="higher = fewer structural holes: contacts are tied to each other; lower = more of a broker",
    undefined="for people without any contact (nobody constrains an isolate) and who did not answer",
    source="Burt (1992), Structural Holes, chapter 2",
    needs=("own answers",),
)
def constraint(site: SiteAtHand) -> Array:
    """Share of a person's network spent on contacts who lead back to each other.

    Shape (n_people,).  Σ_j (p_ij + Σ_q p_iq p_qj)² over contacts j, with p_ij the share of i's ties that
    joins i and j, both directions added up, after the tie rule: under a directed rule a mutual tie
    weighs twice a one-way tie. Values above 1 are possible, with two contacts tied to each other.

    A triangle: (1/2 + 1/2 · 1/2)² for each of two contacts.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> constraint(bare_site([[1, 2], [2], [], []], rule="either")).tolist()
    [1.125, 1.125, 1.125, nan]
    """
    return np.where(site.contacts_known, holes.constraint(site.sparse_ties), np.nan)
