"""How strongly one brain network falls into communities."""

from __future__ import annotations

import math

from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import measure

LEIDEN = "Leiden: Traag, Waltman & van Eck (2019)"
NO_WEIGHT = "the network has no weight at all, so nothing can be divided"


@measure(
    label="Modularity",
    side="brain",
    scale="person",
    unit="share of weight",
    low=-math.inf,
    high=1.0,
    reading="higher = the brain falls more cleanly into communities (0 to 1 at resolution 1)",
    undefined=NO_WEIGHT,
    source=f"Newman & Girvan (2004); {LEIDEN}",
)
def modularity(hand: BrainAtHand) -> float:
    """Highest modularity that any restart reached, at the declared resolution.

    The partition that goes into tables, and on which hubs are judged, is the consensus of all
    restarts; its own modularity can be a little lower.
    """
    return hand.communities.best_quality


@measure(
    label="Number of communities",
    side="brain",
    scale="person",
    unit="communities",
    low=1.0,
    high=math.inf,
    reading="higher = the brain falls into more, smaller communities",
    undefined=NO_WEIGHT,
    source=f"Lancichinetti & Fortunato (2012); {LEIDEN}",
)
def community_count(hand: BrainAtHand) -> float:
    """Communities in the consensus partition of all restarts."""
    return float(hand.communities.consensus.max()) if hand.divisible else math.nan


@measure(
    label="Agreement among restarts",
    side="brain",
    scale="person",
    unit="adjusted Rand index",
    low=-0.5,
    high=1.0,
    reading="higher = the communities depend less on where the search starts; low = do not trust them",
    undefined=NO_WEIGHT,
    source="Hubert & Arabie (1985)",
)
def restart_agreement(hand: BrainAtHand) -> float:
    """Mean likeness of the partitions that two restarts find: 1 = always the same, 0 = chance."""
    return hand.communities.agreement if hand.divisible else math.nan
