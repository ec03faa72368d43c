"""What people wrote: true ties seen through a questionnaire, with everything that goes wrong in one."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeVar

import numpy as np
from rapidfuzz.distance import Levenshtein

from demo_cohort.people import Person
from demo_cohort.ties import CAP, Station, name_ties
from demo_cohort.words import FURTHEST_SLIP, OUTSIDERS
from socibrain.streams import stream


@dataclass(frozen=True)
class Slips:
    """How often each thing goes wrong in the answers to one question."""

    misspelt: int
    other_case: int
    twice: int
    oneself: int
    outsiders: int
    named_nobody: int
    """People who answered, and named nobody."""
    old_station: int
    """Answers in the station that the moved person left which still name that person."""


SLIPS = {
    "advice": Slips(26, 18, 9, 6, 15, 2, 4),
    "free_time": Slips(22, 16, 8, 5, 17, 3, 3),
}
MOVED_FROM, MOVED_TO = "Brevolk", "Mirrowick"
"""One person is on the roster of the second; people at the first still name that person."""
CHANCE_OF_NICKNAME = 0.5

T = TypeVar("T")
Written = dict[str, list[str]]
"""Person id -> what that person wrote, in order."""


def moved_person(stations: list[Station]) -> Person:
    """The one who moved: a scanned member outside the inner circle, first on the roster."""
    station = next(each for each in stations if each.name == MOVED_TO)
    return next(p for p, core in zip(station.crew, station.core, strict=True) if p.scanned and not core)


def write_answers(stations: list[Station], question: str, seed: int) -> Written:
    """Everything written in answer to one question, by everyone who answered."""
    draw = stream(seed, "answers", question)
    slips = SLIPS[question]
    named: dict[str, list[Person]] = {}
    everyone = {person.id: person for station in stations for person in station.crew}
    mates: dict[str, list[Person]] = {}
    for station in stations:
        for person, others in zip(station.crew, _choices(station, question, draw), strict=True):
            mates[person.id] = station.crew
            if person.answered:
                named[person.id] = [station.crew[other] for other in others]
    for chooser in _some(sorted(named), slips.named_nobody, draw):
        named[chooser] = []
    written: Written = {
        chooser: [_spell(person, draw) for person in others] for chooser, others in named.items()
    }
    # what is added needs room under the cap; what is altered needs a name written out in full
    for chooser in _some(_with_room(written), slips.twice, draw):
        written[chooser].append(str(draw.choice(written[chooser])))
    for chooser in _some(_with_room(written), slips.oneself, draw):
        written[chooser].insert(0, everyone[chooser].name)
    for chooser in _some(_with_room(written), slips.outsiders, draw):
        written[chooser].append(str(draw.choice(OUTSIDERS)))
    mover = moved_person(stations)
    left_behind = [chooser for chooser in _with_room(written) if everyone[chooser].station == MOVED_FROM]
    for chooser in _some(left_behind, slips.old_station, draw):
        written[chooser].append(mover.name)
    full = _untouched(written, named)
    for number, (chooser, place) in enumerate(_some(full, slips.misspelt + slips.other_case, draw)):
        name = written[chooser][place]
        if number < slips.misspelt:
            written[chooser][place] = _misspell(name, mates[chooser], draw)
        else:
            written[chooser][place] = name.upper() if number % 2 else name.replace(" ", "  ").lower()
    return written


def _choices(station: Station, question: str, draw: np.random.Generator) -> list[list[int]]:
    if question == "advice":
        surely = np.outer(station.core, station.core)
        return name_ties(station.advice, surely=surely, maybe=0.85, draw=draw)
    nowhere = np.zeros_like(station.company)
    return name_ties(station.company, surely=nowhere, maybe=0.75, draw=draw)


def _spell(person: Person, draw: np.random.Generator) -> str:
    if person.nickname and draw.random() < CHANCE_OF_NICKNAME:
        return person.nickname
    return person.name


def _some(choices: list[T], count: int, draw: np.random.Generator) -> list[T]:
    return [choices[int(place)] for place in draw.permutation(len(choices))[:count]]


def _with_room(written: Written) -> list[str]:
    """People who named somebody and could name one more."""
    return [chooser for chooser in sorted(written) if 0 < len(written[chooser]) < CAP]


def _untouched(written: Written, named: dict[str, list[Person]]) -> list[tuple[str, int]]:
    """Where a crew member stands once in an answer, by the full name."""
    return [
        (chooser, place)
        for chooser in sorted(written)
        for place, text in enumerate(written[chooser])
        if written[chooser].count(text) == 1 and text in {person.name for person in named[chooser]}
    ]


def _misspell(name: str, mates: list[Person], draw: np.random.Generator) -> str:
    """A slip of the pen that is still nearer to the right name than to anybody else's."""
    while True:
        wrong = name
        for _ in range(int(draw.integers(1, FURTHEST_SLIP + 1))):
            place = int(draw.choice([place for place in range(1, len(wrong)) if wrong[place] != " "]))
            kind = int(draw.integers(3))
            if kind == 0:
                wrong = wrong[:place] + wrong[place + 1 :]
            elif kind == 1:
                wrong = wrong[:place] + wrong[place] + wrong[place:]
            else:
                wrong = wrong[:place] + str(draw.choice(list("aeiou"))) + wrong[place + 1 :]
        others = [person.name for person in mates if person.name != name]
        near = min(Levenshtein.distance(wrong, other) for other in others)
        if 0 < Levenshtein.distance(name, wrong) <= FURTHEST_SLIP < near:
            return wrong
