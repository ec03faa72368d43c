"""How one measure of brains is spread over people, site by site."""

from __future__ import annotations

import numpy as np
import pandas as pd

from socibrain.report.figures.look import LINE, MAIN, PAPER, SOFT, Drawing, blank
from socibrain.report.notation import SMALLEST_SHOWN

MOST = 30


def sites_with_enough(values: pd.Series, sites: pd.Series) -> list[str]:
    """Sites where at least five people have a value, in alphabetical order, at most 30."""
    people = sites[values.notna()].value_counts()
    return sorted(str(site) for site in people.index[people >= SMALLEST_SHOWN])[:MOST]


def spread_figure(values: pd.Series, sites: pd.Series, label: str) -> Drawing:
    """One row a site, one dot a person; the row of a study's only site needs no name."""
    shown = sites_with_enough(values, sites)
    figure, axes = blank(5.2, 0.26 * len(shown) + 0.8)
    for row, site in enumerate(reversed(shown)):
        own = np.sort(values[(sites == site) & values.notna()].to_numpy(dtype=np.float64))
        axes.axhline(row, color=LINE, lw=0.6, zorder=0)
        axes.plot(own, np.full(own.size, row), "o", ms=6, mfc=MAIN, mec=PAPER, mew=0.7, alpha=0.7, ls="none")
    several = len(set(sites)) > 1
    axes.set_yticks(range(len(shown)), list(reversed(shown)) if several else [""] * len(shown))
    axes.set_ylim(-0.7, len(shown) - 0.3)
    axes.spines["left"].set_visible(False)
    axes.tick_params(axis="y", length=0)
    axes.tick_params(axis="x", color=SOFT, length=3)
    axes.set_xlabel(label)
    rows = f", one row for each of {len(shown)} sites" if several else ""
    return Drawing(figure, f"{label}: one dot for each person{rows}.")
