"""A site's network as measures see it: what several of them share is computed once."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from socibrain.networks.social import SocialNetwork

Array = NDArray[np.float64]


@dataclass(frozen=True)
class SiteAtHand:
    """One site's network with the seed for measures that draw at random."""

    network: SocialNetwork
    seed: int

    @cached_property
    def ties(self) -> Array:
        """Ties after the declared rule, (n_people, n_people)."""
        return self.network.ties
