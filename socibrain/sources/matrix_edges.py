"""Edge lists: one tie per line, `i j weight`, each undirected tie in one direction or both."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.errors import Faults
from socibrain.sources.matrix_text import NumberTable, read_numbers

Array = NDArray[np.float64]

SAME = 1e-6
"""Two entries of one tie are the same when they differ by no more than this share of the largest weight."""


def read_edges(
    content: bytes, first_index: int, n_regions: int | None, shown: str, faults: Faults
) -> Array | None:
    """The symmetric matrix that an edge list spells out; 0 where no tie is listed.

    Without a region table the highest number gives the number of regions.  A tie of a region with
    itself is passed over.  A tie that is listed more than once must have the same weight each time.
    Returns None with the reason in ``faults`` when the list cannot be used.
    """
    table = read_numbers(content, shown, faults)
    if table is None:
        return None
    if table.names or table.values.shape[1] != 3:
        n_columns = table.values.shape[1] + bool(table.names)
        faults.add(shown, f"line {table.first_line}", "not-an-edge-list",
                   f"has {n_columns} columns{', the first one text' if table.names else ''}",
                   "write three numbers per line: region, region, weight")  # fmt: skip
        return None
    ends, weights = table.values[:, :2] - first_index, table.values[:, 2]
    highest = np.inf if n_regions is None else n_regions - 1
    strange = (ends != np.floor(ends)) | (ends < 0) | (ends > highest)
    if strange.any():
        row, column = np.argwhere(strange)[0]
        last = "" if n_regions is None else f" to {n_regions - 1 + first_index}"
        faults.add(shown, f"line {table.first_line + row}, column {column + 1}", "unknown-region",
                   f"no region {table.values[row, column]:g}: regions are numbered from {first_index}{last}",
                   "correct it, or `first_index:` in the study file, or the region table")  # fmt: skip
        return None
    if not np.isfinite(weights).all():
        row = int(np.argmin(np.isfinite(weights)))
        faults.add(shown, f"line {table.first_line + row}, column 3", "not-finite",
                   f"the weight is {weights[row]}", "leave the line out, or write its weight")  # fmt: skip
        return None
    low, high = np.sort(ends.astype(np.int64), axis=1).T
    n = int(high.max()) + 1 if n_regions is None else n_regions
    return _filled(table, low * n + high, n, shown, faults)


def _filled(table: NumberTable, ties: NDArray[np.int64], n: int, shown: str, faults: Faults) -> Array | None:
    """The matrix with the mean entry of each tie, when its entries agree."""
    weights = table.values[:, 2]
    times = np.bincount(ties, minlength=n * n)
    mean = np.bincount(ties, weights, minlength=n * n) / np.maximum(times, 1)
    apart = np.abs(weights - mean[ties]) > SAME / 2 * np.abs(weights).max()
    apart &= ties // n != ties % n
    if apart.any():
        tie = ties[np.argmax(apart)]
        first, last = np.flatnonzero(ties == tie)[[0, -1]]
        faults.add(shown, f"line {table.first_line + last}", "not-symmetric",
                   f"gives {weights[last]:g} for the tie that line {table.first_line + first} "
                   f"gives {weights[first]:g}",
                   "list each tie once, or with the same weight")  # fmt: skip
        return None
    upper = np.triu(mean.reshape(n, n), 1)
    return upper + upper.T
