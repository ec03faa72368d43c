"""From site networks to everyone's position, read off the whole network."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pandas as pd

from socibrain.cohort.ledger import Leaving
from socibrain.measures.catalogue import Measure, all_measures
from socibrain.measures.social.at_hand import SiteAtHand
from socibrain.networks.social import SocialNetwork
from socibrain.streams import small_seed
from socibrain.tasks.finished import Arrays, Finished, digest
from socibrain.tasks.work import run_tasks

NOBODY = "nobody of the site answered"


@dataclass(frozen=True)
class Positions:
    """Social measures.

    ``persons`` is indexed by person, ``sites`` by site; columns are ``question.measure``.
    ``leavings`` names sites where a measure has no value for anybody.
    """

    persons: pd.DataFrame
    sites: pd.DataFrame
    leavings: tuple[Leaving, ...]


def social_measures(scale: str) -> list[Measure]:
    """Measures of the social side at one scale."""
    return [each for each in all_measures().values() if each.side == "social" and each.scale == scale]


@dataclass(frozen=True)
class SiteTask:
    """One site network to measure; ``memory`` is the folder of finished work, if any."""

    network: SocialNetwork
    seed: int
    version: str
    memory: Path | None


def measure_positions(
    networks: Sequence[SocialNetwork],
    *,
    seed: int,
    own_answers_missing: str,
    version: str,
    memory: Path | None,
    workers: int,
) -> Positions:
    """Every social measure on every site network.

    With ``own_answers_missing`` "undefined", measures that need a person's own answers have no
    value for people who did not answer.  Where nobody answered nothing is known, and no measure
    has a value.
    """
    persons: dict[str, dict[str, float]] = {}
    sites: dict[str, dict[str, float]] = {}
    leavings = []
    tasks = [SiteTask(network, seed, version, memory) for network in networks]
    measured = run_tasks(measure_site, tasks, workers=workers, done=lambda _: None)
    for network, arrays in zip(networks, measured, strict=True):
        in_site = sites.setdefault(network.site, {})
        for each in social_measures("site"):
            in_site[f"{network.question}.{each.name}"] = float(arrays[each.name])
        for each in social_measures("person"):
            values = np.array(arrays[each.name], dtype=np.float64)
            column = f"{network.question}.{each.name}"
            if len(values) and np.isnan(values).all():
                reason = each.undefined if network.answered.any() else NOBODY
                leavings.append(Leaving(column, "social", "", network.site, "", reason))
            if "own answers" in each.needs and own_answers_missing == "undefined":
                values[~network.answered] = np.nan
            for person, value in zip(network.people, values, strict=True):
                persons.setdefault(person, {})[column] = float(value)
    return Positions(_table(persons, "person"), _table(sites, "site"), tuple(leavings))


def measure_site(task: SiteTask) -> Arrays:
    """Every social measure of one site network by name; what was measured before is recalled."""
    network = task.network
    if task.memory is None:
        return _measure(task)
    key = digest(
        task.version, task.seed, network.question, network.site, network.people, network.rule,
        network.roles, network.named.tobytes().hex(), network.answered.tobytes().hex(),
    )  # fmt: skip
    wanted = {each.name for scale in ("person", "site") for each in social_measures(scale)}
    return Finished(task.memory).once(key, wanted, lambda: _measure(task))


def _measure(task: SiteTask) -> Arrays:
    network = task.network
    at_hand = SiteAtHand(network, small_seed(task.seed, "social", network.question, network.site))
    known = network.answered.any()
    nothing = {"person": np.full(len(network.people), np.nan), "site": np.array(np.nan)}
    return {
        each.name: np.asarray(each.function(at_hand), dtype=np.float64) if known else nothing[scale]
        for scale in ("person", "site")
        for each in social_measures(scale)
    }


def _table(rows: dict[str, dict[str, float]], index: str) -> pd.DataFrame:
    table = pd.DataFrame.from_dict(rows, orient="index", dtype=np.float64)
    table.index.name = index
    return table
