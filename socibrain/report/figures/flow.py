"""The two-branch flow: who is at each step, and why the others are not."""

from __future__ import annotations

import re
import textwrap
from dataclasses import dataclass

import pandas as pd
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from socibrain.report.figures.look import INK, LINE, MAIN, MAIN_WASH, SOFT, Drawing
from socibrain.report.notation import breakdown, count

HEADINGS = {"social": "Questionnaire", "brain": "Brain networks"}
ROW, COLUMN, LABEL = 1.0, 3.5, 1.6
MOST = 2
SHOWN = ["label", "people", "left_out", "reasons"]
_REASON = re.compile(r"(.+?): (\d+)(?:; |$)")


@dataclass(frozen=True)
class Step:
    """One step of a branch, and lines on who did not reach it."""

    label: str
    people: int
    left_out: int
    reasons: tuple[str, ...]


def flow_figure(flow: pd.DataFrame) -> Drawing:
    """Steps of each branch from top to bottom, meeting in those who are in both."""
    branches = {str(name): read_steps(rows) for name, rows in flow.groupby("branch", sort=False)}
    both = branches.pop("both", [])
    depth = max(len(steps) for steps in branches.values())
    height = depth * ROW + (1.1 if both else 0.2)
    figure = Figure(figsize=(COLUMN * max(len(branches), 1.4) + 0.3, height * 0.92 + 0.2))
    axes = figure.add_axes((0, 0, 1, 1))
    axes.set_axis_off()
    axes.set_xlim(-0.1, COLUMN * max(len(branches), 1.4) + 0.2)
    axes.set_ylim(-height + 0.5, 0.75)
    for place, (name, steps) in enumerate(branches.items()):
        _draw_branch(axes, place * COLUMN, HEADINGS.get(name, name), steps)
    for step in both:
        _draw_meeting(axes, step, [len(steps) for steps in branches.values()])
    return Drawing(figure, _alternative(branches, both))


def read_steps(rows: pd.DataFrame) -> list[Step]:
    """The steps of one branch in their order; counts by reason with small cells hidden."""
    return [
        Step(str(label), int(people), int(left_out), _reasons(str(reasons)))
        for label, people, left_out, reasons in rows.sort_values("step")[SHOWN].to_numpy().tolist()
    ]


def _reasons(told: str) -> tuple[str, ...]:
    found = _REASON.findall(told)
    if len(found) <= 1:
        return tuple(reason for reason, _ in found) or ((told,) if told else ())
    shown = breakdown([int(people) for _, people in found])
    return tuple(f"{people}  {reason}" for (reason, _), people in zip(found, shown, strict=True))


def _draw_branch(axes: Axes, left: float, heading: str, steps: list[Step]) -> None:
    axes.text(left, 0.55, heading, color=MAIN, weight="bold", size=11)
    largest = max((step.people for step in steps), default=1) or 1
    axes.plot([left + 0.06] * 2, [0.2, -ROW * (len(steps) - 1) - 0.3], color=LINE, lw=1.2, zorder=0)
    for number, step in enumerate(steps):
        top = -ROW * number
        axes.barh(top, (LABEL - 0.12) * step.people / largest, 0.42, left=left, color=MAIN_WASH, zorder=1)
        axes.plot([left] * 2, [top - 0.21, top + 0.21], color=MAIN, lw=3, solid_capstyle="butt", zorder=2)
        axes.text(left + 0.1, top, count(step.people), size=13, weight="bold", va="center_baseline", zorder=3)
        axes.text(left + LABEL, top, step.label, size=11, va="center_baseline", zorder=3)
        if step.left_out:
            _draw_loss(axes, left + 0.06, top + ROW / 2, step)


def _draw_loss(axes: Axes, left: float, middle: float, step: Step) -> None:
    room = 2 if len(step.reasons) == 1 else 1
    lines = [
        f"− {count(step.left_out)}",
        *(line for each in step.reasons[:MOST] for line in _fold(each, lines=room)),
    ]
    if len(step.reasons) > MOST:
        lines.append("and other reasons, see below")
    axes.plot([left, left + 0.18], [middle] * 2, color=LINE, lw=1.2)
    axes.text(left + 0.24, middle, lines[0], size=9, color=INK, weight="bold", va="center_baseline")
    axes.text(left + 0.86, middle, "\n".join(lines[1:]), size=8, color=SOFT, va="center", linespacing=1.25)


def _draw_meeting(axes: Axes, step: Step, depths: list[int]) -> None:
    level = -ROW * max(depths) - 0.15
    centre = COLUMN * (len(depths) - 1) / 2 + 0.55
    for place, depth in enumerate(depths):
        start = place * COLUMN + 0.06
        axes.plot(
            [start, start, centre], [-ROW * (depth - 1) - 0.21, level, level], color=MAIN, lw=1.6, zorder=0
        )
    axes.barh(level, 1.9, 0.5, left=centre - 0.4, color=MAIN, zorder=2)
    axes.text(
        centre + 0.55, level, f"{count(step.people)}  {step.label}", size=12, weight="bold",
        color="#fffdf9", ha="center", va="center_baseline", zorder=3,
    )  # fmt: skip


def _fold(reason: str, *, lines: int) -> list[str]:
    return textwrap.wrap(reason, 38, max_lines=lines, placeholder=" …")


def _alternative(branches: dict[str, list[Step]], both: list[Step]) -> str:
    told = [
        f"{HEADINGS.get(name, name)}: " + ", ".join(f"{count(step.people)} {step.label}" for step in steps)
        for name, steps in branches.items()
    ]
    told += [f"{count(step.people)} {step.label}" for step in both]
    return "Flow of people through the study. " + "; ".join(told) + "."
