"""How many of a person's contacts are not redundant."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.algorithms import holes
from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand

Array = NDArray[np.float64]


@measure(
    label="Effective size",
    side="social",
    scale="person",
    unit="people",
    low=0,
    high=np.inf,
    reading="higher = more contacts who do not lead back to each other: more of a broker",
    undefined="for people without any contact (nobody to be redundant with) and who did not answer",
    source="Burt (1992), Structural Holes, chapter 2; Borgatti (1997), Connections 20(1)",
    needs=("own answers",),
)
def effective_size(site: SiteAtHand) -> Array:
    """Contacts less what they share with each other, after the tie rule.

    Shape (n_people,).  Σ_j (1 − Σ_q p_iq m_jq) over contacts j, with p_iq the share of i's ties that
    joins i and q, and m_jq the tie of j and q relative to the strongest tie of j with anyone, both
    directions added up. For ties without direction: k − 2t/k, with k contacts who share t ties.

    A triangle with a fourth person hanging on person 0: 3 − 2/3.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> effective_size(bare_site([[1, 2, 3], [2], [], []], rule="either")).round(3).tolist()
    [2.333, 1.0, 1.0, 1.0]
    """
    return np.where(site.contacts_known, holes.effective_size(site.sparse_ties), np.nan)
