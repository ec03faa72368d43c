"""From site networks to everyone's position, read off the whole network."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd

from socibrain.cohort.ledger import Leaving
from socibrain.measures.catalogue import Measure, all_measures
from socibrain.measures.social.at_hand import SiteAtHand
from socibrain.networks.social import SocialNetwork
from socibrain.streams import small_seed

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


def measure_positions(networks: Sequence[SocialNetwork], *, seed: int, own_answers_missing: str) -> Positions:
    """Every social measure on every site network.

    With ``own_answers_missing`` "undefined", measures that need a person's own answers have no
    value for people who did not answer.  Where nobody answered nothing is known, and no measure
    has a value.
    """
    persons: dict[str, dict[str, float]] = {}
    sites: dict[str, dict[str, float]] = {}
    leavings = []
    for network in networks:
        at_hand = SiteAtHand(network, small_seed(seed, "social", network.question, network.site))
        in_site = sites.setdefault(network.site, {})
        for each in social_measures("site"):
            known = network.answered.any()
            in_site[f"{network.question}.{each.name}"] = float(each.function(at_hand)) if known else np.nan
        for each in social_measures("person"):
            values = np.array(each.function(at_hand), dtype=np.float64)
            column = f"{network.question}.{each.name}"
            if not network.answered.any():
                leavings.append(Leaving(column, "social", "", network.site, "", NOBODY))
                values[:] = np.nan
            elif len(values) and np.isnan(values).all():
                leavings.append(Leaving(column, "social", "", network.site, "", each.undefined))
            if "own answers" in each.needs and own_answers_missing == "undefined":
                values[~network.answered] = np.nan
            for person, value in zip(network.people, values, strict=True):
                persons.setdefault(person, {})[column] = float(value)
    return Positions(_table(persons, "person"), _table(sites, "site"), tuple(leavings))


def _table(rows: dict[str, dict[str, float]], index: str) -> pd.DataFrame:
    table = pd.DataFrame.from_dict(rows, orient="index", dtype=np.float64)
    table.index.name = index
    return table
