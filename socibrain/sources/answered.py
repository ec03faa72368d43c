"""Who answered the questionnaire, by the study's status table."""

from __future__ import annotations

from collections.abc import Collection

from socibrain.errors import Faults
from socibrain.sources.keyed import Key, keyed_rows, note_unused
from socibrain.sources.study import Study
from socibrain.sources.tables import is_missing, read_table


def read_answered(
    study: Study, faults: Faults, *, known: Collection[str] | None = None
) -> frozenset[str] | None:
    """Ids of those who answered.

    None when the study declares no status table, or when it cannot be used (reasons in
    ``faults``).  ``known`` holds the ids of the people table: any other id is a grave fault.  Who
    has no status counts as not answered, and is put on record.
    """
    says = study.says.questionnaire.answered if study.says.questionnaire else None
    if says is None:
        return None
    here = "questionnaire.answered"
    needed = {says.person: f"{here}.person", says.column: f"{here}.column"}
    table = read_table(study.path(says.file), says.file, needed, faults)
    if table is None:
        return None
    note_unused(table, says.column, says.values, "counted as answered", faults)
    answered = set()
    for row in keyed_rows(table, Key(says.person, known), faults):
        if row.cells[says.column] in says.values:
            answered.add(row.person)
        elif is_missing(row.cells[says.column]):
            faults.add(table.file, f"line {row.line}, column {says.column}", "no-value",
                       "does not say whether this person answered; counted as not answered",
                       "write the status", grave=False)  # fmt: skip
    return frozenset(answered)
