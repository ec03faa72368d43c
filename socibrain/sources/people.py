"""The people table: one row per person, read with its JSON sidecar."""

from __future__ import annotations

import json
from collections import defaultdict
from pathlib import PurePosixPath

import numpy as np
import pandas as pd

from socibrain.documents import nearest
from socibrain.errors import Faults
from socibrain.sources.keyed import note_unused
from socibrain.sources.records import Array, PeopleTable
from socibrain.sources.study import Chosen, Study
from socibrain.sources.tables import (
    LARGEST,
    TextTable,
    as_number,
    is_missing,
    loose_form,
    read_table,
    read_text,
)

ONE_SITE = "all"
"""Site of everyone in studies that declare none."""

TAKEN = ("person", "visit", "site", "role")
"""Column names with a meaning of their own in every table we write."""

Labels = dict[str, dict[str, object]]


def read_people(study: Study, faults: Faults) -> PeopleTable | None:
    """The people table as declared, or None when it cannot be used (reasons in ``faults``).

    Columns named in ``people.numbers``, and those with ``Units`` in the sidecar, are float64 with
    NaN for n/a; all others are text with None.  Columns ``site`` (``"all"`` where the study
    declares no site) and ``role`` (all None where none is declared) are added.
    """
    says = study.says.people
    declared = [("id", says.id), ("site", says.site), ("role", says.role)]
    chosen = [("invited", says.invited), ("scanned", says.scanned)]
    declared += [(f"{entry}.column", rule.column) for entry, rule in chosen if rule]
    declared += [("numbers", name) for name in says.numbers]
    needed = {name: f"people.{entry}" for entry, name in declared if name}
    table = read_table(study.path(says.file), says.file, needed, faults)
    sidecar = str(PurePosixPath(says.file).with_suffix(".json"))
    labels = _read_sidecar(study, sidecar, faults)
    if table is None or labels is None:
        return None
    sound = [
        _ids_are_sound(table, says.id, faults),
        _names_are_free(table, study, faults),
        _sites_are_sound(table, says.site, faults),
    ]
    _note_oddities(table, study, sidecar, labels, faults)
    words = {says.id, says.site, says.role}
    measured = {name for name in table.columns if "Units" in labels.get(name, {})}
    numbers = (measured | set(says.numbers)) - words
    index = pd.Index(table.column(says.id), dtype=object, name="person")
    columns: dict[str, pd.Series | None] = {}
    for name in table.columns:
        if name in numbers:
            values = _numbers(table, name, name in says.numbers, faults)
            columns[name] = None if values is None else pd.Series(values, index)
        elif name != says.id:
            columns[name] = _texts(table, name, index)
    if not all(sound) or any(column is None for column in columns.values()):
        return None
    columns["site"] = _texts(table, says.site, index) if says.site else pd.Series(ONE_SITE, index, object)
    columns["role"] = (
        _texts(table, says.role, index) if says.role else pd.Series([None] * len(index), index, object)
    )
    return PeopleTable(pd.DataFrame(columns, index=index), labels)


def invited(study: Study, people: PeopleTable) -> frozenset[str] | None:
    """Ids of those who were to be scanned; None when the study does not declare it."""
    return _chosen(people, study.says.people.invited)


def scanned(study: Study, people: PeopleTable) -> frozenset[str] | None:
    """Ids of those who were scanned; None when the study does not declare it."""
    return _chosen(people, study.says.people.scanned)


def holds(cell: object, values: tuple[str, ...]) -> bool:
    """Whether a cell of the people table is one of the values written in the study file.

    >>> holds("yes", ("yes",)), holds(1.0, ("1",)), holds(None, ("yes",))
    (True, True, False)
    """
    if isinstance(cell, float):
        return any(as_number(value) == cell for value in values)
    return cell in values


def _chosen(people: PeopleTable, rule: Chosen | None) -> frozenset[str] | None:
    if rule is None:
        return None
    cells = people.table[rule.column]
    return frozenset(
        person for person, cell in zip(people.ids, cells, strict=True) if holds(cell, rule.values)
    )


def _read_sidecar(study: Study, sidecar: str, faults: Faults) -> Labels | None:
    """What the JSON sidecar says of each column; empty where there is no sidecar."""
    path = study.path(sidecar)
    if not path.exists():
        return {}
    text = read_text(path, sidecar, faults)
    if text is None:
        return None
    try:
        content = json.loads(text)
    except json.JSONDecodeError as error:
        faults.add(sidecar, f"{error.lineno}:{error.colno}", "json", f"is not valid JSON: {error.msg}",
                   "correct the line; the last entry of a list has no comma after it")  # fmt: skip
        return None
    except RecursionError:
        content = None
    if not isinstance(content, dict) or not all(isinstance(label, dict) for label in content.values()):
        faults.add(sidecar, "", "sidecar", "does not hold one {...} per column",
                   'write it as {"column": {"Description": "...", "Units": "..."}}')  # fmt: skip
        return None
    return content


