"""Tables with one row per person, or per person and visit."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass

from socibrain.documents import nearest
from socibrain.errors import Faults
from socibrain.sources.tables import TextTable, is_missing, lookalike, mend_unknown

MEND_STRANGER = "add the person to the people table, or take the row out"


@dataclass(frozen=True)
class KeyedRow:
    """One row, whose it is, and where it stands; ``visit`` is '' in tables without visits."""

    person: str
    visit: str
    line: int
    cells: dict[str, str]


@dataclass(frozen=True)
class Key:
    """The columns that say whose a row is, and what may stand in them (None: anything)."""

    person: str
    people: Collection[str] | None
    visit: str | None = None
    visits: Collection[str] = ()


def keyed_rows(table: TextTable, key: Key, faults: Faults) -> list[KeyedRow]:
    """Rows of the study's people and visits, in file order.

    Rows without an id, or for a person (and visit) seen before, are grave faults.  So are people
    whom the study does not know, and visits that differ from a known one by case or leading zeros
    only.  Other unknown visits are put on record, and their rows are left out.
    """
    rows: list[KeyedRow] = []
    first: dict[tuple[str, str], int] = {}
    for line, cells in table:
        person, visit = cells[key.person], cells[key.visit] if key.visit else ""
        if is_missing(person) or (key.visit and is_missing(visit)):
            faults.add(table.file, f"line {line}", "missing-id", "does not say whose row it is",
                       f"fill in {key.person}" + (f" and {key.visit}" if key.visit else ""))  # fmt: skip
        elif (person, visit) in first:
            at_visit = f" at visit '{visit}'" if visit else ""
            faults.add(table.file, f"line {line}", "duplicate-id",
                       f"'{person}'{at_visit} stands on line {first[person, visit]} already",
                       "keep one row per person" if visit or not key.visits
                       else "keep one row per person, or declare the column with the visit")  # fmt: skip
        else:
            first[person, visit] = line
            rows.append(KeyedRow(person, visit, line, cells))
    return [row for row in rows if _belongs(row, table, key, faults)]


def note_unused(table: TextTable, column: str, values: tuple[str, ...], meaning: str, faults: Faults) -> None:
    """Say so when no row holds any of the values that the study file gives a meaning to."""
    cells = {cell for cell in table.column(column) if not is_missing(cell)}
    if cells and not cells & set(values):
        written = ", ".join(f"'{value}'" for value in values)
        faults.add(table.file, f"column {column}", "unused-value", f"no row holds {written} ({meaning})",
                   nearest(values[0] if values else "", cells), grave=False)  # fmt: skip


def _belongs(row: KeyedRow, table: TextTable, key: Key, faults: Faults) -> bool:
    """Whether the study knows the row's person and visit; says so when it does not."""
    stranger = key.people is not None and row.person not in key.people
    if stranger:
        mend = mend_unknown(row.person, key.people or (), MEND_STRANGER)
        faults.add(table.file, f"line {row.line}, column {key.person}", "unknown-person",
                   f"'{row.person}' is not in the people table", mend)  # fmt: skip
    if not key.visit or row.visit in key.visits:
        return not stranger
    place = f"line {row.line}, column {key.visit}"
    other = lookalike(row.visit, key.visits)
    if other is not None:
        faults.add(table.file, place, "alike-visit", f"'{row.visit}' is no visit of this study, '{other}' is",
                   "write it the same way in all files")  # fmt: skip
    else:
        faults.add(table.file, place, "unknown-visit",
                   f"'{row.visit}' is no visit of this study; the row is not used",
                   "add the visit to the study, or take the row out", grave=False)  # fmt: skip
    return False
