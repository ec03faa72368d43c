"""Tables in a folder, and what their columns suggest that they hold."""

from __future__ import annotations

import re
from collections import Counter, defaultdict
from collections.abc import Collection, Iterable, Sequence
from dataclasses import dataclass
from pathlib import Path, PurePosixPath

from socibrain.errors import Faults
from socibrain.sources.tables import TextTable, as_number, is_missing, read_table

ID_WORDS = ("participant_id", "participant", "person", "person_id", "subject", "subject_id", "id", "code")
SITE_WORDS = (
    "site", "station", "school", "village", "ward", "department", "location", "centre", "center",
    "dormitory", "campus", "unit", "office", "community", "harbour", "harbor",
)  # fmt: skip
ROLE_WORDS = ("role", "position", "job", "rank", "duty", "function", "occupation")
VISIT_WORDS = ("visit", "session", "ses", "wave", "timepoint", "session_id")
REGION_WORDS = ("name", "region", "label", "region_name")
SYSTEM_WORDS = ("system", "network", "module", "lobe", "community")
YES = ("yes", "y", "true", "1", "invited", "scanned", "done", "complete", "completed", "answered", "present")
NO = ("no", "n", "false", "0", "not invited", "not scanned", "refused", "missing", "absent", "incomplete")
PEOPLE_FILES = ("participants", "people", "persons", "subjects", "members")
MOST_BYTES = 20_000_000
"""Larger files are no tables of people or answers."""
MOSTLY = 0.5
"""Share of a column's cells that must be known ids or names for it to be about people."""


@dataclass(frozen=True)
class Nominations:
    """A table in which people name others; ``most`` is the highest number of names one gave."""

    table: TextTable
    layout: str
    chooser: str
    chosen: str
    most: int


@dataclass(frozen=True)
class FoundTables:
    """What the tables of a folder are taken for."""

    people: TextTable | None
    people_id: str
    roster: tuple[TextTable, str, str] | None
    """Table, column with the id, column with the name."""
    answered: tuple[TextTable, str, str] | None
    """Table, column with the id, column with the status."""
    aliases: TextTable | None
    nominations: tuple[Nominations, ...]
    measured: tuple[tuple[TextTable, str, str | None, str], ...]
    """Tables with numbers by person: table, column with the id, with the visit, with the number."""
    regions: tuple[TextTable, ...]
    unused: tuple[str, ...]


def find_people(folder: Path, files: Iterable[str]) -> tuple[TextTable, str] | None:
    """The table with one row per person, and its column with the id.

    Raises `DataRefused` when there is a ``participants`` table that cannot be read.
    """
    best: tuple[tuple[bool, bool, int], TextTable, str] | None = None
    for file in files:
        by_name = any(word in PurePosixPath(file).stem.casefold() for word in PEOPLE_FILES)
        if not by_name and "/" in file:
            continue
        faults = Faults()
        table = _read(folder, file, faults)
        if PurePosixPath(file).stem == "participants":
            faults.refuse_if_grave()
        column = None if table is None else _ids(table, unique=not by_name)
        if table is None or column is None:
            continue
        worth = (by_name, "/" not in file, len(table.rows))
        if best is None or worth > best[0]:
            best = (worth, table, column)
    return None if best is None else best[1:]


def find_tables(
    folder: Path, files: Sequence[str], people: tuple[TextTable, str] | None, sizes: Collection[int]
) -> FoundTables:
    """What every table is taken for; ``sizes`` are the numbers of regions that the matrices show."""
    tables = [table for file in files if (table := _read(folder, file, Faults())) is not None]
    ids = frozenset(people[0].column(people[1])) if people else frozenset()
    if people is not None:
        tables = [table for table in tables if table.file != people[0].file]
    keyed = {table.file: column for table in tables if (column := _id_column(table, ids))}
    roster = _roster([(table, keyed[table.file]) for table in tables if table.file in keyed], people)
    names = {cell.casefold() for cell in roster[0].column(roster[2])} if roster else set()
    nominations = []
    aliases = answered = None
    measured: list[tuple[TextTable, str, str | None, str]] = []
    regions: list[TextTable] = []
    unused: list[TextTable] = []
    for table in tables:
        column = keyed.get(table.file)
        if {"written", "person"} <= set(table.columns):
            aliases = table
        elif column is None:
            (regions if _is_regions(table, sizes) else unused).append(table)
        elif found := _nominations(table, column, ids, names):
            nominations.append(found)
        else:
            status = _status_column(table, column)
            numbers = _number_columns(table, column)
            if status and answered is None:
                answered = (table, column, status)
            elif numbers:
                measured += [(table, column, word_column(table, VISIT_WORDS), each) for each in numbers]
            elif roster is None or table.file != roster[0].file:
                unused.append(table)
    beside = [(each.table, each.chooser) for each in nominations]
    for table, column in [*beside, *([people] if people else [])] if answered is None else ():
        names_there = {each.chosen.rstrip("*") for each in nominations if each.table is table}
        status = _status_column(table, column, tuple(names_there))
        if status:
            answered = (table, column, status)
            break
    return FoundTables(
        people[0] if people else None,
        people[1] if people else "",
        roster,
        answered,
        aliases,
        tuple(nominations),
        tuple(measured),
        tuple(regions),
        tuple(table.file for table in unused),
    )


