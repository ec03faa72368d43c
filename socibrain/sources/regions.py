"""The regions table: names and systems in matrix order."""

from __future__ import annotations

from itertools import pairwise

from socibrain.errors import Faults
from socibrain.sources.records import RegionTable
from socibrain.sources.study import Study
from socibrain.sources.tables import TextTable, as_number, is_missing, read_table


def read_regions(study: Study, faults: Faults) -> RegionTable | None:
    """The declared regions in the order of their rows.

    None when the study declares none, or when the table cannot be used (reasons in ``faults``).
    A region without a system gets '' and a fault that does not stop the run.
    """
    says = study.says.regions
    if says is None:
        return None
    needed = {says.name: "regions.name"} | ({says.system: "regions.system"} if says.system else {})
    table = read_table(study.path(says.file), says.file, needed, faults)
    if table is None or not _names_are_sound(table, says.name, faults):
        return None
    _note_order(table, faults)
    names = table.column(says.name)
    if says.system is None:
        return RegionTable(names, ("",) * len(names))
    systems = []
    for line, cell in zip(table.lines, table.column(says.system), strict=True):
        systems.append("" if is_missing(cell) else cell)
        if is_missing(cell):
            faults.add(table.file, f"line {line}, column {says.system}", "no-value",
                       "this region has no system; it counts in none", "write its system",
                       grave=False)  # fmt: skip
    return RegionTable(names, tuple(systems))


def _names_are_sound(table: TextTable, column: str, faults: Faults) -> bool:
    if not table.rows:
        faults.add(table.file, "", "empty", "has a header and no rows", "write one row per region")
        return False
    sound = True
    first: dict[str, int] = {}
    for line, cell in zip(table.lines, table.column(column), strict=True):
        if is_missing(cell):
            sound = False
            faults.add(table.file, f"line {line}, column {column}", "missing-name",
                       "this region has no name", "give every row of the matrices a name")  # fmt: skip
        elif cell in first:
            sound = False
            faults.add(table.file, f"line {line}, column {column}", "duplicate-region",
                       f"region '{cell}' stands on line {first[cell]} already",
                       "give every region a name of its own")  # fmt: skip
        else:
            first[cell] = line
    return sound


def _note_order(table: TextTable, faults: Faults) -> None:
    """Say so when an ``index`` column does not rise: rows must stand in matrix order."""
    if "index" not in table.columns:
        return
    index = [as_number(cell) for cell in table.column("index")]
    for line, (before, after) in zip(table.lines[1:], pairwise(index), strict=True):
        if before is not None and after is not None and after <= before:
            faults.add(table.file, f"line {line}, column index", "order",
                       "the index does not rise from row to row, and regions are taken in row order",
                       "sort the rows into the order of the matrices", grave=False)  # fmt: skip
            return
