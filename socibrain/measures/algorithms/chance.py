"""How far an observed value lies from what random networks give."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def deviation_from_chance(observed: Array, drawn: Array) -> Array:
    """(observed − mean) / SD over the draws, (n,), in SDs; ``drawn`` is (draws, n).

    The SD has the number of draws as its divisor.  NaN where all draws are the same: there a
    deviation has no yardstick.

    >>> deviation_from_chance(np.array([3.0, 3.0]), np.array([[0.0, 1.0], [2.0, 1.0]])).tolist()
    [2.0, nan]
    """
    varied = np.ptp(drawn, axis=0) > 0
    spread = np.where(varied, drawn.std(axis=0), 1.0)
    return np.where(varied, (observed - drawn.mean(axis=0)) / spread, np.nan)
