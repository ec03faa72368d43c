"""Who really turns to whom: true ties, station by station, before anybody writes anything down."""

from __future__ import annotations

from dataclasses import dataclass

import igraph
import numpy as np

from demo_cohort.people import Person
from demo_cohort.words import STATIONS
from socibrain.streams import stream

CAP = 6
WITHOUT_CORE = ("Skelmarra", "Ashvoren")
"""Stations where no inner circle is planted."""
CORE_IN_SMALL, CORE_IN_LARGE, LARGE = 6, 7, 26
"""Size of an inner circle, in stations of fewer than 26 crew and of 26 or more."""
AROUND_CORE = (3, 4)
"""Fewest and most ties of an inner circle's member to others when the circle is made."""
WANTED = 5
"""Ties that others want in stations with an inner circle; they may come to have one more."""


@dataclass(frozen=True)
class Station:
    """True relations in one station, over its crew in order.

    ``advice`` and ``company`` are symmetric (n, n); ``core`` marks the inner circle.  ``constraint``
    (Burt 1992) is taken on ``advice`` by igraph, never by socibrain.
    """

    name: str
    crew: list[Person]
    advice: np.ndarray
    company: np.ndarray
    core: np.ndarray
    constraint: np.ndarray


def make_stations(people: list[Person], seed: int) -> list[Station]:
    """True relations of all stations."""
    return [
        _station(name, [person for person in people if person.station == name], seed) for name in STATIONS
    ]


def _station(name: str, crew: list[Person], seed: int) -> Station:
    draw = stream(seed, "ties", name)
    n = len(crew)
    watch = draw.permutation(np.arange(n) % (3 if n < 24 else 4))
    core = np.zeros(n, dtype=bool)
    if name not in WITHOUT_CORE:
        years = np.array([person.years for person in crew], dtype=float)
        standing = 0.5 * (years - years.mean()) / years.std() + draw.standard_normal(n)
        core[np.argsort(-standing)[: CORE_IN_SMALL if n < LARGE else CORE_IN_LARGE]] = True
    advice = _advice(core, watch, draw)
    graph = igraph.Graph.Adjacency(advice.astype(int).tolist(), mode="undirected")
    return Station(
        name,
        crew,
        advice,
        _company(watch, advice, draw),
        core,
        np.array(graph.constraint(), dtype=float),
    )


def _advice(core: np.ndarray, watch: np.ndarray, draw: np.random.Generator) -> np.ndarray:
    """An inner circle who all turn to each other, and watches of unequal openness around it.

    The circle has more ties inside than its degrees alone would bring: everyone in it knows
    everyone in it, while most others keep to one of them and to their own watch.  Around a circle
    all others have nearly the same number of ties, so that nobody is halfway to belonging.
    """
    n = len(core)
    ties = np.outer(core, core) & ~np.eye(n, dtype=bool)
    outside = np.flatnonzero(~core)
    for member in np.flatnonzero(core):
        wish = np.where(watch[outside] == watch[member], 3.0, 1.0) / (
            1.0 + 2.0 * ties[outside][:, core].sum(1)
        )
        around = int(draw.integers(*AROUND_CORE, endpoint=True))
        chosen = draw.choice(outside, size=around, replace=False, p=wish / wish.sum())
        ties[member, chosen] = ties[chosen, member] = True
    openness = draw.random(n) ** 2
    wanted = np.full(n, WANTED) if core.any() else draw.integers(4, 10, size=n)
    still = [int(person) for person in draw.permutation(outside)]
    while still:  # who lacks most looks next
        person = max(still, key=lambda each: wanted[each] - ties[each].sum())
        still.remove(person)
        while ties[person].sum() < wanted[person]:
            free = ~core & ~ties[person] & (ties.sum(axis=1) < wanted + 1)
            free[person] = False
            if not free.any():
                break
            shared = ties.astype(int) @ ties[person].astype(int)
            elsewhere = 0.05 + 2.0 * openness * openness[person]
            wish = free * np.where(watch == watch[person], 1.0 + shared, elsewhere)
            other = draw.choice(n, p=wish / wish.sum())
            ties[person, other] = ties[other, person] = True
    return ties


def _company(watch: np.ndarray, advice: np.ndarray, draw: np.random.Generator) -> np.ndarray:
    """Whom people spend free time with: mostly their own watch, often people they turn to anyway."""
    n = len(watch)
    ties = np.zeros((n, n), dtype=bool)
    for person in draw.permutation(n):
        for _ in range(int(draw.integers(3, 6))):
            free = ~ties[person] & (ties.sum(axis=1) < CAP)
            free[person] = False
            if not free.any() or ties[person].sum() >= CAP:
                break
            wish = free * (np.where(watch == watch[person], 1.0, 0.15) + 1.0 * advice[person])
            other = draw.choice(n, p=wish / wish.sum())
            ties[person, other] = ties[other, person] = True
    return ties


def name_ties(
    ties: np.ndarray, *, surely: np.ndarray, maybe: float, draw: np.random.Generator
) -> list[list[int]]:
    """Whom each person would name, so that every tie is named at least once, within the cap.

    Both people name the tie where ``surely`` holds, elsewhere the second one with chance ``maybe``.
    """
    named: list[list[int]] = [[] for _ in ties]
    for one, other in np.argwhere(ties & surely):
        named[one].append(int(other))
    pairs = draw.permutation(np.argwhere(np.triu(ties & ~surely)))
    for one, other in pairs:
        first, second = (one, other) if len(named[one]) < len(named[other]) else (other, one)
        named[first].append(int(second))
    for one, other in draw.permutation(pairs):
        first, second = (one, other) if other in named[one] else (other, one)
        if len(named[second]) < CAP and draw.random() < maybe:
            named[second].append(int(first))
    return [[int(other) for other in draw.permutation(others)] if others else [] for others in named]
