"""Small brains made for tests."""

from __future__ import annotations

import numpy as np

from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.networks.brain import BrainNetwork
from socibrain.sources.records import RegionTable


def at_hand(
    weights: np.ndarray, *, systems: tuple[str, ...] = (), resolution: float = 1.0, seed: int = 1
) -> BrainAtHand:
    """The brain of these weights; no systems unless given."""
    n = len(weights)
    frozen = weights.astype(np.float64)
    frozen.flags.writeable = False
    regions = RegionTable(tuple(f"region {place}" for place in range(n)), systems or ("",) * n)
    mean = float(frozen.sum() / (n * (n - 1))) if n > 1 else 0.0
    return BrainAtHand(BrainNetwork("rest", "p1", "", regions, frozen, mean), resolution, 10, seed)


def two_stars(*, arms: int = 9) -> np.ndarray:
    """Two stars of one centre and ``arms`` others each, weight 1; the centres lie first in each half.

    The arms of a star are tied in a ring with weight 0.5, so that it holds together.
    """
    size = arms + 1
    star = np.zeros((size, size))
    star[0, 1:] = star[1:, 0] = 1.0
    ring = np.arange(1, size)
    star[ring, np.roll(ring, 1)] = star[np.roll(ring, 1), ring] = 0.5
    return np.kron(np.eye(2), star)


def planted(seed: int) -> tuple[np.ndarray, tuple[str, ...]]:
    """Forty regions in four unmistakable communities of 7, 9, 11 and 13, and the names of these."""
    rng = np.random.default_rng(seed)
    systems = np.repeat(["ash", "birch", "cedar", "elm"], [7, 9, 11, 13])
    weights = rng.uniform(0, 0.1, (40, 40)) + (systems[:, None] == systems) * rng.uniform(0.5, 1, (40, 40))
    weights = np.triu(weights, 1)
    return weights + weights.T, tuple(systems.tolist())
