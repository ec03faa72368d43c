"""The REML profile of one variance ratio, for many models side by side."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
NODES = 160
"""Nodes of the first search; 30 units of s at the widest, so 0.2 apart where features are 1 wide."""
STEPS = 60
"""Newton or halving steps at most: halving alone needs 33 from one node to the next."""
ENOUGH = 1e-10
"""A Newton step in s this short is the last; its error is of the order of its square."""
FLOOR = 1e-10
"""Within-site sums of squares below this share of their largest possible value count as this."""


@dataclass(frozen=True)
class Contrasts:
    """What the data say about the site variance of one model.

    ``sizes`` and ``squares`` are (m,): in the eigenbasis of the sites' incidence, cleared of the
    model's columns, contrast i has variance σ²(1 + ratio·sizes[i]), and squares[i] is its square.
    ``freedom`` is people less columns, ``total`` the largest residual sum of squares within sites
    that a shuffle can produce.
    """

    sizes: Array
    squares: Array
    freedom: int
    total: float


class Profile:
    """Minus twice the REML log-likelihood as a function of the ratio site/residual variance.

    For H models at once: freedom·log(R + Σ squares/(1+ratio·sizes)) + Σ log(1+ratio·sizes), up to
    a constant, with R the residual sum of squares within sites (Patterson & Thompson 1971, in the
    eigenbasis of the error contrasts).  It is stationary where R = ρ(ratio) for a ρ that does not
    depend on R, so the places to look are found once for all shuffles.  The search runs in
    s = log(1 + largest size · ratio), where the boundary 0 is an ordinary point.
    """

    def __init__(self, models: Sequence[Contrasts]) -> None:
        width = max(1, *(model.sizes.size for model in models))
        # Padding with size 0 and square 0 leaves every sum below as it is.
        self._sizes = np.array([np.pad(model.sizes, (0, width - model.sizes.size)) for model in models])
        self._squares = np.array([np.pad(model.squares, (0, width - model.sizes.size)) for model in models])
        self._freedom = np.array([float(model.freedom) for model in models])
        self._lowest = np.array([FLOOR * model.total for model in models])
        self._largest = np.where(self._sizes.max(axis=1) > 0, self._sizes.max(axis=1), 1.0)
        self._grid = np.linspace(0.0, np.log1p(self._largest * self._bound()), NODES, axis=1)
        model = np.arange(len(models))[:, None]
        self._rho = self._stationary(self._grid, np.broadcast_to(model, self._grid.shape))[0]

    def between(self, ratio: Array) -> Array:
        """Σ squares/(1+ratio·sizes) for ratios (..., H)."""
        return np.asarray((self._squares / (1.0 + ratio[..., None] * self._sizes)).sum(-1))

    def best(self, within: Array) -> Array:
        """The ratio that minimises the profile, for residual sums of squares ``within`` (B, H).

        At least 0; exactly 0 on the boundary and where no contrast is left.  Each entry depends
        on its own sum of squares alone.
        """
        within = np.maximum(within, self._lowest)
        falling = self._rho > within[..., None]
        falling[..., -1] = False
        minima = ~falling
        minima[..., 1:] &= falling[..., :-1]
        best = np.zeros_like(within)
        least = np.full_like(within, np.inf)
        while minima.any():  # nearly always once: a profile with two minima is rare
            row, model = np.nonzero(minima.any(axis=-1))
            node = minima[row, model].argmax(axis=-1)
            minima[row, model, node] = False
            place = self._polish(within[row, model], model, node)
            ratio = np.expm1(place) / self._largest[model]
            height = self._height(ratio, within[row, model], model)
            better = height < least[row, model]
            best[row[better], model[better]] = ratio[better]
            least[row[better], model[better]] = height[better]
        return best

    def _bound(self) -> Array:
        """A ratio beyond which no model is stationary for any R that is not below the floor."""
        there = self._sizes > 0
        count = np.maximum(there.sum(axis=1), 1)
        reach = np.divide(self._squares, self._sizes, out=np.zeros_like(self._sizes), where=there).sum(axis=1)
        smallest = np.where(there, self._sizes, np.inf).min(axis=1)
        lowest = np.where(self._lowest > 0, self._lowest, 1.0)
        return np.asarray(np.maximum(1.0 / smallest, 2.0 * self._freedom * reach / (count * lowest)))

    def _stationary(self, place: Array, model: NDArray[np.intp]) -> tuple[Array, Array]:
        """ρ and its slope in s at ``place`` of ``model``, both of the same shape."""
        scale = self._largest[model]
        sizes, squares = self._sizes[model], self._squares[model]
        weight = 1.0 / (1.0 + (np.expm1(place) / scale)[..., None] * sizes)
        pull = sizes * weight
        bent = squares * weight
        up, across = (bent * pull).sum(-1), pull.sum(-1)
        up_slope, across_slope = -2.0 * (bent * pull * pull).sum(-1), -(pull * pull).sum(-1)
        across = np.where(across > 0, across, 1.0)  # no contrast: up is 0 too
        freedom = self._freedom[model]
        rho = freedom * up / across - bent.sum(-1)
        slope = freedom * (up_slope * across - up * across_slope) / across**2 + up
        return rho, slope * np.exp(place) / scale

    def _polish(self, within: Array, model: NDArray[np.intp], node: NDArray[np.intp]) -> Array:
        """Solve ρ = R between a node and the one before it; the boundary where the node is 0."""
        high = self._grid[model, node].copy()
        low = self._grid[model, np.maximum(node - 1, 0)].copy()
        place = 0.5 * (low + high)
        open_ = np.flatnonzero(node > 0)
        for _ in range(STEPS):
            here, r = place[open_], within[open_]
            rho, slope = self._stationary(here, model[open_])
            above = rho > r
            low[open_] = np.where(above, here, low[open_])
            high[open_] = np.where(above, high[open_], here)
            # Newton on log ρ, which is a straight line in s when all sites are equal
            sound = (rho > 0) & (slope < 0)
            height = np.log(np.where(sound, rho, r) / r)
            step = np.divide(height * rho, slope, out=np.zeros_like(rho), where=sound)
            newton = here - step
            done = (sound & (np.abs(step) < ENOUGH)) | (high[open_] - low[open_] < ENOUGH)
            inside = done | (sound & (newton > low[open_]) & (newton < high[open_]))
            place[open_] = np.where(inside, newton, 0.5 * (low[open_] + high[open_]))
            open_ = open_[~done]
            if open_.size == 0:
                break
        return place

    def _height(self, ratio: Array, within: Array, model: NDArray[np.intp]) -> Array:
        spread = 1.0 + ratio[..., None] * self._sizes[model]
        rest = within + (self._squares[model] / spread).sum(-1)
        return np.asarray(self._freedom[model] * np.log(rest) + np.log(spread).sum(-1))
