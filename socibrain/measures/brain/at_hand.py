"""A brain network as measures see it: what several of them share is computed once."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.algorithms.communities import Communities, find_communities
from socibrain.measures.algorithms.hubs import participation, roles, within_module_z
from socibrain.networks.brain import BrainNetwork

Array = NDArray[np.float64]


@dataclass(frozen=True)
class BrainAtHand:
    """One brain network with the options and seed for communities."""

    network: BrainNetwork
    resolution: float
    restarts: int
    seed: int

    @property
    def divisible(self) -> bool:
        """Whether there is any weight that communities could divide."""
        return bool(self.network.weights.any())

    @cached_property
    def communities(self) -> Communities:
        """What all restarts found; measures of hubs use its consensus."""
        return find_communities(
            self.network.weights, resolution=self.resolution, restarts=self.restarts, seed=self.seed
        )

    @cached_property
    def participation(self) -> Array:
        """Participation of each region in the consensus partition, (n_regions,)."""
        return participation(self.network.weights, self.communities.consensus)

    @cached_property
    def within_module_z(self) -> Array:
        """Within-module z of each region in the consensus partition, (n_regions,)."""
        return within_module_z(self.network.weights, self.communities.consensus)

    @cached_property
    def roles(self) -> Array:
        """Role 1 to 7 of each region in the consensus partition, (n_regions,)."""
        return roles(self.participation, self.within_module_z)
