"""REML by brute force: the full covariance, a fine grid, then a bounded search."""

from __future__ import annotations

import numpy as np
from scipy.optimize import minimize_scalar


def gls(ratio: float, y, columns, sites):
    """Coefficients, standard errors and minus twice the restricted log-likelihood at a ratio."""
    n, p = columns.shape
    covariance = np.eye(n) + ratio * (sites[:, None] == sites[None, :])
    solved = np.linalg.solve(covariance, np.column_stack([columns, y]))
    cross = columns.T @ solved[:, :p]
    coefficients = np.linalg.solve(cross, columns.T @ solved[:, p])
    rest = y - columns @ coefficients
    variance = rest @ np.linalg.solve(covariance, rest) / (n - p)
    height = np.linalg.slogdet(covariance)[1] + np.linalg.slogdet(cross)[1]
    height += (n - p) * (1 + np.log(2 * np.pi * variance))
    return coefficients, np.sqrt(variance * np.diag(np.linalg.inv(cross))), height


def best_ratio(y, columns, sites) -> float:
    def height(s: float) -> float:
        return gls(np.expm1(s), y, columns, sites)[2]

    grid = np.linspace(0, 12, 49)
    heights = [height(s) for s in grid]
    lowest = int(np.argmin(heights))
    low, high = grid[max(lowest - 1, 0)], grid[min(lowest + 1, 48)]
    found = minimize_scalar(height, bounds=(low, high), method="bounded", options={"xatol": 1e-10})
    return 0.0 if heights[0] <= found.fun else float(np.expm1(found.x))
