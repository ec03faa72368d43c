"""Answers with one row for every person who answers, names side by side."""

from __future__ import annotations

import re

from socibrain.documents import nearest
from socibrain.errors import Faults
from socibrain.sources.records import Answers, Nomination
from socibrain.sources.study import Question
from socibrain.sources.tables import TextTable, is_missing


def from_wide(name: str, question: Question, table: TextTable, faults: Faults) -> Answers | None:
    """Nominations of a table in the wide layout: row by row, columns in the order of their numbers.

    ``question.chosen`` is a pattern in which ``*`` stands for anything; it has to fit several
    columns.  A row without any name says that the chooser answered and named nobody.  A row
    without a chooser, or a second row of a chooser, is a grave fault.
    """
    columns = matching_columns(question.chosen, tuple(c for c in table.columns if c != question.chooser))
    if len(columns) < 2:
        faults.add(table.file, "line 1", "missing-column",
                   f"the wide layout needs several columns like '{question.chosen}', there is "
                   + (f"only '{columns[0]}'" if columns else "none"),
                   "write `layout: long` when all names stand in one column" if columns
                   else nearest(question.chosen, table.columns))  # fmt: skip
        return None
    nominations = []
    first: dict[str, int] = {}
    for line, row in table:
        chooser = row[question.chooser]
        if is_missing(chooser):
            faults.add(table.file, f"line {line}", "missing-chooser", "nobody is said to answer here",
                       f"write who answers into column '{question.chooser}', or remove the row")  # fmt: skip
        elif chooser in first:
            faults.add(table.file, f"lines {first[chooser]} and {line}", "duplicate-chooser",
                       "one person answers in two rows", "keep the row that counts")  # fmt: skip
        else:
            first[chooser] = line
            nominations += [
                Nomination(chooser, row[column], table.file, line, column)
                for column in columns
                if not is_missing(row[column])
            ]
    return Answers(name, table.file, tuple(nominations), first)


def matching_columns(pattern: str, columns: tuple[str, ...]) -> tuple[str, ...]:
    """The columns that fit a pattern with ``*``, numbers in them compared as numbers.

    >>> matching_columns("friend_*", ("friend_10", "age", "friend_2"))
    ('friend_2', 'friend_10')
    """
    fits = re.compile(".*".join(re.escape(part) for part in pattern.split("*")))
    return tuple(sorted((column for column in columns if fits.fullmatch(column)), key=_numeric_order))


def _numeric_order(column: str) -> tuple[tuple[str, int], ...]:
    """Text and number by turns, so that 10 comes after 2."""
    return tuple((text, int(digits or 0)) for text, digits in re.findall(r"([^0-9]*)([0-9]*)", column))
