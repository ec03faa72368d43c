"""Text tables (TSV, CSV) as text, cell by cell, with line numbers kept for faults."""

from __future__ import annotations

import csv
import io
import re
import unicodedata
from collections import Counter
from collections.abc import Collection, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from socibrain.documents import nearest
from socibrain.errors import Faults

MISSING = "n/a"
"""How a missing cell is written (BIDS); an empty cell is missing too."""

MOST_RAGGED = 5
"""How many lines of a wrong length are cited before the rest is only counted."""

LARGEST = 1e100
"""Numbers beyond this are refused: their squares and products have to be held as well."""

MOST_IDS = 10
"""How many ids a message lists before it only counts the rest."""

_NUMBER = re.compile(r"[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?")
_ZEROS = re.compile(r"(?<![0-9])0+(?=[0-9])")


@dataclass(frozen=True)
class TextTable:
    """A table whose cells are text exactly as written (stripped of outer spaces).

    ``lines[r]`` is the line of the file on which row r starts (the header is line 1).
    """

    file: str
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    lines: tuple[int, ...]

    def column(self, name: str) -> tuple[str, ...]:
        """All cells of one column."""
        position = self.columns.index(name)
        return tuple(row[position] for row in self.rows)

    def __iter__(self) -> Iterator[tuple[int, dict[str, str]]]:
        for line, row in zip(self.lines, self.rows, strict=True):
            yield line, dict(zip(self.columns, row, strict=True))


def is_missing(cell: str) -> bool:
    """Whether a cell says that there is no value.

    >>> is_missing("n/a"), is_missing(""), is_missing("NA")
    (True, True, False)
    """
    return cell in ("", MISSING)


def as_number(cell: str) -> float | None:
    """The number that a cell spells in plain digits, or None when it spells none up to `LARGEST`.

    >>> as_number("-1.5e3"), as_number("1,5"), as_number("nan"), as_number("1e400")
    (-1500.0, None, None, None)
    """
    number = float(cell) if _NUMBER.fullmatch(cell) else None
    return number if number is not None and abs(number) <= LARGEST else None


def loose_form(label: str) -> str:
    """What is left of an id or label when case, leading zeros and Unicode composition do not count.

    >>> loose_form("Sub-007") == loose_form("sub-7"), loose_form("10") == loose_form("1")
    (True, False)
    """
    return _ZEROS.sub("", unicodedata.normalize("NFKC", label).casefold())


def lookalike(label: str, known: Collection[str]) -> str | None:
    """The known label that has the same loose form as this one, if there is one.

    >>> lookalike("sub-7", ["sub-007", "sub-008"])
    'sub-007'
    """
    loose = loose_form(label)
    return next((other for other in known if loose_form(other) == loose), None)


def mend_unknown(person: str, known: Collection[str], otherwise: str) -> str:
    """How to mend an id that is not ``known``: the known one that looks alike, if there is one.

    >>> mend_unknown("7", ["007"], "add it"), mend_unknown("8", ["007"], "add it")
    ("did you mean '007'?", 'add it')
    """
    other = lookalike(person, known)
    return otherwise if other is None else f"did you mean '{other}'?"


def mend_column(name: str, header: Iterable[str], entry: str) -> str:
    """How to mend a column that is not there; ``entry`` of the study file says what it is called.

    >>> mend_column("participant_id", ["pupil", "answered"], "questionnaire.answered.person")
    'valid here: answered, pupil; write the right one as `person: ...` in questionnaire.answered'
    """
    close = nearest(name, [cell for cell in header if cell])
    part, _, key = entry.rpartition(".")
    then = " write it" if close.endswith("?") else "; write the right one"
    return f"{close}{then} as `{key}: ...` in {part}" if entry else close


def listed(ids: Sequence[str]) -> str:
    """Ids for a message: the first of them, and how many more there are.

    >>> listed(["007", "NA"]), listed(["a"] * 12)[-12:]
    ('007, NA', 'a and 2 more')
    """
    more = f" and {len(ids) - MOST_IDS} more" if len(ids) > MOST_IDS else ""
    return ", ".join(ids[:MOST_IDS]) + more


