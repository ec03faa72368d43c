"""Brain networks: invented weights whose organisation follows, in part, where a person stands."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from demo_cohort.people import HIGH_MOTION, MOTION_LIMIT, Person
from demo_cohort.ties import Station
from demo_cohort.words import REGIONS_IN_SYSTEM, SYSTEMS
from socibrain.streams import stream

SPREAD_ON_CONSTRAINT = -0.25
"""Planted: evenness of a brain's ties over systems, per within-station SD of constraint."""
CONTRAST_ON_CORE = -0.85
"""Planted: how clearly systems stand out in members of the inner circle, against everyone else."""
CONTRAST_ON_AGE = -0.20
STATION_SD = 0.35
VISIT_SD = 0.55
"""What changes from visit to visit.  The unit of all these is the SD of a person's own lasting part."""
CONTRAST, CONTRAST_SD = 7.0, 0.08
"""Weight inside systems, where weight between them is 1: the middle, and the log of one unit."""
PARTICIPATION, PARTICIPATION_SD = 0.714, 0.0085
"""Mean participation before chance: the middle, and one unit of spread."""
MEAN_WEIGHT, MEAN_SD, MEAN_VISIT_SD = 0.10, 0.011, 0.0045
MEAN_ON_MOTION = 0.005
"""Planted: mean weight per SD of log motion; nothing else but station and chance moves it."""

_N = len(SYSTEMS) * REGIONS_IN_SYSTEM
_SYSTEM = np.repeat(np.arange(len(SYSTEMS)), REGIONS_IN_SYSTEM)
_INSIDE = _SYSTEM[:, None] == _SYSTEM[None, :]


@dataclass(frozen=True)
class Scan:
    """One visit of one person to the scanner: ``weights`` is (80, 80), three decimals."""

    person: str
    visit: str
    motion: float
    weights: np.ndarray


@dataclass(frozen=True)
class Leaning:
    """What a person's position and station give to the brain, before chance."""

    spread: float
    contrast: float
    mean: float


def make_scans(stations: list[Station], seed: int) -> Iterator[Scan]:
    """All scans, person by person in the order of ids."""
    leanings = _leanings(stations, seed)
    people = {person.id: person for station in stations for person in station.crew}
    scanned = [people[person] for person in sorted(people) if people[person].scanned]
    shaky, dead = _spoilt(scanned, seed)
    pattern = _shared_pattern(seed)
    for person in scanned:
        for visit in ("1", "2") if person.second_visit else ("1",):
            motion = _motion(person, visit, seed, shaky=(person.id, visit) in shaky)
            weights = _weights(person, visit, leanings[person.id], motion=motion, pattern=pattern, seed=seed)
            if (person.id, visit) == dead:
                lost = int(stream(seed, "dead region").integers(_N))
                weights[lost, :] = weights[:, lost] = 0.0
            yield Scan(person.id, visit, motion, weights)


def _leanings(stations: list[Station], seed: int) -> dict[str, Leaning]:
    """Constraint counts as deviation from the station's mean, in SDs pooled within stations."""
    deviations = [station.constraint - station.constraint.mean() for station in stations]
    sd = np.concatenate(deviations).std()
    found = {}
    for station, deviation in zip(stations, deviations, strict=True):
        own = STATION_SD * stream(seed, "station", station.name).standard_normal(3)
        for person, constraint, core in zip(station.crew, deviation / sd, station.core, strict=True):
            contrast = CONTRAST_ON_CORE * core + CONTRAST_ON_AGE * (person.age - 40) / 12
            found[person.id] = Leaning(
                spread=own[0] + SPREAD_ON_CONSTRAINT * constraint,
                contrast=own[1] + contrast,
                mean=MEAN_WEIGHT + MEAN_SD * own[2],
            )
    return found


def _spoilt(scanned: list[Person], seed: int) -> tuple[set[tuple[str, str]], tuple[str, str]]:
    """Scans with too much motion, and the one with a dead region (each of another person)."""
    draw = stream(seed, "spoilt scans")
    once = [person.id for person in scanned if not person.second_visit]
    twice = [person.id for person in scanned if person.second_visit]
    first = [str(person) for person in draw.permutation(once)[: HIGH_MOTION["1"] + 1]]
    second = [str(person) for person in draw.permutation(twice)[: HIGH_MOTION["2"]]]
    return {(person, "1") for person in first[1:]} | {(person, "2") for person in second}, (first[0], "1")


