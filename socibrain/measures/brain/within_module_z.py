"""How far regions stand out inside their own community."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import measure

GUIMERA_AMARAL = "Guimerà & Amaral (2005)"


@measure(
    label="Within-module z",
    side="brain",
    scale="region",
    unit="SD within the community",
    low=-math.inf,
    high=math.inf,
    reading="higher = the region is more central inside its own community (0 = like its average member)",
    undefined="never: 0 where all members of the community are equal",
    source=GUIMERA_AMARAL,
)
def within_module_z(hand: BrainAtHand) -> NDArray[np.float64]:
    """A region's weight to its own community, standardised over that community's members."""
    return hand.within_module_z


@measure(
    label="Mean within-module z",
    side="brain",
    scale="person",
    unit="SD within the community",
    low=-math.inf,
    high=math.inf,
    reading="carries no information: 0 for everybody by construction, because every "
    "community is standardised to mean 0; use largest_within_module_z",
    undefined="never",
    source=GUIMERA_AMARAL,
)
def mean_within_module_z(hand: BrainAtHand) -> float:
    """Mean within-module z over all regions, which is 0 by construction.

    Rounded to nine decimals, so that rounding error cannot pose as a difference between people.
    """
    return round(float(hand.within_module_z.mean()), 9) + 0.0


@measure(
    label="Largest within-module z",
    side="brain",
    scale="person",
    unit="SD within the community",
    low=0.0,
    high=math.inf,
    reading="higher = some region dominates its community more; at most √(n − 1) in a community of n "
    "regions, so adjust for the number of communities",
    undefined="never: 0 where all members of every community are equal",
    source=GUIMERA_AMARAL,
)
def largest_within_module_z(hand: BrainAtHand) -> float:
    """Within-module z of the region that stands out most in its community."""
    return float(hand.within_module_z.max())
