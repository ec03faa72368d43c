"""The roster: who could be named, site by site."""

from __future__ import annotations

from collections.abc import Mapping

from socibrain.documents import nearest
from socibrain.errors import Faults
from socibrain.sources.keyed import MEND_STRANGER
from socibrain.sources.records import PeopleTable, RosterEntry
from socibrain.sources.spelling import name_key
from socibrain.sources.study import Roster, Study
from socibrain.sources.tables import is_missing, lookalike, mend_unknown, read_table


def read_roster(study: Study, people: PeopleTable, faults: Faults) -> tuple[RosterEntry, ...]:
    """Everyone who could be named, in file order.

    Without a declared roster: everyone in the people table, called by id.
    Grave faults: a person twice; one name for two people of a site (as `name_key` sees it); a
    missing id, site or name; a person or site that the people table does not know; a site other
    than the people table's.  Their texts hold ids and sites, never names.  Whoever has a faulty
    row is still there, by id, so that one fault does not bring forth others.
    """
    homes = {str(person): str(site) for person, site in people.table["site"].items()}
    declared = study.says.roster
    if declared is None:
        return tuple(RosterEntry(person, site, person) for person, site in homes.items())
    entries = {"person": declared.person, "name": declared.name, "site": declared.site}
    needed = {column: f"roster.{entry}" for entry, column in entries.items() if column}
    table = read_table(study.path(declared.file), declared.file, needed, faults)
    if table is not None and not table.rows:
        faults.add(table.file, "", "empty", "has a header and no rows", "write one row per person")
    found: dict[int, RosterEntry] = {}
    spare: list[RosterEntry] = []
    for line, row in table or ():
        entry = _entry(declared, row, homes)
        wrong = _wrong(declared, row, entry, homes)
        for column, kind, what, mend in wrong:
            faults.add(declared.file, f"line {line}, column {column}", kind, what, mend)
        if not wrong:
            found[line] = entry
        elif (
            person := entry.person if entry.person in homes else lookalike(entry.person, homes)
        ) is not None:
            spare.append(RosterEntry(person, homes[person], person))
    return _once_each(declared, found, faults) + tuple(spare)


def _entry(declared: Roster, row: dict[str, str], homes: Mapping[str, str]) -> RosterEntry:
    person = row[declared.person]
    site = homes.get(person, "") if declared.site is None else row[declared.site]
    return RosterEntry(person, site, person if declared.name is None else row[declared.name])


def _wrong(
    declared: Roster, row: dict[str, str], entry: RosterEntry, homes: Mapping[str, str]
) -> list[tuple[str, str, str, str]]:
    """Everything wrong with one row: column, kind, what was found, how to mend."""
    wrong = []
    person, sites = entry.person, set(homes.values())
    if is_missing(person):
        wrong.append((declared.person, "missing-id", "there is no id", "write the id of the people table"))
    elif person not in homes:
        mend = mend_unknown(person, homes, MEND_STRANGER)
        wrong.append((declared.person, "unknown-person", f"'{person}' is not in the people table", mend))
    if declared.name and (is_missing(row[declared.name]) or not name_key(row[declared.name])):
        wrong.append((declared.name, "missing-name", "there is no name", "write it as others would write it"))
    if declared.site and is_missing(entry.site):
        wrong.append(
            (declared.site, "missing-site", "there is no site", "write where the person can be named")
        )
    elif declared.site and entry.site not in sites:
        what = f"the people table has no site '{entry.site}'"
        wrong.append((declared.site, "unknown-site", what, nearest(entry.site, sites)))
    elif declared.site and entry.site != homes.get(person, entry.site):
        what = f"'{person}' is in site '{entry.site}' here and in '{homes[person]}' in the people table"
        wrong.append((declared.site, "two-sites", what, "make both tables agree: everyone has one site"))
    return wrong


def _once_each(declared: Roster, found: Mapping[int, RosterEntry], faults: Faults) -> tuple[RosterEntry, ...]:
    """The entries, one per person; each clash is a fault that cites both lines."""
    persons: dict[str, int] = {}
    names: dict[tuple[str, str], int] = {}
    for line, entry in found.items():
        name = entry.person if declared.name is None else name_key(entry.name)
        if entry.person in persons:
            faults.add(declared.file, f"line {line}", "duplicate-id",
                       f"'{entry.person}' stands on line {persons[entry.person]} already",
                       "keep one row per person")  # fmt: skip
            continue
        persons[entry.person] = line
        if names.setdefault((entry.site, name), line) != line:
            faults.add(declared.file, f"lines {names[entry.site, name]} and {line}", "duplicate-name",
                       f"one name stands for two people of site '{entry.site}'",
                       "tell them apart as people do, by a second name or an initial")  # fmt: skip
    return tuple(found[line] for line in persons.values())
