"""Every refusal has one shape: where it is, what was found, how to mend it."""

from __future__ import annotations

from collections.abc import Iterator
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
        return f"{self.where}  {self.found}\n  to mend: {self.mend}"


class Refusal(Exception):
    """The work stops because of what the user gave us; carries all faults found together."""

    exit_code = 1

    def __init__(self, *faults: Fault) -> None:
        super().__init__(*faults)
        self.faults = faults

    def __str__(self) -> str:
        return "\n".join(str(fault) for fault in self.faults)


class DocumentRefused(Refusal):
    """A study or plan file says something that cannot be meant."""

    exit_code = 3


class DataRefused(Refusal):
    """A data file cannot be used as it is."""

    exit_code = 4


class Faults:
    """Collects what is found wrong, so that all faults of a kind are told together.

    >>> faults = Faults()
    >>> faults.add("people.tsv", "line 3", "duplicate-id", "id '007' stands twice", "keep one row")
    >>> len(list(faults)), faults.any_grave
    (1, True)
    """

    def __init__(self) -> None:
        self._found: list[Fault] = []

    def add(self, file: str, place: str, kind: str, found: str, mend: str, *, grave: bool = True) -> None:
        """Put one fault on record."""
        self._found.append(Fault(file, place, kind, found, mend, grave))

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
