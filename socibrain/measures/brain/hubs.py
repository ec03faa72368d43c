"""How many regions are hubs of a community or between communities."""

from __future__ import annotations

import math

import numpy as np

from socibrain.measures.algorithms.hubs import CONNECTOR_HUB, PROVINCIAL_HUB
from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import measure

RARE = (
    "a hub needs within-module z of at least 2.5, which no community of fewer than 8 regions can give: "
    "counts are small and often 0, so read the regions' participation and z beside them"
)


@measure(
    label="Connector hubs",
    side="brain",
    scale="person",
    unit="regions",
    low=0.0,
    high=math.inf,
    reading=f"higher = more hubs that tie several communities together; {RARE}",
    undefined="the network has no weight at all",
    source="Guimerà & Amaral (2005): role 6, participation above .30 up to .75",
)
def connector_hubs(hand: BrainAtHand) -> float:
    """Regions central in their own community whose weight is spread over several."""
    return _count(hand, CONNECTOR_HUB)


@measure(
    label="Provincial hubs",
    side="brain",
    scale="person",
    unit="regions",
    low=0.0,
    high=math.inf,
    reading=f"higher = more hubs that hold their own community together; {RARE}",
    undefined="the network has no weight at all",
    source="Guimerà & Amaral (2005): role 5, participation up to .30",
)
def provincial_hubs(hand: BrainAtHand) -> float:
    """Regions central in their own community whose weight stays inside it."""
    return _count(hand, PROVINCIAL_HUB)


def _count(hand: BrainAtHand, role: int) -> float:
    return float(np.count_nonzero(hand.roles == role)) if hand.divisible else math.nan
