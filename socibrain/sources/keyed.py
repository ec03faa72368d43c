"""Tables with one row per person, or per person and visit."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass

from socibrain.documents import nearest
from socibrain.errors import Faults
from socibrain.sources.tables import TextTable, is_missing, lookalike


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

    Rows without an id, or for a person (and visit) seen before, are grave faults.  So are ids
    that differ from a known one by case or leading zeros only.  Other unknown ids are put on
    record, and their rows are left out.
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
                       "keep one row" if visit else "keep one row, or declare the column with the visit",
                       )  # fmt: skip
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
    labels: list[tuple[str, str, str, Collection[str]]] = []
    if key.people is not None:
        labels.append(("person", key.person, row.person, key.people))
    if key.visit:
        labels.append(("visit", key.visit, row.visit, key.visits))
    unknown = [label for label in labels if label[2] not in label[3]]
    for what, column, label, known in unknown:
        place = f"line {row.line}, column {column}"
        other = lookalike(label, known)
        if other is not None:
            faults.add(table.file, place, f"alike-{what}",
                       f"'{label}' is no {what} of this study, '{other}' is",
                       "write it the same way in all files")  # fmt: skip
        else:
            faults.add(table.file, place, f"unknown-{what}",
                       f"'{label}' is no {what} of this study; the row is not used",
                       f"add the {what} to the study, or take the row out", grave=False)  # fmt: skip
    return not unknown
