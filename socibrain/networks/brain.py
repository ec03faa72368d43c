"""One person's regions and weights, checked and immutable."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from socibrain.sources.records import RegionTable

Array = NDArray[np.float64]


@dataclass(frozen=True)
class BrainNetwork:
    """One person's brain network at one visit.

    ``weights`` is (n_regions, n_regions) float64: symmetric, zero diagonal, finite, and
    non-negative after the declared rule; read-only.
    ``mean_connectivity`` is the mean of the off-diagonal weights *before* negative weights were
    dropped or made absolute, in units of the weights.
    """

    source: str
    person: str
    visit: str
    regions: RegionTable
    weights: Array
    mean_connectivity: float