def word_column(table: TextTable, words: Sequence[str]) -> str | None:
    """The first column called by one of the words, or by something that ends in one."""
    folded = {column.casefold(): column for column in table.columns}
    for word in words:
        for name, column in folded.items():
            if name == word or name.endswith("_" + word):
                return column
    return None


def yes_values(table: TextTable, column: str) -> tuple[str, ...]:
    """The entries of a column that say yes."""
    cells = dict.fromkeys(table.column(column))
    return tuple(cell for cell in cells if cell.casefold() in YES)


def yes_or_no(table: TextTable, column: str) -> bool:
    """Whether a column says yes of some people, and of all others no or nothing."""
    said = {cell.casefold() for cell in table.column(column)}
    told = {cell for cell in said if not is_missing(cell)}
    return not told.isdisjoint(YES) and told <= {*YES, *NO} and len(said) > 1


def values(table: TextTable, column: str) -> tuple[str, ...]:
    """All different entries of a column, the most frequent first."""
    counts = Counter(cell for cell in table.column(column) if not is_missing(cell))
    return tuple(cell for cell, _ in counts.most_common())


def is_numeric(table: TextTable, column: str) -> bool:
    """Whether a column holds numbers and, perhaps, missing cells."""
    cells = [cell for cell in table.column(column) if not is_missing(cell)]
    return bool(cells) and all(as_number(cell) is not None for cell in cells)


def _read(folder: Path, file: str, faults: Faults) -> TextTable | None:
    """The table, or None for what is no table with named columns."""
    path = folder / file
    if path.suffix.lower() not in (".tsv", ".csv") or path.stat().st_size > MOST_BYTES:
        return None
    table = read_table(path, file, {}, faults)
    if table is None or not table.rows or any(as_number(name) is not None for name in table.columns):
        return None
    return table


def _ids(table: TextTable, *, unique: bool) -> str | None:
    """The column with the id of a table about people."""
    column = word_column(table, ID_WORDS)
    cells = table.column(column) if column else ()
    doubtful = len(set(cells)) < len(cells) or any(map(is_missing, cells))
    return None if unique and doubtful else column


def _id_column(table: TextTable, ids: Collection[str]) -> str | None:
    """The first column whose cells are mostly known ids."""
    return next((c for c in table.columns if _share(table.column(c), ids) > MOSTLY), None)


def _share(cells: Iterable[str], known: Collection[str]) -> float:
    given = [cell for cell in cells if not is_missing(cell)]
    return sum(cell in known for cell in given) / len(given) if given else 0.0


def _roster(
    keyed: list[tuple[TextTable, str]], people: tuple[TextTable, str] | None
) -> tuple[TextTable, str, str] | None:
    """The table with the names of everyone who could be named."""
    for table, column in [*keyed, *([people] if people else [])]:
        cells = table.column(column)
        name = next((c for c in table.columns if c != column and "name" in c.casefold()), None)
        if name and len(set(cells)) == len(cells):
            return table, column, name
    return None


def _nominations(
    table: TextTable, chooser: str, ids: Collection[str], names: Collection[str]
) -> Nominations | None:
    """The table as nominations: names in one column, or side by side in numbered ones."""

    def about_people(column: str) -> bool:
        cells = table.column(column)
        return max(_share(cells, ids), _share(map(str.casefold, cells), names)) > MOSTLY

    stems: defaultdict[str, list[str]] = defaultdict(list)
    for column in table.columns:
        if match := re.fullmatch(r"(.*\D)\d+", column):
            stems[match[1]].append(column)
    for stem, columns in stems.items():
        if chooser not in columns and len(columns) > 1 and about_people(columns[0]):
            return Nominations(table, "wide", chooser, stem + "*", len(columns))
    repeated = len(set(table.column(chooser))) < len(table.rows)
    for column in table.columns:
        if column != chooser and repeated and about_people(column):
            most = Counter(table.column(chooser)).most_common(1)[0][1]
            return Nominations(table, "long", chooser, column, most)
    return None


def _status_column(table: TextTable, key: str, names: tuple[str, ...] = ()) -> str | None:
    """The column that says who answered; columns whose name starts with one of ``names`` do not."""
    signs = ("answer", "respon", "status", "complet", "present", "attend")
    cells = table.column(key)
    if len(set(cells)) < len(cells):
        return None
    others = [c for c in table.columns if c != key and not c.startswith(names)]
    return next((c for c in others if any(sign in c.casefold() for sign in signs)), None)


def _number_columns(table: TextTable, key: str) -> list[str]:
    words = {key, word_column(table, VISIT_WORDS)}
    return [column for column in table.columns if column not in words and is_numeric(table, column)]


def _is_regions(table: TextTable, sizes: Collection[int]) -> bool:
    name = word_column(table, REGION_WORDS)
    if name is None or len(set(table.column(name))) < len(table.rows):
        return False
    signs = ("region", "dseg", "parcel", "node", "roi", "label", "atlas")
    named = any(sign in PurePosixPath(table.file).stem.casefold() for sign in signs)
    return len(table.rows) in sizes or named
