"""The brain loader: one connectivity matrix per person and visit."""

from __future__ import annotations

from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from socibrain.errors import Faults
from socibrain.sources.matrix_arrays import SUFFIXES, read_array
from socibrain.sources.matrix_edges import read_edges
from socibrain.sources.matrix_text import NumberTable, read_numbers
from socibrain.sources.records import MatrixFile, MatrixRecord
from socibrain.sources.study import Study
from socibrain.sources.tables import LARGEST

Array = NDArray[np.float64]


def read_matrix(
    study: Study, origin: MatrixFile, n_regions: int | None, faults: Faults
) -> MatrixRecord | None:
    """Read one matrix: TSV or CSV, NPY or NPZ, MATLAB .mat, or an edge list when the study says so.

    ``n_regions`` is the length of the region table, None without one.  Returns None when the file
    is missing, empty, cut short, not square, of another size, or holds text, infinities or single
    missing cells; the reason is then in ``faults``, with the cell.  A region whose weights are all
    missing passes: what becomes of it is for `build_brain` to say.  The diagonal is not looked at.
    """
    source = study.says.brain[origin.source]
    path = study.path(origin.file)
    content = _content(path, origin.file, faults)
    if content is None:
        return None
    names: tuple[str, ...] | None = ()
    weights: Array | None
    suffix = path.suffix.lower()
    if suffix in SUFFIXES:
        weights = read_array(content, suffix, source.variable, origin.file, faults)
    elif source.layout == "edge_list":
        weights = read_edges(content, source.first_index, n_regions, origin.file, faults)
    else:
        table = read_numbers(content, origin.file, faults)
        if table is None:
            return None
        weights, names = table.values, _names(table, origin.file, faults)
    if weights is None or names is None or not _fits(weights, n_regions, origin.file, faults):
        return None
    weights.setflags(write=False)
    return MatrixRecord(origin, weights, names)


def _content(path: Path, shown: str, faults: Faults) -> bytes | None:
    try:
        content = path.read_bytes()
    except FileNotFoundError:
        faults.add(shown, "", "missing-file", "there is no such file", "put it there, or correct the path")
        return None
    except OSError as error:
        faults.add(shown, "", "unreadable", f"cannot be read ({error.strerror})",
                   "correct the path, or the file's permissions")  # fmt: skip
        return None
    if not content:
        faults.add(shown, "", "empty", "is empty", "save the matrix again")
        return None
    return content


def _names(table: NumberTable, shown: str, faults: Faults) -> tuple[str, ...] | None:
    """The regions as the file calls them (its header without the corner, or its first column).

    None when the header has another number of names than there are columns.
    """
    n_columns = table.values.shape[1]
    corner = len(table.header) - n_columns
    if not table.header:
        return table.names
    if corner == 0 or (corner == 1 and table.names):
        return table.header[corner:]
    faults.add(shown, "line 1", "ragged", f"has {len(table.header)} names for {n_columns} columns of numbers",
               "name every column, or none")  # fmt: skip
    return None


def _fits(weights: Array, n_regions: int | None, shown: str, faults: Faults) -> bool:
    """Whether the matrix is square, of the declared size, and finite where it must be."""
    size = " × ".join(map(str, weights.shape))
    if weights.ndim != 2 or weights.shape[0] != weights.shape[1] or len(weights) < 2:
        faults.add(shown, "", "not-square", f"is {size}, not a square matrix of regions",
                   "write a row and a column per region; save a file that was cut short again")  # fmt: skip
        return False
    if n_regions is not None and len(weights) != n_regions:
        faults.add(shown, "", "wrong-size", f"is {size} where the region table has {n_regions} regions",
                   "give both the same regions in the same order")  # fmt: skip
        return False
    finite = np.abs(weights) <= LARGEST
    if finite.all():
        return True
    np.fill_diagonal(finite, True)
    missing = np.isnan(weights)
    np.fill_diagonal(missing, True)
    gone = missing.all(axis=0) & missing.all(axis=1)
    stray = np.argwhere(~finite & ~(missing & (np.logical_or.outer(gone, gone))))
    if len(stray) == 0:
        return True
    row, column = stray[0]
    more = (
        f" (and {len(stray) - 1} more cells are missing, infinite or beyond {LARGEST:g})"
        if len(stray) > 1
        else ""
    )
    faults.add(shown, f"row {row + 1}, column {column + 1}", "not-finite",
               f"the weight is {weights[row, column]}{more}",
               "compute the matrix again; only a whole region may be missing")  # fmt: skip
    return False
