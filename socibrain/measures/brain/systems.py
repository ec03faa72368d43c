"""How well the declared systems describe one brain network."""

from __future__ import annotations

import math

import numpy as np

from socibrain.measures.algorithms.communities import modularity_of
from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import measure


@measure(
    label="Modularity of the declared systems",
    side="brain",
    scale="person",
    unit="share of weight",
    low=-math.inf,
    high=1.0,
    reading="higher = more of the weight lies inside the declared systems than strengths let expect "
    "(-1/2 to 1 at resolution 1)",
    undefined="no systems are declared, or the regions that have one share no weight",
    source="Newman & Girvan (2004)",
    needs=("systems",),
)
def system_modularity(hand: BrainAtHand) -> float:
    """Modularity of the systems in the regions table, at the declared resolution.

    Regions without a system are left out, with their weights.
    """
    systems = np.array(hand.network.regions.systems)
    placed = np.flatnonzero(systems != "")
    _, labels = np.unique(systems[placed], return_inverse=True)
    weights = hand.network.weights[np.ix_(placed, placed)]
    return modularity_of(weights, labels, resolution=hand.resolution)
