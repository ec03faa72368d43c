"""Every person of one finding again, each site apart."""

from __future__ import annotations

from collections import Counter

import numpy as np
from matplotlib.figure import Figure

from socibrain.link.finding import Finding
from socibrain.report.figures.look import INK, LINE, MAIN, PAPER, SIGN, Drawing
from socibrain.report.figures.person_by_person import ordered
from socibrain.report.notation import SMALLEST_SHOWN

ACROSS, MOST = 6, 24


def drawn_sites(finding: Finding) -> list[str]:
    """Sites with enough people to be drawn apart, in alphabetical order, at most 24."""
    people = Counter(finding.sites)
    return sorted(site for site in people if people[site] >= SMALLEST_SHOWN)[:MOST]


def site_panels(finding: Finding) -> Drawing:
    """One small panel a site, all on the same axes, each with the slope fitted over all sites."""
    sites = drawn_sites(finding)
    across = min(ACROSS, len(sites))
    down = -(-len(sites) // across)
    figure = Figure(figsize=(1.5 * across + 0.2, 1.5 * down + 0.1), layout="constrained")
    all_axes = figure.subplots(down, across, sharex=True, sharey=True, squeeze=False).ravel()
    x = finding.predictor_residual
    ends = np.array([x.min(), x.max()])
    of_site = np.array(finding.sites)
    for place, axes in enumerate(all_axes):
        axes.set_axis_off()
        if place >= len(sites):
            continue
        axes.axhline(0, color=LINE, lw=0.7, zorder=0)
        axes.axvline(0, color=LINE, lw=0.7, zorder=0)
        axes.plot(ends, finding.raw_estimate * ends, color=SIGN, lw=1.1, zorder=1)
        own_x, own_y = ordered(finding, of_site == sites[place])
        axes.plot(own_x, own_y, "o", ms=4, mfc=MAIN, mec=PAPER, mew=0.5, alpha=0.85, ls="none")
        axes.set_title(_short_name(sites[place]), size=9, color=INK, loc="left", pad=2)
    return Drawing(
        figure, f"The same people in {len(sites)} panels, one a site, with the common slope in each."
    )


def _short_name(site: str) -> str:
    return site if len(site) <= 18 else f"{site[:17]}…"
