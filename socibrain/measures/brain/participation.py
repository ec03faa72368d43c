"""How evenly regions spread their weight over communities."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import measure

GUIMERA_AMARAL = "Guimerà & Amaral (2005)"


@measure(
    label="Participation",
    side="brain",
    scale="region",
    unit="1 - sum of squared shares",
    low=0.0,
    high=1.0,
    reading="higher = the region ties several communities together",
    undefined="the region has no weight to any other, so nothing is spread",
    source=GUIMERA_AMARAL,
)
def participation(hand: BrainAtHand) -> NDArray[np.float64]:
    """How evenly a region's weight is spread over the communities of the consensus partition."""
    return hand.participation


@measure(
    label="Mean participation",
    side="brain",
    scale="person",
    unit="1 - sum of squared shares",
    low=0.0,
    high=1.0,
    reading="higher = regions tie communities together more evenly: a more integrated brain",
    undefined="no region has weight to any other",
    source=GUIMERA_AMARAL,
)
def mean_participation(hand: BrainAtHand) -> float:
    """Mean participation over the regions that have any weight."""
    return float(np.nanmean(hand.participation)) if hand.divisible else math.nan
