"""Answers with one row for every name that was written."""

from __future__ import annotations

from socibrain.errors import Faults
from socibrain.sources.records import Answers, Nomination
from socibrain.sources.study import Question
from socibrain.sources.tables import TextTable, is_missing


def from_long(name: str, question: Question, table: TextTable, faults: Faults) -> Answers | None:
    """Nominations of a table in the long layout, in file order.

    A row with an empty cell for the chosen person says that the chooser answered and, unless
    other rows name somebody, named nobody.  A row without a chooser is a grave fault.
    """
    nominations = []
    first: dict[str, int] = {}
    for line, row in table:
        chooser, written = row[question.chooser], row[question.chosen]
        if is_missing(chooser):
            faults.add(table.file, f"line {line}", "missing-chooser", "nobody is said to answer here",
                       f"write who answers into column '{question.chooser}', or remove the row")  # fmt: skip
            continue
        first.setdefault(chooser, line)
        if not is_missing(written):
            nominations.append(Nomination(chooser, written, table.file, line, question.chosen))
    return Answers(name, table.file, tuple(nominations), first)