def _ids_are_sound(table: TextTable, id_column: str, faults: Faults) -> bool:
    """Every row has an id; no two ids are the same or look the same."""
    if not table.rows:
        faults.add(table.file, "", "empty", "has a header and no rows", "write one row per person")
        return False
    sound = True
    lines: defaultdict[str, list[int]] = defaultdict(list)
    for line, cell in zip(table.lines, table.column(id_column), strict=True):
        if is_missing(cell):
            sound = False
            faults.add(table.file, f"line {line}, column {id_column}", "missing-id", "there is no id",
                       "give the person an id, or take the row out")  # fmt: skip
        else:
            lines[cell].append(line)
    alike: defaultdict[str, list[str]] = defaultdict(list)
    for person, where in lines.items():
        alike[loose_form(person)].append(person)
        if len(where) > 1:
            sound = False
            faults.add(table.file, f"line {where[1]}", "duplicate-id",
                       f"id '{person}' stands on lines {', '.join(map(str, where))}",
                       "keep one row per person")  # fmt: skip
    for group in alike.values():
        if len(group) > 1:
            sound = False
            both = ", ".join(f"'{person}' (line {lines[person][0]})" for person in group)
            faults.add(table.file, f"line {lines[group[1]][0]}", "alike-ids",
                       f"ids differ by case or leading zeros only: {both}",
                       "write one person's id one way in all files; "
                       "if they are different people, give them different ids")  # fmt: skip
    return sound


def _names_are_free(table: TextTable, study: Study, faults: Faults) -> bool:
    """No column is called what we call something else."""
    says = study.says.people
    own = {"site": says.site, "role": says.role, "person": says.id, "visit": None}
    sound = True
    origins = {*study.says.brain, *(asked.questions if (asked := study.says.questionnaire) else ())}
    for name in table.columns:
        origin, dot, _ = name.partition(".")
        if dot and origin in origins:
            sound = False
            faults.add(table.file, "line 1", "taken-name",
                       f"column '{name}' is called like a measure of '{origin}'",
                       "rename the column")  # fmt: skip
    for name in TAKEN:
        if name in table.columns and own[name] != name and name != says.id:
            sound = False
            mend = f"rename the column, or declare `{name}: {name}` under people"
            faults.add(table.file, "line 1", "taken-name", f"column '{name}' is not the study's {name}",
                       mend if name in ("site", "role") else "rename the column")  # fmt: skip
    return sound


def _sites_are_sound(table: TextTable, column: str | None, faults: Faults) -> bool:
    """Everybody has a site; no two sites look the same."""
    sound = True
    first: dict[str, tuple[str, int]] = {}
    for line, cell in zip(table.lines, table.column(column) if column else (), strict=False):
        place = f"line {line}, column {column}"
        other, where = first.setdefault(loose_form(cell), (cell, line))
        if is_missing(cell):
            sound = False
            faults.add(table.file, place, "missing-site", "there is no site", "write the person's site")
        elif other != cell:
            sound = False
            faults.add(table.file, place, "alike-sites",
                       f"site '{cell}' is '{other}' on line {where} but for case or leading zeros",
                       "write one site one way; if they are different sites, give them different names",
                       )  # fmt: skip
    return sound


def _note_oddities(table: TextTable, study: Study, sidecar: str, labels: Labels, faults: Faults) -> None:
    """What does not stop the run and should be seen: unused labels, values nobody has."""
    for name, label in labels.items():
        if name not in table.columns:
            faults.add(sidecar, name, "unknown-column", f"{table.file} has no column '{name}'",
                       nearest(name, table.columns), grave=False)  # fmt: skip
            continue
        said = label.get("Levels")
        levels = list(said) if isinstance(said, dict) else None
        strangers = {
            cell: line
            for line, cell in zip(table.lines[::-1], table.column(name)[::-1], strict=True)
            if levels is not None and not is_missing(cell) and cell not in levels
        }
        for cell, line in sorted(strangers.items()):
            faults.add(table.file, f"line {line}, column {name}", "unknown-level",
                       f"'{cell}' is not among the Levels of {sidecar}",
                       nearest(cell, levels or ()), grave=False)  # fmt: skip
    says = study.says.people
    for entry, rule in (("invited", says.invited), ("scanned", says.scanned)):
        if rule is None:
            continue
        note_unused(table, rule.column, rule.values, f"counted as {entry}", faults)
        for line, cell in zip(table.lines, table.column(rule.column), strict=True):
            if is_missing(cell):
                faults.add(table.file, f"line {line}, column {rule.column}", "no-value",
                           f"does not say whether this person was {entry}; counted as not {entry}",
                           "write the value", grave=False)  # fmt: skip


def _numbers(table: TextTable, name: str, declared: bool, faults: Faults) -> Array | None:
    """One column as float64 with NaN where there is no value; None when a cell holds text."""
    values = np.full(len(table.rows), np.nan)
    sound = True
    why = "people.numbers names this column" if declared else "the sidecar gives Units for this column"
    for row, (line, cell) in enumerate(zip(table.lines, table.column(name), strict=True)):
        value = as_number(cell)
        if value is not None:
            values[row] = value
        elif not is_missing(cell):
            sound = False
            faults.add(table.file, f"line {line}, column {name}", "not-a-number",
                       f"'{cell}' is not a number, and {why}",
                       f"write it in digits with a decimal point (up to {LARGEST:g}), "
                       "or n/a where there is no value")  # fmt: skip
    return values if sound else None


def _texts(table: TextTable, name: str, index: pd.Index) -> pd.Series:
    """One column as text with None where there is no value."""
    return pd.Series([None if is_missing(cell) else cell for cell in table.column(name)], index, object)
