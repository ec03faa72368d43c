"""Every person of one finding, predictor against outcome, with the fitted slope."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from numpy.typing import NDArray

from socibrain.link.finding import Finding
from socibrain.report.figures.look import INK, LINE, MAIN, MAIN_WASH, PAPER, SIGN, Drawing, blank

Array = NDArray[np.float64]


def person_figure(finding: Finding, predictor: str, outcome: str) -> Drawing:
    """Values of everyone as they were compared, the slope, and the slopes its interval allows."""
    figure, axes = blank(5.2, 3.9)
    x, y = ordered(finding)
    draw_axes_at_zero(axes)
    draw_slope(axes, finding, x)
    axes.plot(x, y, "o", ms=5.2, mfc=MAIN, mec=PAPER, mew=0.7, alpha=0.8, ls="none")
    axes.set_xlabel(f"{predictor}\n({treated(finding)})")
    axes.set_ylabel(f"{outcome}\n({treated(finding)})")
    mean = "the site's mean" if finding.n_sites > 1 else "the mean"
    alternative = (
        f"One dot for each of {finding.n} people: {predictor} across, {outcome} up, both as differences from "
        f"{mean}. A line shows the fitted slope, a band the slopes inside the interval."
    )
    return Drawing(figure, alternative)


def treated(finding: Finding) -> str:
    """What was done to the values that are drawn."""
    if finding.n_sites > 1:
        return f"less the site's mean{', adjusted' if finding.hypothesis.adjust else ''}"
    return "adjusted" if finding.hypothesis.adjust else "less the mean"


def ordered(finding: Finding, chosen: NDArray[np.bool_] | None = None) -> tuple[Array, Array]:
    """Values from left to right, so that the order of the people table cannot be read back."""
    keep = np.ones(finding.n, dtype=bool) if chosen is None else chosen
    x, y = finding.predictor_residual[keep], finding.outcome_residual[keep]
    order = np.lexsort((y, x))
    return x[order], y[order]


def draw_axes_at_zero(axes: Axes) -> None:
    """Faint lines where a person is like the mean of their site."""
    axes.axhline(0, color=LINE, lw=0.8, zorder=0)
    axes.axvline(0, color=LINE, lw=0.8, zorder=0)


def draw_slope(axes: Axes, finding: Finding, x: Array) -> None:
    """The fitted slope through the means, with a band between the interval's two ends.

    The interval is standardised; the raw slope over the standardised one turns it to raw units.
    """
    ends = np.array([x.min(), x.max()]) * 1.04
    if finding.estimate != 0 and np.isfinite([finding.ci_low, finding.ci_high]).all():
        unit = finding.raw_estimate / finding.estimate
        reach = np.linspace(ends[0], ends[1], 25)
        low, high = finding.ci_low * unit * reach, finding.ci_high * unit * reach
        axes.fill_between(reach, low, high, color=MAIN_WASH, lw=0, zorder=0.5)
    axes.plot(ends, finding.raw_estimate * ends, color=SIGN, lw=2, zorder=3)
    axes.tick_params(color=INK, length=0)