def _motion(person: Person, visit: str, seed: int, *, shaky: bool) -> float:
    """Mean framewise displacement in mm."""
    draw = stream(seed, "motion", person.id, visit)
    own = stream(seed, "motion", person.id)
    usual = 0.17 * np.exp(0.25 * own.standard_normal() + 0.20 * draw.standard_normal())
    chance = draw.random()
    high = MOTION_LIMIT + 0.02 + 0.5 * chance
    return round(float(high if shaky else min(usual, MOTION_LIMIT - 0.03)), 3)


@dataclass(frozen=True)
class _Pattern:
    """What all brains share: a rough surface, and regions with a leaning to one system beside their own.

    In each system one region leans to each other system and the rest to none, so that no two
    systems are drawn together.
    """

    rough: np.ndarray
    preferred: np.ndarray

    def between(self, strength: float) -> np.ndarray:
        """Weights between systems, mean 1, when preferred ones are ``1 + strength`` times the others."""
        raw = 1.0 + strength * self.preferred
        weights: np.ndarray = raw / raw[~_INSIDE].mean()
        return weights

    def strength(self, within: float, participation: float) -> float:
        """How strong preference has to be for this mean participation, by halving; 0 to 20."""
        low, high = 0.0, 20.0
        for _ in range(30):
            middle = (low + high) / 2
            structure = np.where(_INSIDE, within, self.between(middle)) * ~np.eye(_N, dtype=bool)
            share = np.add.reduceat(structure, np.arange(0, _N, REGIONS_IN_SYSTEM), axis=1)
            share /= share.sum(axis=1, keepdims=True)
            low, high = (middle, high) if (1 - (share**2).sum(1)).mean() > participation else (low, middle)
        return (low + high) / 2


def _shared_pattern(seed: int) -> _Pattern:
    draw = stream(seed, "shared pattern")
    systems = range(len(SYSTEMS))
    preference = np.zeros((_N, len(SYSTEMS)))
    for system in systems:
        members = draw.permutation(np.flatnonzero(system == _SYSTEM))
        for member, other in zip(members, (other for other in systems if other != system), strict=False):
            preference[member, other] = 1.0
    one_sided = preference[:, _SYSTEM]
    return _Pattern(_symmetric(draw), np.maximum(one_sided, one_sided.T))


def _weights(
    person: Person, visit: str, leaning: Leaning, *, motion: float, pattern: _Pattern, seed: int
) -> np.ndarray:
    """One matrix: contrast makes systems stand out, spread evens out the ties between them.

    Contrast alone would lower participation too; how strongly regions prefer one system is set so
    that participation comes out as wanted, whatever the contrast.

    The mean weight is set last, by one positive factor for the whole matrix, which leaves every
    share of weight, and so modularity and participation, as it was.
    """
    own, draw = stream(seed, "brain", person.id), stream(seed, "brain", person.id, visit)
    lasting, passing = own.standard_normal(3), draw.standard_normal(3)
    contrast = leaning.contrast + lasting[0] + VISIT_SD * passing[0]
    spread = leaning.spread + lasting[1] + VISIT_SD * passing[1]
    within = CONTRAST * np.exp(CONTRAST_SD * contrast)
    strength = pattern.strength(within, PARTICIPATION + PARTICIPATION_SD * spread)
    rough = np.sqrt(0.5) * pattern.rough + np.sqrt(0.3) * _symmetric(own) + np.sqrt(0.2) * _symmetric(draw)
    weights: np.ndarray = np.where(_INSIDE, within, pattern.between(strength)) * np.exp(
        0.2 * np.clip(rough, -2.5, 2.5)
    )
    weights = weights + 0.2 * _symmetric(draw)
    shaking = (np.log(motion) - np.log(0.17)) / 0.32
    mean = leaning.mean + MEAN_SD * lasting[2] + MEAN_VISIT_SD * passing[2] + MEAN_ON_MOTION * shaking
    weights *= max(mean, 0.05) / weights[~np.eye(_N, dtype=bool)].mean()
    np.fill_diagonal(weights, 1.0)
    return weights.round(3)


def _symmetric(draw: np.random.Generator) -> np.ndarray:
    upper = np.triu(draw.standard_normal((_N, _N)), 1)
    both: np.ndarray = upper + upper.T
    return both
