"""What becomes of everything that people wrote."""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Literal, get_args

from socibrain.errors import Faults
from socibrain.sources.decisions import DECISIONS, OpenName
from socibrain.sources.names import NameBook, Resolution
from socibrain.sources.records import Answers, Nomination
from socibrain.sources.study import Question

Fate = Literal[
    "resolved", "duplicate", "self", "outside site", "off roster", "ambiguous", "unresolved", "left out"
]
FATES: tuple[Fate, ...] = get_args(Fate)
State = Literal["answered", "named nobody", "did not answer"]

_DECIDE = f"decide in {DECISIONS} (`socibrain audit` writes the list), or correct the answers"
_NOTES: dict[Fate, tuple[str, str]] = {
    "duplicate": ("names somebody who is named already; counted once", "nothing, or correct the answers"),
    "self": ("names the person who answers; not counted", "nothing, or correct the answers"),
    "outside site": ("names somebody of another site; no tie of this site", f"nothing, or {_DECIDE}"),
    "off roster": ("names nobody on the roster; no tie", f"add the person to the roster, or {_DECIDE}"),
    "ambiguous": ("may mean several people; no tie", _DECIDE),
    "unresolved": ("is like one name of the roster; no tie until a human decides", _DECIDE),
}


@dataclass(frozen=True)
class Read:
    """One nomination and what became of it; ``fate`` is None where the answers are set aside."""

    nomination: Nomination
    fate: Fate | None
    meant: Resolution


def read_nominations(
    answers: Answers,
    *,
    homes: Mapping[str, str],
    left_out: frozenset[str],
    spoke: frozenset[str],
    names: NameBook,
) -> tuple[Read, ...]:
    """Each nomination by a person of the network with its fate, in file order.

    ``homes`` is the site of everyone on the roster.  What people in ``left_out`` wrote is not
    read; naming them is a fate of its own.  Answers of people outside ``spoke`` are set aside.
    """
    known: dict[tuple[str, str], Resolution] = {}
    named: set[tuple[str, str]] = set()
    read = []
    for nomination in answers.nominations:
        chooser = nomination.chooser
        if chooser not in homes or chooser in left_out:
            continue
        asked = (nomination.written, homes[chooser])
        if asked not in known:
            known[asked] = names.resolve(*asked)
        meant = known[asked]
        fate: Fate | None = meant.kind if chooser in spoke else None
        if fate == "resolved":
            pair = (chooser, meant.person or "")
            fate = _fate_of_member(pair, left_out, named)
            named.add(pair)
        read.append(Read(nomination, fate, meant))
    return tuple(read)


def _fate_of_member(pair: tuple[str, str], left_out: frozenset[str], named: set[tuple[str, str]]) -> Fate:
    chooser, person = pair
    if person == chooser:
        return "self"
    if person in left_out:
        return "left out"
    return "duplicate" if pair in named else "resolved"


def tally(
    read: Iterable[Read],
    answers: Answers,
    question: Question,
    *,
    homes: Mapping[str, str],
    spoke: frozenset[str],
) -> list[dict[str, object]]:
    """What each person of ``homes`` wrote, one row per person; see `SocialReading.tally`."""
    counts: dict[str, Counter[Fate | None]] = defaultdict(Counter)
    for one in read:
        counts[one.nomination.chooser][one.fate] += 1
    rows = []
    for person, site in homes.items():
        fates, answered = counts[person], person in spoke
        written = fates.total()
        state: State = "did not answer" if not answered else "answered" if written else "named nobody"
        row: dict[str, object] = {
            "question": answers.question,
            "site": site,
            "person": person,
            "state": state,
        }
        row["written"] = written if answered else None
        for fate in FATES:
            row[fate.replace(" ", "_")] = fates[fate] if answered else None
        capped = answered and question.cap is not None
        row["at_cap"] = written >= (question.cap or 0) if capped else None
        row["over_cap"] = max(0, written - (question.cap or 0)) if capped else None
        row["set_aside"] = fates[None]
        rows.append(row)
    return rows


def note_nominations(read: Iterable[Read], answers: Answers, question: Question, faults: Faults) -> None:
    """Put on record, line by line, what was not counted as it was written; no text is quoted."""
    columns: dict[tuple[int, Fate], list[str]] = defaultdict(list)
    by_chooser: dict[str, list[Read]] = defaultdict(list)
    for one in read:
        by_chooser[one.nomination.chooser].append(one)
        if one.fate in _NOTES and not (one.meant.decided and one.fate in ("outside site", "off roster")):
            columns[one.nomination.line, one.fate].append(one.nomination.column)
    for (line, fate), cells in sorted(columns.items()):
        place = f"line {line}, column{'s' if len(cells) > 1 else ''} {', '.join(cells)}"
        found, mend = _NOTES[fate]
        faults.add(answers.file, place, f"named-{fate.replace(' ', '-')}", found, mend, grave=False)
    for chooser, lot in by_chooser.items():
        if lot[0].fate is None:
            faults.add(answers.file, f"line {lot[0].nomination.line}", "answers-without-status",
                       f"'{chooser}' has answers here and did not answer by the status table; not used",
                       "correct the status, or take the answers out", grave=False)  # fmt: skip
        elif question.cap is not None and len(lot) > question.cap:
            faults.add(answers.file, f"line {lot[question.cap].nomination.line}", "over-cap",
                       f"'{chooser}' gives {len(lot)} names where {question.cap} are allowed; all are kept",
                       "correct `cap` in the study file, or the answers", grave=False)  # fmt: skip


def open_names(read: Iterable[Read], homes: Mapping[str, str]) -> list[OpenName]:
    """The texts that wait for a human: each once per site, in order of site and text."""
    waiting = {
        (homes[one.nomination.chooser], one.nomination.written): one.meant
        for one in read
        if one.fate in ("off roster", "ambiguous", "unresolved") and not one.meant.decided
    }
    return [
        OpenName(written, site, meant.candidates, meant.score)
        for (site, written), meant in sorted(waiting.items(), key=lambda item: item[0])
    ]
