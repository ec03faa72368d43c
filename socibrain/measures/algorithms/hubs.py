"""How a vertex's ties lie within and across communities."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.algorithms.partitions import members

Array = NDArray[np.float64]
Labels = NDArray[np.int64]

HUB_FROM = 2.5
"""Within-module z from which a vertex is a hub."""
OTHERS_UP_TO = (0.05, 0.62, 0.80)
"""Highest participation of roles 1, 2 and 3; role 4 lies above."""
HUBS_UP_TO = (0.30, 0.75)
"""Highest participation of roles 5 and 6; role 7 lies above."""
SAME = 1e-9
"""Differences up to this are rounding, in participation, z and relative strength."""

PROVINCIAL_HUB, CONNECTOR_HUB = 5, 6
"""Roles of hubs that tie their own community together, or several."""


def participation(weights: Array, partition: Labels) -> Array:
    """How evenly each vertex's weight is spread over communities, (n,), from 0 to below 1.

    P_i = 1 − Σ_m (k_im / k_i)², with k_im the weight from i into community m and k_i all its weight;
    0 = all in one community.  ``weights`` (n, n) symmetric, non-negative, zero diagonal.  NaN where
    k_i = 0: nothing to spread.  Guimerà & Amaral (2005).

    >>> path = np.array([[0, 1, 0, 0], [1, 0, 1, 0], [0, 1, 0, 1], [0, 0, 1, 0.0]])
    >>> participation(path, np.array([1, 1, 2, 2])).tolist()
    [0.0, 0.5, 0.5, 0.0]
    """
    to_community = weights @ members(partition)
    strengths = to_community.sum(axis=1)
    tied = strengths > 0
    spread = np.full(len(weights), np.nan)
    spread[tied] = 1 - ((to_community[tied] / strengths[tied, None]) ** 2).sum(axis=1)
    spread[np.abs(spread) < SAME] = 0.0
    return spread


def within_module_z(weights: Array, partition: Labels) -> Array:
    """Each vertex's weight inside its own community, standardised there, (n,), in SDs.

    z_i = (κ_i − mean κ) / SD κ over the members of i's community, κ_i the weight from i to them; SD
    of the population.  0 in communities whose members all have the same κ (to rounding), so also in
    communities of one.  By construction z has mean 0 in every community and cannot exceed √(n_c − 1)
    in one of n_c members.  Guimerà & Amaral (2005).

    >>> star = np.zeros((5, 5)); star[0, 1:] = star[1:, 0] = 1
    >>> within_module_z(star, np.ones(5, dtype=int)).round(6).tolist()
    [2.0, -0.5, -0.5, -0.5, -0.5]
    """
    belongs = members(partition)
    sizes = belongs.sum(axis=0)
    own = ((weights @ belongs) * belongs).sum(axis=1)
    centred = own - belongs @ (own @ belongs / sizes)
    spread = belongs @ np.sqrt((centred**2) @ belongs / sizes)
    has_spread = spread > SAME * own.max(initial=0.0)
    z: Array = np.where(has_spread, centred, 0.0) / np.where(has_spread, spread, 1.0)
    return z


def roles(spread: Array, z: Array) -> Array:
    """Role 1 to 7 of each vertex from its participation ``spread`` and ``z``, both (n,).

    Below z = 2.5: 1 up to P .05, 2 up to .62, 3 up to .80, 4 above.  Hubs, from z = 2.5: 5
    (provincial) up to P .30, 6 (connector) up to .75, 7 above.  A participation on a threshold
    belongs to the lower role, whatever the rounding.  NaN where participation is.
    Guimerà & Amaral (2005).

    >>> roles(np.array([0.62, 0.63, 0.30, 0.31, np.nan]), np.array([0.0, 0.0, 2.5, 2.5, 0.0])).tolist()
    [2.0, 3.0, 5.0, 6.0, nan]
    """
    role = np.where(
        z >= HUB_FROM - SAME,
        5 + _thresholds_passed(spread, HUBS_UP_TO),
        1 + _thresholds_passed(spread, OTHERS_UP_TO),
    ).astype(np.float64)
    role[np.isnan(spread)] = np.nan
    return role


def _thresholds_passed(spread: Array, limits: tuple[float, ...]) -> Labels:
    passed: Labels = (spread[:, None] > np.array(limits) + SAME).sum(axis=1)
    return passed
