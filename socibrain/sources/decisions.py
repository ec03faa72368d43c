"""What humans decided about written names, kept in a private folder beside the study file."""

from __future__ import annotations

import csv
import io
import os
from collections.abc import Iterable
from dataclasses import dataclass

from socibrain.documents import nearest
from socibrain.errors import Faults
from socibrain.sources.records import RosterEntry
from socibrain.sources.spelling import name_key
from socibrain.sources.study import Study
from socibrain.sources.tables import TextTable, is_missing, mend_unknown, read_table, read_text

DECISIONS = "private/decisions.csv"
"""Where decisions lie, from the folder of the study file; reports never read it."""
COLUMNS = ("written", "site", "person", "score", "suggestion")
NOBODY = "nobody"
"""A human's word that a text means nobody on the roster."""

Decisions = dict[tuple[str, str], str | None]


@dataclass(frozen=True)
class OpenName:
    """A text that somebody of ``site`` wrote and that a human has to decide.

    ``candidates`` are the people it may mean (none when nobody is like it), ``score`` the best
    similarity, 0 to 100.
    """

    written: str
    site: str
    candidates: tuple[str, ...]
    score: float


def read_decisions(study: Study, roster: tuple[RosterEntry, ...], faults: Faults) -> Decisions:
    """Decisions by what was written (normalised) and site: a person, or None for nobody.

    Rows whose ``person`` is still empty are no decisions; an empty ``site`` holds in every site.
    Without a file there are none.
    """
    table = _read(study, faults)
    people, sites = {entry.person for entry in roster}, {entry.site for entry in roster}
    decisions: Decisions = {}
    lines: dict[tuple[str, str], int] = {}
    for line, row in table or ():
        if is_missing(row["person"]):
            continue
        key, site, person, place = _key(row["written"]), _site(row), row["person"], f"line {line}"
        decided = None if person == NOBODY else person
        if is_missing(row["written"]):
            faults.add(
                DECISIONS, place, "incomplete-decision", "decides about an empty text", "remove the row"
            )
        elif decided is not None and decided not in people:
            faults.add(DECISIONS, place, "unknown-person", "the person is not on the roster",
                       mend_unknown(person, people, f"write an id of the roster, or {NOBODY}"))  # fmt: skip
        elif site and site not in sites:
            faults.add(DECISIONS, place, "unknown-site", f"the roster has no site '{site}'",
                       nearest(site, sites))  # fmt: skip
        elif decisions.get((key, site), decided) != decided:
            faults.add(DECISIONS, f"lines {lines[key, site]} and {line}", "two-decisions",
                       "one text of one site is decided in two ways", "keep one of the two rows")  # fmt: skip
        else:
            decisions[key, site] = decided
            lines.setdefault((key, site), line)
    return decisions


def decided_rows(study: Study) -> list[tuple[str, str, str]]:
    """What was decided so far: written, site, person of every row that has a person, sorted.

    Rows that wait say nothing yet, so a run is the same with and without them.
    """
    table = _read(study, Faults())
    rows = [(row["written"], _site(row), row["person"]) for _, row in table or ()]
    return sorted(row for row in rows if not is_missing(row[2]))


def write_suggestions(study: Study, open_names: Iterable[OpenName], faults: Faults) -> int:
    """Add the texts that wait for a human to the decision file; how many were added.

    Nothing that stands in the file is touched: a text of a site that has a row, decided or not,
    is not added again.  The file is written whole or not at all.
    """
    table = _read(study, faults)
    path = study.path(DECISIONS)
    if table is None and path.exists():
        return 0
    there = {(_key(row["written"]), _site(row)) for _, row in table or ()}
    added: dict[tuple[str, str], dict[str, str]] = {}
    for name in sorted(open_names, key=lambda name: (name.site, name.written)):
        key = _key(name.written)
        if not there & {(key, name.site), (key, "")}:
            row = (name.written, name.site, "", f"{name.score:.0f}" if name.candidates else "",
                   " or ".join(name.candidates))  # fmt: skip
            added.setdefault((key, name.site), dict(zip(COLUMNS, row, strict=True)))
    if added:
        before = (read_text(path, DECISIONS, faults) or "") if table else ""
        text = _appended(before, table.columns if table else COLUMNS, list(added.values()))
        draft = path.with_suffix(".draft")
        try:
            path.parent.mkdir(exist_ok=True)
            draft.write_text(text, encoding="utf-8", newline="")
            os.replace(draft, path)
        except OSError as error:
            if draft.is_file():
                draft.unlink()
            faults.add(DECISIONS, "", "unwritable", f"cannot be written ({error.strerror})",
                       "make the folder of the study file writable")  # fmt: skip
            return 0
    return len(added)


def _appended(before: str, columns: tuple[str, ...], rows: list[dict[str, str]]) -> str:
    body = io.StringIO(newline="")
    writer = csv.DictWriter(body, columns, restval="", extrasaction="ignore", lineterminator="\n")
    if not before:
        writer.writeheader()
    writer.writerows(rows)
    ending = "" if not before or before.endswith("\n") else "\n"
    return before + ending + body.getvalue()


def _read(study: Study, faults: Faults) -> TextTable | None:
    path = study.path(DECISIONS)
    return read_table(path, DECISIONS, dict.fromkeys(COLUMNS[:3], ""), faults) if path.exists() else None


def _key(written: str) -> str:
    return name_key(written) or written


def _site(row: dict[str, str]) -> str:
    return "" if is_missing(row["site"]) else row["site"]
