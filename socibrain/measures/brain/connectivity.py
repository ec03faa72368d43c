"""How strongly one brain is connected overall."""

from __future__ import annotations

import math

from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import measure


@measure(
    label="Mean connectivity",
    side="brain",
    scale="person",
    unit="weight",
    low=-math.inf,
    high=math.inf,
    reading="higher = regions are more strongly connected on average; offered as an adjustment for "
    "measures that depend on it",
    undefined="never",
    source="van den Heuvel et al. (2017)",
)
def mean_connectivity(hand: BrainAtHand) -> float:
    """Mean of all weights between two regions, before negative ones were dropped or made absolute."""
    return hand.network.mean_connectivity
