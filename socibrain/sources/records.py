"""What the sources hand on: raw records, still one to one with the files."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True)
class PeopleTable:
    """The people table by id.

    ``table`` is indexed by person id (text), in file order; ``site`` and ``role`` are columns of
    it under those names (role missing as None), the other columns keep theirs.  Declared numeric
    columns are float64 with NaN for ``n/a``; all others are text with None.
    ``labels`` holds, per column, the sidecar's Description (and Units, Levels) as written.
    """

    table: pd.DataFrame
    labels: dict[str, dict[str, object]]

    @property
    def ids(self) -> tuple[str, ...]:
        """Person ids in file order."""
        return tuple(str(person) for person in self.table.index)


@dataclass(frozen=True)
class RosterEntry:
    """One person who could be named in one site."""

    person: str
    site: str
    name: str


@dataclass(frozen=True)
class Nomination:
    """One thing that one person wrote: chooser id, written text, and where it stands."""

    chooser: str
    written: str
    file: str
    line: int
    column: str


@dataclass(frozen=True)
class Answers:
    """Everything written in answer to one question, in file order."""

    question: str
    file: str
    nominations: tuple[Nomination, ...]
    first_line: Mapping[str, int]
    """Line of the first row of everybody who has a row in the file, even an empty one."""

    @property
    def choosers(self) -> frozenset[str]:
        """Ids that have a row in the file, even an empty one."""
        return frozenset(self.first_line)


@dataclass(frozen=True)
class RegionTable:
    """Region names and their systems, in matrix order ('' where no system is declared)."""

    names: tuple[str, ...]
    systems: tuple[str, ...]

    def __len__(self) -> int:
        return len(self.names)


@dataclass(frozen=True)
class MatrixFile:
    """One matrix file that was found: whose it is, and where it lies."""

    source: str
    person: str
    visit: str
    """'' in studies without visits."""
    file: str
    """Path as the study writes it."""


@dataclass(frozen=True)
class MatrixRecord:
    """One matrix as the file holds it, (n_regions, n_regions), read-only.

    Off the diagonal it is finite, or NaN in every cell of a region; nothing else is checked.
    ``names`` are the regions as the file itself calls them, () when it does not.
    """

    origin: MatrixFile
    weights: Array
    names: tuple[str, ...] = ()
