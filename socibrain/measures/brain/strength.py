"""How much weight regions carry."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import measure

BARRAT = "Barrat, Barthélemy, Pastor-Satorras & Vespignani (2004)"


@measure(
    label="Strength",
    side="brain",
    scale="region",
    unit="weight",
    low=0.0,
    high=math.inf,
    reading="higher = the region is tied to the others more strongly",
    undefined="never",
    source=BARRAT,
)
def strength(hand: BrainAtHand) -> NDArray[np.float64]:
    """Sum of a region's weights to all others, after the rule for negative weights."""
    total: NDArray[np.float64] = hand.network.weights.sum(axis=1)
    return total


@measure(
    label="Mean strength",
    side="brain",
    scale="person",
    unit="weight",
    low=0.0,
    high=math.inf,
    reading="higher = regions are tied to each other more strongly",
    undefined="never",
    source=BARRAT,
)
def mean_strength(hand: BrainAtHand) -> float:
    """Mean strength over regions, after the rule for negative weights."""
    return float(hand.network.weights.sum(axis=1).mean())
