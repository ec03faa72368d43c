"""Who is tied to whom in one site, without saying who or where."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import networkx
import numpy as np
from matplotlib.axes import Axes
from matplotlib.lines import Line2D
from matplotlib.patches import FancyArrowPatch
from numpy.typing import NDArray

from socibrain.report.figures.look import (
    CLASSES,
    INK,
    OTHERS,
    OTHERS_SHAPE,
    PAPER,
    SHAPES,
    SOFT,
    Drawing,
    blank,
)
from socibrain.report.material import ReportInput
from socibrain.report.notation import SMALLEST_SHOWN, is_small

Array = NDArray[np.float64]
LARGEST_DRAWN = 150
OTHER = "other or unknown"


@dataclass(frozen=True)
class DrawnSite:
    """One site's network ready to be drawn: ties (n, n) 0/1, and n answers, classes and sizes.

    ``classes`` are class names with small ones folded together; ``position`` is NaN where
    undefined.  With ``few_silent`` (or few who answered) nothing drawn may tell them from the others.
    """

    question: str
    ties: Array
    answered: NDArray[np.bool_]
    classes: tuple[str, ...]
    position: Array

    @property
    def few_silent(self) -> bool:
        """Whether so few people did not answer, or so few did, that their number is hidden."""
        return _few_silent(self.answered)


def choose_site(material: ReportInput, *, question: str, column: str) -> DrawnSite | None:
    """The site that shows most classes and, among those, has the middle number of people.

    Sites where one to four people did not answer come last.  None when no site has ties and between
    5 and 150 people.  ``column`` is the position that gives the sizes.
    """
    networks = [
        network
        for network in material.cohort.social
        if network.question == question and SMALLEST_SHOWN <= len(network.people) <= LARGEST_DRAWN
    ]
    networks = [network for network in networks if network.ties.any()]
    if not networks:
        return None
    middle = float(np.median([len(network.people) for network in networks]))
    chosen = min(
        networks,
        key=lambda network: (
            _few_silent(network.answered),
            -len(set(fold_classes(network.roles))),
            abs(len(network.people) - middle),
            network.site,
        ),
    )
    persons = material.cohort.persons.drop_duplicates("person").set_index("person")
    position = np.full(len(chosen.people), np.nan)
    if column in persons:
        position = persons[column].reindex(list(chosen.people)).to_numpy(dtype=np.float64)
    return DrawnSite(question, chosen.ties, chosen.answered, fold_classes(chosen.roles), position)


def fold_classes(roles: Sequence[str | None]) -> tuple[str, ...]:
    """Class of each person; classes of fewer than five people become one, like those beyond six.

    While that one is small itself, the smallest class left joins it.

    >>> fold_classes(["deck"] * 6 + ["engine"] * 5 + ["helm"] * 2)[-3:]
    ('other or unknown', 'other or unknown', 'other or unknown')
    """
    people = Counter(role for role in roles if role is not None)
    kept = [role for role, size in people.most_common(len(CLASSES)) if not is_small(size)]
    while kept and is_small(len(roles) - sum(people[role] for role in kept)):
        kept.pop()
    return tuple(role if role is not None and role in kept else OTHER for role in roles)


def network_figure(site: DrawnSite, *, size_label: str) -> Drawing:
    """People as shapes by class, larger with a higher position, hollow without answers.

    Where few did not answer they are drawn like everybody, and no tie shows who named whom: the
    people from whom no tie goes out would be known.
    """
    ties = np.maximum(site.ties, site.ties.T) if site.few_silent else site.ties
    hollow = ~site.answered if not site.few_silent else np.zeros(len(ties), dtype=bool)
    directed = bool((ties != ties.T).any())
    places = _places(ties)
    figure, axes = blank(6.4, 5.6)
    axes.set_axis_off()
    axes.set_aspect("equal")
    _draw_ties(axes, ties, places)
    styles = class_styles(site.classes)
    areas = _areas(site.position)
    for person in np.lexsort((places[:, 1], places[:, 0])):
        colour, shape = styles[site.classes[person]]
        axes.plot(
            [places[person, 0]], [places[person, 1]], shape, ms=np.sqrt(areas[person]), zorder=3,
            mew=1.8 if hollow[person] else 0.8,
            mfc=PAPER if hollow[person] else colour, mec=colour if hollow[person] else PAPER,
        )  # fmt: skip
    axes.margins(0.08)
    figure.legend(
        handles=_legend(styles, directed=directed, hollow=bool(hollow.any()), size_label=size_label),
        loc="outside lower center", ncols=3, frameon=False, fontsize=9, labelcolor=INK,
        handletextpad=0.5, columnspacing=1.6,
    )  # fmt: skip
    return Drawing(figure, _alternative(site, size_label))


def class_styles(classes: Sequence[str]) -> Mapping[str, tuple[str, str]]:
    """Colour and shape of each class, in alphabetical order; all others last."""
    named = sorted(set(classes) - {OTHER})
    styles = {name: (CLASSES[place], SHAPES[place]) for place, name in enumerate(named)}
    if OTHER in classes:
        styles[OTHER] = (OTHERS, OTHERS_SHAPE) if named else (CLASSES[0], SHAPES[0])
    return styles


def _places(ties: Array) -> Array:
    """Where each person is drawn: the largest connected part in the middle, the rest below it."""
    graph = networkx.from_numpy_array((ties + ties.T) > 0)
    parts = sorted(networkx.connected_components(graph), key=lambda part: (-len(part), min(part)))
    main = graph.subgraph(sorted(parts[0]))
    found = networkx.kamada_kawai_layout(main)
    places = np.zeros((len(ties), 2))
    for person, place in found.items():
        places[person] = place
    apart = [person for part in parts[1:] for person in sorted(part)]
    for number, person in enumerate(apart, start=1):
        places[person] = (-1 + 2 * number / (len(apart) + 1), -1.28)
    return places


def _areas(position: Array) -> Array:
    """Marker areas of the lower, middle and upper third; whoever has no position is in the middle.

    >>> _areas(np.array([1, 2, 3, 4, np.nan, 5, 6])).tolist()
    [80.0, 80.0, 180.0, 180.0, 180.0, 380.0, 380.0]
    """
    small, middle, large = 80.0, 180.0, 380.0
    if not np.isfinite(position).any():
        return np.full(position.size, middle)
    low, high = np.nanquantile(position, [1 / 3, 2 / 3])
    return np.where(position < low, small, np.where(position > high, large, middle))


def _draw_ties(axes: Axes, ties: Array, places: Array) -> None:
    for one, other in np.argwhere((ties + ties.T) > 0):
        if one > other:
            continue
        if ties[one, other] and ties[other, one]:
            axes.plot(
                places[[one, other], 0], places[[one, other], 1], color=SOFT, lw=1.5, alpha=0.75, zorder=1
            )
        else:
            start, end = (one, other) if ties[one, other] else (other, one)
            axes.add_patch(
                FancyArrowPatch(
                    tuple(places[start]), tuple(places[end]), arrowstyle="-|>", mutation_scale=8,
                    shrinkA=4, shrinkB=8, color=SOFT, lw=0.7, alpha=0.6, zorder=1,
                )
            )  # fmt: skip


def _legend(
    styles: Mapping[str, tuple[str, str]], *, directed: bool, hollow: bool, size_label: str
) -> list[Line2D]:
    def entry(label: str, **style: object) -> Line2D:
        return Line2D([], [], label=label, **style)  # type: ignore[arg-type]

    handles = [
        entry(
            name if list(styles) != [OTHER] else "person",
            marker=shape,
            ls="none",
            ms=9,
            mfc=colour,
            mec=PAPER,
        )
        for name, (colour, shape) in styles.items()
    ]
    if hollow:
        handles.append(entry("did not answer", marker="o", ls="none", ms=9, mfc=PAPER, mec=SOFT, mew=1.8))
    handles.append(entry("each named the other" if directed else "tie", color=SOFT, lw=1.5))
    if directed:
        handles.append(entry("one named the other", color=SOFT, lw=0.7, marker=">", markevery=[1], ms=4))
    if size_label:
        handles.append(
            entry(f"larger: higher {size_label}", marker="o", ls="none", ms=13, mfc="none", mec=SOFT)
        )
    return handles


def _alternative(site: DrawnSite, size_label: str) -> str:
    sizes = f", in three sizes that go up with {size_label}" if size_label else ""
    hollow = "" if site.few_silent or site.answered.all() else "people who did not answer are hollow; "
    return (
        f"Network by the question {site.question}: a shape for each person{sizes}; {hollow}"
        "people tied to nobody stand below."
    )


def _few_silent(answered: NDArray[np.bool_]) -> bool:
    return is_small(int((~answered).sum())) or is_small(int(answered.sum()))
