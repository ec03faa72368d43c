"""Everything that the study's files say, read once and matched by id."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import PurePosixPath

import pandas as pd

from socibrain.errors import DataRefused, Faults
from socibrain.networks.social import SocialNetwork, build_social_networks
from socibrain.sources.answers import read_answers
from socibrain.sources.exclusions import LeftOut, read_answered, read_exclusions, read_rule_values
from socibrain.sources.matrix_files import find_matrices
from socibrain.sources.people import invited, read_people, scanned
from socibrain.sources.records import MatrixFile, PeopleTable, RegionTable, RosterEntry
from socibrain.sources.regions import read_regions
from socibrain.sources.roster import read_roster
from socibrain.sources.study import Study


@dataclass(frozen=True)
class Gathered:
    """What was read.

    ``invited`` and ``scanned`` are ids (everyone, and whoever has a matrix, when not declared);
    ``scan_values`` holds the numbers of exclusion tables as ``<file>.<column>``, each by (person,
    visit).
    """

    study: Study
    people: PeopleTable
    regions: RegionTable | None
    roster: tuple[RosterEntry, ...]
    networks: tuple[SocialNetwork, ...]
    matrices: tuple[MatrixFile, ...]
    left_out: tuple[LeftOut, ...]
    invited: frozenset[str]
    scanned: frozenset[str]
    scan_values: dict[str, dict[tuple[str, str], float]]

    def site(self, person: str) -> str:
        """The person's site."""
        return str(self.people.table.at[person, "site"])

    @property
    def sites(self) -> tuple[str, ...]:
        """All sites, in alphabetical order."""
        return tuple(sorted({str(site) for site in self.people.table["site"]}))
