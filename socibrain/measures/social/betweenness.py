"""How many shortest paths between others lead through a person."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand

Array = NDArray[np.float64]


@measure(
    label="Betweenness",
    side="social",
    scale="person",
    unit="pairs of people",
    low=0,
    high=np.inf,
    reading="higher = more of the shortest paths between others lead through the person",
    undefined="for people who did not answer: paths through their own nominations are unknown",
    source="Freeman (1977), Sociometry 40; algorithm of Brandes (2001)",
    needs=("own answers",),
)
def betweenness(site: SiteAtHand) -> Array:
    """Pairs of others joined by a shortest path through this person, after the tie rule.

    Shape (n_people,).  Σ over pairs (s, t) of the share of their shortest paths that pass through the
    person; ordered pairs along the direction of ties when the rule is directed, unordered pairs
    otherwise. Not divided by the number of pairs, so comparable within a site only. 0 for isolates and
    ends.

    A chain 0 – 1 – 2 – 3: everyone beyond an inner person is reached through that person.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> betweenness(bare_site([[1], [2], [3], []], rule="either")).tolist()
    [0.0, 2.0, 2.0, 0.0]
    """
    through = np.array(site.graph.betweenness(directed=site.directed), dtype=np.float64)
    return np.where(site.onward_known, through, np.nan)
