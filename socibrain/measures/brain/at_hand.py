"""A brain network as measures see it: what several of them share is computed once."""

from __future__ import annotations

from dataclasses import dataclass

from socibrain.networks.brain import BrainNetwork


@dataclass(frozen=True)
class BrainAtHand:
    """One brain network with the options and seed for communities."""

    network: BrainNetwork
    resolution: float
    restarts: int
    seed: int
