"""Every refusal has one shape: where it is, what was found, how to mend it."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from typing import NoReturn


@dataclass(frozen=True)
class Fault:
    """One thing found wrong in an input.

    ``file`` is the path as the study writes it, ``place`` the line, column or cell inside it
    ("" for the file as a whole), ``kind`` a short slug that is the same for all faults of a
    kind.  A grave fault stops the run; any other is put on record and the run goes on.
    Neither text may hold a name that somebody wrote into a questionnaire.
    """

    file: str
    place: str
    kind: str
    found: str
    mend: str
    grave: bool = True

    @property
    def where(self) -> str:
        """File and place in one string.

        >>> Fault("plan.yaml", "14:5", "unknown-entry", "no such entry", "drop it").where
        'plan.yaml:14:5'
        """
        return f"{self.file}:{self.place}" if self.place else self.file

    def __str__(self) -> str:
        return told([self])


class Refusal(Exception):
    """The work stops because of what the user gave us; carries all faults found together."""

    exit_code = 1

    def __init__(self, *faults: Fault) -> None:
        super().__init__(*faults)
        self.faults = faults

    def __str__(self) -> str:
        return told(self.faults, in_full=True)


PLACES_SHOWN = 3
"""How many places of one statement are named before the rest is only counted."""
STATEMENTS_SHOWN = 5
"""How many statements of one kind are told before the faults left are only counted."""
THE_REST = "`socibrain audit` writes all of them to problems.csv"


def told(faults: Iterable[Fault], *, in_full: bool = False) -> str:
    """Faults in words, kind by kind; what holds in several places is said once, with the first of them.

    Unless ``in_full``, five statements of a kind are told and the faults left are counted: that is
    for data files, whose faults an audit puts on record.

    >>> print(told(Fault(f"{name}.tsv", "", "empty", "is empty", "save it again") for name in "abcd"))
    a.tsv; b.tsv; c.tsv and 1 more  is empty
      to mend: save it again
    """
    kinds: dict[str, dict[tuple[str, str], list[str]]] = {}
    for fault in faults:
        kinds.setdefault(fault.kind, {}).setdefault((fault.found, fault.mend), []).append(fault.where)
    lines = []
    for places in kinds.values():
        shown = len(places) if in_full else STATEMENTS_SHOWN
        for (found, mend), where in list(places.items())[:shown]:
            more = f" and {len(where) - PLACES_SHOWN} more" if len(where) > PLACES_SHOWN else ""
            lines.append(f"{'; '.join(where[:PLACES_SHOWN])}{more}  {found}\n  to mend: {mend}")
        if rest := sum(map(len, list(places.values())[shown:])):
            lines.append(f"and {rest} more of this kind: {THE_REST}")
    return "\n".join(lines)


class DocumentRefused(Refusal):
    """A study or plan file says something that cannot be meant."""

    exit_code = 3


class DataRefused(Refusal):
    """A data file cannot be used as it is."""

    exit_code = 4

    def __str__(self) -> str:
        return told(self.faults)


class Faults:
    """Collects what is found wrong, so that all faults of a kind are told together.

    >>> faults = Faults()
    >>> faults.add("people.tsv", "line 3", "duplicate-id", "id '007' stands twice", "keep one row")
    >>> len(list(faults)), faults.any_grave
    (1, True)
    """

    def __init__(self, *found: Fault) -> None:
        self._found: dict[Fault, None] = dict.fromkeys(found)

    def add(self, file: str, place: str, kind: str, found: str, mend: str, *, grave: bool = True) -> None:
        """Put one fault on record; what two readers of one file find alike is one fault."""
        # A file name need not be text: what cannot be written as UTF-8 is spelt out.
        file, found = (text.encode(errors="backslashreplace").decode() for text in (file, found))
        self._found[Fault(file, place, kind, found, mend, grave)] = None

    def __iter__(self) -> Iterator[Fault]:
        return iter(self._found)

    @property
    def any_grave(self) -> bool:
        """Whether any fault forbids to go on."""
        return any(fault.grave for fault in self._found)

    def refuse(self) -> NoReturn:
        """Raise `DataRefused` with the grave faults."""
        raise DataRefused(*(fault for fault in self._found if fault.grave))

    def refuse_if_grave(self) -> None:
        """Raise `DataRefused` with all grave faults when there are any."""
        if self.any_grave:
            self.refuse()
