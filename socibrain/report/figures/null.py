"""What shuffling gives when nothing is there, and what was observed."""

from __future__ import annotations

from typing import Literal

import numpy as np

from socibrain.link.finding import Finding
from socibrain.report.figures.look import INK, LINE, SIGN, SOFT, Drawing, blank
from socibrain.report.notation import count, decimal

BINS = 45


def null_figure(finding: Finding) -> Drawing:
    """Histogram of the shuffled t, the observed t marked; its mirror too in a two-sided test."""
    figure, axes = blank(4.2, 2.7)
    null = finding.null[np.isfinite(finding.null)]
    axes.hist(null, bins=BINS, color=LINE, lw=0)
    axes.axvline(finding.statistic, color=SIGN, lw=2.2)
    if not finding.hypothesis.one_sided:
        axes.axvline(-finding.statistic, color=SIGN, lw=1.2, ls=(0, (3, 3)))
    reach = 1.12 * max(float(np.abs(null).max(initial=0.0)), abs(finding.statistic))
    axes.set_xlim(-reach, reach)
    axes.set_ylim(top=axes.get_ylim()[1] * 1.16)
    side = _side(finding.statistic, reach)
    axes.annotate(
        f"observed {decimal(finding.statistic)}", (finding.statistic, 0.96), (6 if side == "left" else -6, 0),
        xycoords=axes.get_xaxis_transform(), textcoords="offset points", color=INK, size=9, ha=side, va="top",
    )  # fmt: skip
    several = finding.n_sites > 1
    axes.set_xlabel(f"t when {'people are shuffled within sites' if several else 'all people are shuffled'}")
    axes.set_yticks([])
    axes.spines["left"].set_visible(False)
    axes.tick_params(color=SOFT, length=3)
    mirror = (
        "" if finding.hypothesis.one_sided else "; a dashed line marks the same distance on the other side"
    )
    return Drawing(
        figure,
        f"Histogram of t over {count(null.size)} shuffles; a line marks the observed t of "
        f"{decimal(finding.statistic)}{mirror}.",
    )


def _side(statistic: float, reach: float) -> Literal["left", "right"]:
    """Which end of the text stands at the line: outwards of it where there is room."""
    outwards = abs(statistic) < 0.5 * reach
    return "left" if (statistic > 0) == outwards else "right"
