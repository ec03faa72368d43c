"""Who there is: crew, what they are, who was asked and who was scanned."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from demo_cohort.words import STATIONS, crew_names
from socibrain.streams import stream

AWKWARD_IDS = ("sub-NA", "sub-nan", "sub-1e5", "sub-0x1F", "sub-TRUE", "sub-007")
"""Ids that spreadsheets and number readers like to change."""
ROLES = ("helm", "mechanic", "navigator", "deckhand", "shore")
ROLE_SHARES = (0.14, 0.13, 0.13, 0.42, 0.18)
ANSWERED = 285
SCANNED = 171
INVITED = 205
TWO_VISITS = 40
AGES_MISSING = 14
NICKNAMED = 24
HIGH_MOTION = {"1": 6, "2": 1}
"""Scans above the limit, by visit."""
MOTION_LIMIT = 0.5


@dataclass(frozen=True)
class Person:
    """One member of a crew."""

    id: str
    name: str
    nickname: str | None
    station: str
    age: int
    age_known: bool
    sex: str
    role: str
    years: int
    answered: bool
    invited: bool
    scanned: bool
    second_visit: bool


def make_people(seed: int) -> list[Person]:
    """Everyone, station by station; ids are dealt at random over all stations."""
    names = crew_names(seed)
    total = sum(STATIONS.values())
    draw = stream(seed, "people")
    ids = _ids(total, draw)
    age = np.clip(np.rint(40 + 12 * draw.standard_normal(total)), 18, 68).astype(int)
    years = np.maximum(1, np.rint(draw.random(total) * (age - 16) * 0.8)).astype(int)
    answered = _lowest(draw.random(total), ANSWERED)
    # people who answer questionnaires come to the scanner a little more readily
    invited = _lowest(draw.random(total) + 0.25 * ~answered, INVITED)
    scanned = _lowest(draw.random(total) + 2.0 * ~invited, SCANNED)
    second = _lowest(draw.random(total) + 2.0 * ~scanned, TWO_VISITS)
    age_missing = _lowest(draw.random(total), AGES_MISSING)
    nicknamed = _lowest(draw.random(total), NICKNAMED)
    sex = np.where(draw.random(total) < 0.38, "F", "M")
    role = draw.choice(ROLES, size=total, p=ROLE_SHARES)
    people: list[Person] = []
    for station, crew in names.items():
        taken: set[str] = set()
        for name in crew:
            at = len(people)
            nickname = _nickname(name, taken) if nicknamed[at] else None
            people.append(
                Person(
                    id=ids[at],
                    name=name,
                    nickname=nickname,
                    station=station,
                    age=int(age[at]),
                    age_known=not age_missing[at],
                    sex=str(sex[at]),
                    role=str(role[at]),
                    years=int(years[at]),
                    answered=bool(answered[at]),
                    invited=bool(invited[at]),
                    scanned=bool(scanned[at]),
                    second_visit=bool(second[at]),
                )
            )
    return people


def _ids(total: int, draw: np.random.Generator) -> list[str]:
    plain = [f"sub-{number:03d}" for number in range(1, total + 1)]
    plain = [person for person in plain if person not in AWKWARD_IDS][: total - len(AWKWARD_IDS)]
    return [str(person) for person in draw.permutation([*plain, *AWKWARD_IDS])]


def _lowest(scores: np.ndarray, count: int) -> np.ndarray:
    """True for the ``count`` people with the lowest scores."""
    chosen = np.zeros(len(scores), dtype=bool)
    chosen[np.argsort(scores, kind="stable")[:count]] = True
    return chosen


def _nickname(name: str, taken: set[str]) -> str:
    given, family = name.split()
    options = (f"Old {family[:5]}", f"{given[:4]}sy", f"Young {family[:5]}", f"Big {given}")
    nickname = next(option for option in options[len(name) % 2 :] if option not in taken)
    taken.add(nickname)
    return nickname