def read_table(path: Path, shown: str, needed: Mapping[str, str], faults: Faults) -> TextTable | None:
    """Read a tab- or comma-separated table (by suffix) with a header row.

    ``shown`` is the path as the study writes it, ``needed`` the columns that must be there, each
    with the entry of the study file that names it ('' where its name is fixed).
    Returns None when the file cannot be used; every reason is then in ``faults``.
    """
    text = read_text(path, shown, faults)
    if text is None:
        return None
    separator = "," if path.suffix.lower() == ".csv" else "\t"
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True)
    rows: list[tuple[int, list[str]]] = []
    start = 1
    try:
        for cells in reader:
            if any(cell.strip() for cell in cells):
                rows.append((start, [cell.strip() for cell in cells]))
            start = reader.line_num + 1
    except csv.Error as error:
        faults.add(shown, f"line {reader.line_num}", "table", f"cannot be split into cells ({error})",
                   "close every quotation mark, double those inside a quoted cell")  # fmt: skip
        return None
    if not rows:
        faults.add(shown, "", "empty", "is empty", "write a header line and one row per entry")
        return None
    return _checked(shown, rows, needed, faults)


def read_text(path: Path, shown: str, faults: Faults) -> str | None:
    """The text of a UTF-8 file, or None with the reason in ``faults``."""
    try:
        content = path.read_bytes()
        text = content.decode("utf-8-sig")
    except FileNotFoundError:
        faults.add(shown, "", "missing-file", "there is no such file", "correct the path in the study file")
    except OSError as error:
        faults.add(shown, "", "unreadable", f"cannot be read ({error.strerror})",
                   "correct the path, or the file's permissions")  # fmt: skip
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        faults.add(shown, f"line {line}", "encoding", "is not UTF-8 text",
                   "save the file as UTF-8 text; export a spreadsheet as .csv")  # fmt: skip
    else:
        if "\0" not in text:
            return text
        line = text[: text.index("\0")].count("\n") + 1
        faults.add(shown, f"line {line}", "encoding", "holds a character that text cannot hold",
                   "save the file again as UTF-8 text")  # fmt: skip
    return None


def _checked(
    shown: str, rows: list[tuple[int, list[str]]], needed: Mapping[str, str], faults: Faults
) -> TextTable | None:
    header = rows[0][1]
    other = {",": "comma", ";": "semicolon", "\t": "tab"}
    seen = [name for mark, name in other.items() if len(header) == 1 and mark in header[0]]
    if seen:
        faults.add(shown, "line 1", "separator", f"the header is one cell with a {seen[0]} in it",
                   "separate cells by tabs in .tsv files, by commas in .csv files")  # fmt: skip
        return None
    sound = True
    for number, name in enumerate(header, start=1):
        if not name:
            sound = False
            faults.add(shown, "line 1", "nameless-column", f"column {number} has no name",
                       "give it a name, or take it out")  # fmt: skip
    for name, times in Counter(header).items():
        if name and times > 1:
            sound = False
            faults.add(shown, "line 1", "duplicate-column", f"column '{name}' stands {times} times",
                       "give every column a name of its own")  # fmt: skip
    for name, entry in needed.items():
        if name not in header:
            sound = False
            faults.add(shown, "line 1", "missing-column", f"there is no column '{name}'",
                       mend_column(name, header, entry))  # fmt: skip
    ragged = [(line, len(cells)) for line, cells in rows[1:] if len(cells) != len(header)]
    for line, width in ragged[:MOST_RAGGED]:
        faults.add(shown, f"line {line}", "ragged", f"has {width} cells where the header has {len(header)}",
                   "write one cell per column, n/a where there is no value")  # fmt: skip
    if len(ragged) > MOST_RAGGED:
        faults.add(shown, "line 1", "ragged",
                   f"{len(ragged) - MOST_RAGGED} more lines have another number of cells than the header",
                   "look at the header first")  # fmt: skip
    if not sound or ragged:
        return None
    body = rows[1:]
    return TextTable(
        shown, tuple(header), tuple(tuple(cells) for _, cells in body), tuple(line for line, _ in body)
    )
