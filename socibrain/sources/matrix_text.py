"""Numbers written as text: a fast parser first, cell by cell only when it refuses."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from socibrain.errors import Faults

Array = NDArray[np.float64]

MISSING = ("n/a", "NaN", "nan", "NAN")
"""How a missing weight may be written; BIDS writes n/a."""


@dataclass(frozen=True)
class NumberTable:
    """Numbers from a text file, (n_rows, n_columns), NaN where one is missing.

    ``header`` holds the cells of a first line without numbers, () when the first line has numbers;
    ``names`` the first column when it holds no numbers, else ().  Row r stands on line
    ``first_line + r``.
    """

    values: Array
    header: tuple[str, ...]
    names: tuple[str, ...]

    @property
    def first_line(self) -> int:
        """The line of the first row of numbers, counted from 1."""
        return 2 if self.header else 1


def read_numbers(content: bytes, shown: str, faults: Faults) -> NumberTable | None:
    """Read a table of numbers separated by tabs, commas or spaces (found from the first line).

    A first line and a first column of names are recognised by not being numbers.  Returns None
    when a cell cannot be used; each kind of fault is told once, with its first cell.
    """
    content = content.removeprefix(b"\xef\xbb\xbf").rstrip()
    if b"\r" in content:
        content = content.replace(b"\r\n", b"\n").replace(b"\r", b"\n")
    if not content:
        faults.add(shown, "", "empty", "is empty", "save the matrix again")
        return None
    layout = _Layout.of(content)
    try:
        return _fast(content, layout)
    except ValueError:
        return _careful(content, layout, shown, faults)


@dataclass(frozen=True)
class _Layout:
    """What the first lines of a file show."""

    separator: str
    header: tuple[str, ...]
    named_rows: bool
    width: int

    @classmethod
    def of(cls, content: bytes) -> _Layout:
        lines = [line.decode("utf-8", "replace") for line in content.split(b"\n", 3)[:3]]
        separator = next((mark for mark in "\t," if mark in lines[0]), " ")
        rows = [_cells(line, separator) for line in lines]
        corner_empty = rows[0][:1] == [""]
        mostly_text = 2 * sum(not _looks_numeric(cell) for cell in rows[0]) > len(rows[0])
        header = tuple(rows.pop(0)) if corner_empty or mostly_text else ()
        named = bool(rows) and (corner_empty or all(not _looks_numeric(row[0]) for row in rows if row))
        return cls(separator, header, named, len(rows[0]) if rows else 0)


def _fast(content: bytes, layout: _Layout) -> NumberTable:
    """Raises `ValueError` when any cell is not a plain number, or a line has another length."""
    columns: dict[int, type] = dict.fromkeys(range(layout.width), np.float64)
    if layout.named_rows:
        columns[0] = str
    frame = pd.read_csv(
        io.BytesIO(content),
        sep=r"\s+" if layout.separator == " " else layout.separator,
        header=None,
        skiprows=int(bool(layout.header)),
        dtype=columns if layout.named_rows else np.float64,
        index_col=False,
        na_filter=False,
        skip_blank_lines=False,
        low_memory=False,
    )
    if layout.named_rows:
        names = tuple(str(name).strip() for name in frame.iloc[:, 0])
        return NumberTable(frame.iloc[:, 1:].to_numpy(), layout.header, names)
    return NumberTable(frame.to_numpy(), layout.header, ())


def _careful(content: bytes, layout: _Layout, shown: str, faults: Faults) -> NumberTable | None:
    """Cell by cell: what the fast parser refused is read (missing cells) or told with its place."""
    try:
        lines = content.decode("utf-8").split("\n")
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        faults.add(shown, f"line {line}", "encoding", "is not UTF-8 text", "save it as UTF-8 text")
        return None
    start = int(bool(layout.header))
    rows = [_cells(line, layout.separator) for line in lines[start:]]
    if not rows:
        faults.add(shown, "line 1", "empty", "holds names and no numbers", "save the matrix again")
        return None
    if not _same_length(rows, start, layout.width, shown, faults):
        return None
    skip = int(layout.named_rows)
    values = np.empty((len(rows), layout.width - skip))
    text = []
    for r, row in enumerate(rows):
        for c, cell in enumerate(row[skip:]):
            number = _number(cell)
            if number is None:
                text.append((f"line {start + r + 1}, column {skip + c + 1}", cell))
            else:
                values[r, c] = number
    if text:
        place, cell = text[0]
        more = f" (and {len(text) - 1} more cells like it)" if len(text) > 1 else ""
        found = f"'{cell}' is not a number{more}" if cell else f"the cell is empty{more}"
        faults.add(shown, place, "text-in-cell", found,
                   "write a number with a decimal point, n/a where it is missing")  # fmt: skip
        return None
    return NumberTable(values, layout.header, tuple(row[0] for row in rows) if skip else ())


def _same_length(rows: Sequence[Sequence[str]], start: int, width: int, shown: str, faults: Faults) -> bool:
    uneven = [number for number, row in enumerate(rows) if len(row) != width]
    if not uneven:
        return True
    number = uneven[0]
    found = f"has {len(rows[number])} cells where the lines before have {width}"
    if number == len(rows) - 1 and len(rows[number]) < width:
        faults.add(shown, f"line {start + number + 1}", "truncated", f"the last line {found}",
                   "the file was cut short: save or copy it again")  # fmt: skip
    else:
        more = f" (and {len(uneven) - 1} more lines are uneven)" if len(uneven) > 1 else ""
        faults.add(shown, f"line {start + number + 1}", "ragged", found + more,
                   "write the same number of cells on every line")  # fmt: skip
    return False


def _cells(line: str, separator: str) -> list[str]:
    if separator == " ":
        return line.split()
    return [cell.strip() for row in csv.reader([line], delimiter=separator) for cell in row]


def _number(cell: str) -> float | None:
    """The number a cell holds: NaN where it is missing, None when it is text.

    >>> _number("-0.5"), _number("n/a"), _number("0,5"), _number("1_000")
    (-0.5, nan, None, None)
    """
    if cell in MISSING:
        return float("nan")
    try:
        return None if "_" in cell else float(cell)
    except ValueError:
        return None


def _looks_numeric(cell: str) -> bool:
    return cell in ("", "NA") or _number(cell) is not None
