"""One measure of regions, averaged over people, gathered by system."""

from __future__ import annotations

import numpy as np
import pandas as pd

from socibrain.report.figures.look import LINE, MAIN, PAPER, SOFT, Drawing, blank


def systems_figure(regions: pd.DataFrame, column: str, label: str) -> Drawing:
    """One row a system, one diamond a region: the mean of its values over everyone."""
    means = regions.groupby(["system", "region"], sort=True)[column].mean().dropna().reset_index()
    systems = sorted(means["system"].unique())
    figure, axes = blank(5.2, 0.3 * len(systems) + 0.8)
    for row, system in enumerate(reversed(systems)):
        own = np.sort(means.loc[means["system"] == system, column].to_numpy(dtype=np.float64))
        axes.axhline(row, color=LINE, lw=0.6, zorder=0)
        axes.plot(own, np.full(own.size, row), "D", ms=5, mfc=MAIN, mec=PAPER, mew=0.7, alpha=0.75, ls="none")
    axes.set_yticks(range(len(systems)), list(reversed(systems)))
    axes.set_ylim(-0.7, len(systems) - 0.3)
    axes.spines["left"].set_visible(False)
    axes.tick_params(axis="y", length=0)
    axes.tick_params(axis="x", color=SOFT, length=3)
    axes.set_xlabel(f"{label}, mean over people")
    return Drawing(
        figure, f"{label}: one diamond for each region, one row for each of {len(systems)} systems."
    )
