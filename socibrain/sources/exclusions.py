"""Exclusion rules: whom the study leaves out of what, for which reason."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import PurePosixPath
from typing import Literal

from socibrain.errors import Faults
from socibrain.sources.keyed import Key, keyed_rows
from socibrain.sources.people import scanned
from socibrain.sources.records import PeopleTable
from socibrain.sources.study import Exclusion, Study
from socibrain.sources.tables import TextTable, as_number, is_missing, listed, read_table


@dataclass(frozen=True)
class LeftOut:
    """One person, or one visit of theirs, that a rule leaves out."""

    person: str
    visit: str
    """'' when the rule holds for all visits."""
    leaves_out_of: Literal["brain", "social", "both"]
    reason: str


def read_exclusions(study: Study, people: PeopleTable, faults: Faults) -> tuple[LeftOut, ...]:
    """Everyone whom the study's rules leave out: rule by rule, in the order of each rule's table.

    A rule is applied only where there is a value: a person without one is *not* left out, and a
    fault that does not stop the run says so (for rules about the brain side: when the person was
    scanned, or when the study does not say who was).  The limit itself stays in: ``above: 0.5``
    leaves out 0.51.
    """
    left_out: list[LeftOut] = []
    for number, rule in enumerate(study.says.exclusions):
        table, key = _looked_up(rule, number, study, people, faults)
        if table is not None:
            left_out += _apply(rule, table, key, _concerned(rule, study, people), faults)
    return tuple(left_out)


def read_rule_values(study: Study, people: PeopleTable) -> dict[str, dict[tuple[str, str], float]]:
    """The numbers that rules with a limit look at, in tables other than the people table.

    ``file.column`` (the file's stem) -> (person, visit) -> value; visit '' where the table has
    none.  Cells without a number are left out: `read_exclusions` tells what is wrong with them.
    """
    values: dict[str, dict[tuple[str, str], float]] = {}
    for number, rule in enumerate(study.says.exclusions):
        unheard = Faults()
        if rule.file is None or rule.values is not None:
            continue
        table, key = _looked_up(rule, number, study, people, unheard)
        if table is not None:
            values[f"{PurePosixPath(rule.file).stem}.{rule.column}"] = {
                (row.person, row.visit): value
                for row in keyed_rows(table, key, unheard)
                if (value := as_number(row.cells[rule.column])) is not None
            }
    return values


def _looked_up(
    rule: Exclusion, number: int, study: Study, people: PeopleTable, faults: Faults
) -> tuple[TextTable | None, Key]:
    """The table that a rule looks into, and what says whose its rows are."""
    file, person, here = rule.file, rule.person, f"exclusions[{number}]"
    needed = {rule.column: f"{here}.column"} | ({rule.visit: f"{here}.visit"} if rule.visit else {})
    if file is None:
        file, person = study.says.people.file, study.says.people.id
    needed |= {person: f"{here}.person"}
    key = Key(person, people.ids, rule.visit, study.says.visits)
    return read_table(study.path(file), file, needed, faults), key


def _concerned(rule: Exclusion, study: Study, people: PeopleTable) -> frozenset[str]:
    """People who ought to have a value."""
    seen = scanned(study, people) if rule.leaves_out_of == "brain" else None
    return frozenset(people.ids) if seen is None else seen


def _apply(
    rule: Exclusion, table: TextTable, key: Key, concerned: frozenset[str], faults: Faults
) -> list[LeftOut]:
    left_out = []
    rows = keyed_rows(table, key, faults)
    for row in rows:
        cell = row.cells[rule.column]
        place = f"line {row.line}, column {rule.column}"
        if rule.values is not None and cell in rule.values:
            hit = True
        elif is_missing(cell):
            hit = False
            if row.person in concerned:
                faults.add(table.file, place, "no-value",
                           f"no value: the rule '{rule.because}' is not applied to this person",
                           "write the value, or add a rule with `values: [n/a]`", grave=False)  # fmt: skip
        elif rule.values is not None:
            hit = False
        else:
            hit = _beyond(rule, cell)
            if as_number(cell) is None:
                faults.add(table.file, place, "not-a-number",
                           f"'{cell}' is not a number, and the rule sets a limit",
                           "write it in digits with a decimal point; n/a where there is none")  # fmt: skip
        if hit:
            left_out.append(LeftOut(row.person, row.visit, rule.leaves_out_of, rule.because))
    absent = sorted(concerned - {row.person for row in rows})
    if absent:
        faults.add(table.file, f"column {key.person}", "no-value",
                   f"no row for {listed(absent)}: the rule '{rule.because}' is not applied to them",
                   "add a row for each of them", grave=False)  # fmt: skip
    return left_out


def _beyond(rule: Exclusion, cell: str) -> bool:
    value = as_number(cell)
    if value is None:
        return False
    return (rule.above is not None and value > rule.above) or (rule.below is not None and value < rule.below)
