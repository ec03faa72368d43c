"""One person's regions and weights, checked and immutable."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from socibrain.errors import Faults
from socibrain.sources.records import MatrixRecord, RegionTable
from socibrain.sources.study import BrainInput, Study

Array = NDArray[np.float64]

NEAR = 1e-6
"""Largest asymmetry that is taken for rounding, as a share of the largest absolute weight."""

BOUNDED = ("correlation", "partial_correlation")
"""Edges whose weights lie in -1 to 1."""


@dataclass(frozen=True)
class BrainNetwork:
    """One person's brain network at one visit.

    ``weights`` is (n_regions, n_regions) float64: symmetric, zero diagonal, finite, and
    non-negative after the declared rule; read-only.
    ``mean_connectivity`` is the mean of the off-diagonal weights *before* negative weights were
    dropped or made absolute, in units of the weights.
    """

    source: str
    person: str
    visit: str
    regions: RegionTable
    weights: Array
    mean_connectivity: float


@dataclass(frozen=True)
class BrainReading:
    """What became of one matrix: a network, or the reason why this person is left out.

    When there is neither, the matrix was refused, and the reason is among the faults.
    """

    network: BrainNetwork | None
    left_out: str = ""


def build_brain(
    study: Study, record: MatrixRecord, regions: RegionTable | None, faults: Faults
) -> BrainReading:
    """Check one matrix, and apply what the study says of dead regions and negative weights.

    Asymmetry within 1e-6 of the largest absolute weight is rounding, and averaged away; more is a
    grave fault.  The diagonal is set to 0.  A region is dead when its weights are all missing or
    all 0.  Without a region table regions are called r1 … rn and belong to no system.

    >>> from pathlib import Path
    >>> from socibrain.documents import Document
    >>> from socibrain.sources.records import MatrixFile
    >>> from socibrain.sources.study import StudyFile
    >>> says = {"socibrain": 1, "study": "x", "title": "x", "people": {"file": "people.tsv"},
    ...     "brain": {"rest": {"files": "{person}.tsv", "edges": "correlation", "negative": "drop"}}}
    >>> study = Study(Document(Path("study.yaml"), StudyFile(**says), None))
    >>> weights = np.array([[1, 0.5, -0.25], [0.5, 1, 0.5], [-0.25, 0.5, 1]])
    >>> record = MatrixRecord(MatrixFile("rest", "007", "", "007.tsv"), weights)
    >>> network = build_brain(study, record, None, Faults()).network
    >>> network.weights.tolist(), network.mean_connectivity, network.regions.names
    ([[0.0, 0.5, 0.0], [0.5, 0.0, 0.5], [0.0, 0.5, 0.0]], 0.25, ('r1', 'r2', 'r3'))
    """
    rules, origin = study.says.brain[record.origin.source], record.origin
    n = len(record.weights)
    table = regions or RegionTable(tuple(f"r{i + 1}" for i in range(n)), ("",) * n)
    given = record.weights.copy()
    np.fill_diagonal(given, 0.0)
    dead = _dead(given)
    if dead.any():
        return _with_dead(table, dead, rules, origin.file, faults)
    if not (_in_order(record, table, faults) and _symmetric(given, origin.file, faults)):
        return BrainReading(None)
    weights = (given + given.T) / 2
    mean_connectivity = float(weights.sum() / (n * (n - 1)))
    _note_equal(weights, origin.file, faults)
    if not _within_range(weights, rules, origin.file, faults):
        return BrainReading(None)
    weights = np.abs(weights) if rules.negative == "absolute" else np.where(weights > 0, weights, 0.0)
    weights.setflags(write=False)
    network = BrainNetwork(origin.source, origin.person, origin.visit, table, weights, mean_connectivity)
    return BrainReading(network)


def refuse_odd_sizes(sizes: Mapping[str, Sequence[tuple[str, int]]], faults: Faults) -> None:
    """Add a grave fault for every file that differs in size from most of its brain input.

    ``sizes`` pairs, by input, each readable file with its number of regions.  Of sizes that are
    equally frequent, the first is taken for right.  Inputs that differ from the first one are
    grave faults too: a study has one set of regions.

    >>> faults = Faults()
    >>> refuse_odd_sizes({"rest": [("a.tsv", 30), ("b.tsv", 29), ("c.tsv", 30)]}, faults)
    >>> [(fault.file, fault.found) for fault in faults]
    [('b.tsv', '29 regions; 2 other files of this input hold 30')]
    """
    usual = {
        source: Counter(size for _, size in pairs).most_common(1)[0]
        for source, pairs in sizes.items()
        if pairs
    }
    for source, (size, times) in usual.items():
        first, (wanted, _) = next(iter(usual.items()))
        others = (
            "1 other file of this input holds" if times == 1 else f"{times} other files of this input hold"
        )
        for file, found in sizes[source]:
            if found != size:
                faults.add(file, "", "odd-size", f"{found} regions; {others} {size}",
                           "give all files of an input the same regions in the same order")  # fmt: skip
        if size != wanted:
            faults.add(sizes[source][0][0], "", "odd-size",
                       f"input '{source}' has {size} regions where '{first}' has {wanted}",
                       "describe matrices of other regions in a study file of their own")  # fmt: skip


def _note_equal(weights: Array, file: str, faults: Faults) -> None:
    """Say so when no pair of regions differs from any other: nobody measures that."""
    pairs = weights[np.triu_indices(len(weights), 1)]
    if pairs.size > 1 and (pairs == pairs[0]).all():
        faults.add(file, "", "equal-weights", f"all weights are the same ({pairs[0]:.6g})",
                   "compute the matrix again", grave=False)  # fmt: skip


def _dead(weights: Array) -> NDArray[np.bool_]:
    """Regions without any weight: all missing, or none but 0 beside what is missing elsewhere."""
    nothing = np.isnan(weights) | (weights == 0)
    dead: NDArray[np.bool_] = nothing.all(axis=0) & nothing.all(axis=1)
    return dead


def _with_dead(
    table: RegionTable, dead: NDArray[np.bool_], rules: BrainInput, file: str, faults: Faults
) -> BrainReading:
    names = [f"'{name}'" for name, gone in zip(table.names, dead, strict=True) if gone]
    found = f"dead region{'s' if len(names) > 1 else ''} without any weight: {', '.join(names)}"
    place = f"row {int(np.argmax(dead)) + 1}"
    if rules.dead_regions == "exclude_person":
        faults.add(
            file, place, "dead-region", found, "the person is left out of this brain input", grave=False
        )
        return BrainReading(None, found)
    faults.add(file, place, "dead-region", found,
               "compute the matrix again, or write `dead_regions: exclude_person`")  # fmt: skip
    return BrainReading(None)


def _in_order(record: MatrixRecord, table: RegionTable, faults: Faults) -> bool:
    """Whether every region of the table that the file names stands where the table has it."""
    known = set(table.names)
    pairs = enumerate(zip(record.names, table.names, strict=False))
    at = next((i for i, (own, other) in pairs if own != other and own in known), None)
    if at is None:
        return True
    faults.add(record.origin.file, f"row {at + 1}", "region-order",
               f"region '{record.names[at]}' stands where the region table has '{table.names[at]}'",
               "bring both into the same order")  # fmt: skip
    return False


def _symmetric(weights: Array, file: str, faults: Faults) -> bool:
    apart = np.abs(weights - weights.T)
    if apart.max() <= NEAR * np.abs(weights).max():
        return True
    i, j = np.unravel_index(np.argmax(apart), apart.shape)
    faults.add(file, f"row {i + 1}, column {j + 1}", "not-symmetric",
               f"holds {weights[i, j]:.6g} where row {j + 1}, column {i + 1} holds {weights[j, i]:.6g}",
               "give each pair of regions one weight; directed brain networks are not read")  # fmt: skip
    return False


def _within_range(weights: Array, rules: BrainInput, file: str, faults: Faults) -> bool:
    """Whether the weights can be what the study says they are."""
    if rules.negative == "refuse" and (weights < 0).any():
        pairs = np.argwhere(np.triu(weights < 0))
        i, j = pairs[0]
        more = f" (and {len(pairs) - 1} more pairs are negative)" if len(pairs) > 1 else ""
        faults.add(file, f"row {i + 1}, column {j + 1}", "negative-weight",
                   f"the weight is {weights[i, j]:.6g}{more}",
                   "compute the matrix again, or write `negative: drop` or `negative: absolute`")  # fmt: skip
        return False
    if rules.edges in BOUNDED and np.abs(weights).max() > 1 + NEAR:
        i, j = np.unravel_index(np.argmax(np.abs(weights)), weights.shape)
        faults.add(file, f"row {i + 1}, column {j + 1}", "not-a-correlation",
                   f"the weight {weights[i, j]:.6g} is outside -1 to 1",
                   "write what the weights are: `edges: fisher_z`, `edges: other` …")  # fmt: skip
        return False
    return True
