"""Cohorts made for the tests of link."""

from __future__ import annotations

import numpy as np
import pandas as pd

from socibrain.cohort.table import Cohort, Column
from socibrain.link.hypothesis import Hypothesis

LEDGER = ["stage", "side", "person", "site", "visit", "reason"]


def cohort_of(persons: pd.DataFrame, *, ledger: pd.DataFrame | None = None, columns: tuple[Column, ...] = ()):
    """A cohort around a person table; person ids and visit '' are added where there are none."""
    table = persons.copy()
    if "person" not in table:
        table.insert(0, "person", [f"{number:04d}" for number in range(len(table))])
    if "visit" not in table:
        table.insert(1, "visit", "")
    nothing = pd.DataFrame()
    return Cohort(
        persons=table,
        regions=nothing,
        sites=nothing,
        partitions=nothing,
        ledger=pd.DataFrame(columns=LEDGER) if ledger is None else ledger,
        problems=nothing,
        flow=nothing,
        columns={column.name: column for column in columns},
        social=(),
        region_systems={},
    )


def made_persons(
    seed: int = 1, *, slope: float = 0.5, sites: tuple[int, ...] = (9, 14, 6, 11, 8)
) -> pd.DataFrame:
    """People in sites of unequal size; x acts on y within sites, z and sex adjust."""
    draw = np.random.default_rng(seed)
    site = np.repeat(np.arange(len(sites)), sites)
    n = site.size
    z = draw.normal(size=n) + 0.4 * site
    x = draw.normal(size=n) + 0.5 * z + draw.normal(size=len(sites))[site]
    y = slope * x + 0.3 * z + draw.normal(size=len(sites))[site] + draw.normal(size=n)
    return pd.DataFrame(
        {
            "site": [f"site {code}" for code in site],
            "x": x,
            "y": y,
            "z": z,
            "other": draw.normal(size=n) + 0.5 * y,
            "sex": draw.choice(["woman", "man"], n, p=[0.6, 0.4]),
        }
    )


def ask(
    outcome: str = "y", predictor: str = "x", *adjust: str, name: str = "h", **more: object
) -> Hypothesis:
    return Hypothesis(
        id=name, says="x goes with y", outcome=outcome, predictor=predictor, adjust=adjust, **more
    )
