"""The joined table: one row per person (and visit), columns that know where they come from."""

from __future__ import annotations

from dataclasses import dataclass

import pandas as pd

from socibrain.networks.social import SocialNetwork


@dataclass(frozen=True)
class Column:
    """What a column holds: enough for a data dictionary and a caption.

    ``measure`` is '' for attributes that came with the people table; ``origin`` is the question
    or brain input a measure was taken on, or the table of scans a value stands in ('' for
    attributes).
    """

    name: str
    label: str
    description: str
    unit: str
    reading: str
    undefined: str
    source: str
    measure: str
    origin: str
    low: float | None
    high: float | None


@dataclass(frozen=True)
class Cohort:
    """A measured cohort.

    ``persons``: one row per person and visit (one row with visit '' for people without a scan and
    in studies without visits), columns ``person, visit, site`` + attributes + measures named
    ``origin.measure``.  ``regions``: one row per person, visit and region (``origin`` in column
    names as above).  ``sites``: one row per site.  ``partitions``: columns origin, person, visit,
    region, community (from 1).  ``ledger``: columns stage, side, person, site, visit, reason.
    ``problems``: columns file, place, kind, found, mend, grave.  ``flow``: see `ledger.py`.
    ``region_systems`` gives each region's system, in matrix order ('' where none is declared).
    """

    persons: pd.DataFrame
    regions: pd.DataFrame
    sites: pd.DataFrame
    partitions: pd.DataFrame
    ledger: pd.DataFrame
    problems: pd.DataFrame
    flow: pd.DataFrame
    columns: dict[str, Column]
    social: tuple[SocialNetwork, ...]
    region_systems: dict[str, str]
