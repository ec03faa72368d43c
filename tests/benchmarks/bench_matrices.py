"""Times the brain loader against the bare parser it stands on."""

from __future__ import annotations

import tempfile
from pathlib import Path

import numpy as np
import pandas as pd

from socibrain.errors import Faults
from socibrain.sources.matrices import read_matrix
from socibrain.sources.matrix_files import find_matrices
from socibrain.sources.study import Study, read_study
from tests.benchmarks.pairing import Result, compare

PEOPLE = [f"sub-{number:03d}" for number in range(1, 171)]
GOAL = 1.3
STUDY = """\
socibrain: 1
study: bench
title: Matrices for the clock
people: {file: participants.tsv}
brain:
  rest: {files: "{person}.tsv", edges: correlation, negative: drop}
"""


def run() -> list[Result]:
    """Reads 170 matrices as text, of 80 and of 300 regions, without and with names in a header."""
    return [_timed(n, header) for n in (80, 300) for header in (False, True)]


def _timed(n: int, header: bool) -> Result:
    with tempfile.TemporaryDirectory() as room:
        study = _written(Path(room), n, header)
        files = [study.folder / f"{person}.tsv" for person in PEOPLE]
        named = ", named" if header else ""
        return compare(
            f"read 170 TSV matrices of {n} × {n}{named}",
            lambda: _ours(study, n),
            lambda: [_bare(file, header) for file in files],
            against="pandas' parser alone",
            goal=GOAL,
            rounds=5 if n > 100 else 9,
        )


def _written(room: Path, n: int, header: bool) -> Study:
    rng = np.random.default_rng(n)
    for person in PEOPLE:
        weights = np.corrcoef(rng.standard_normal((n, 150)))
        frame = pd.DataFrame(weights, columns=[f"region {i}" for i in range(n)])
        frame.to_csv(room / f"{person}.tsv", sep="\t", index=False, header=header)
    (room / "study.yaml").write_text(STUDY, encoding="utf-8")
    return read_study(room / "study.yaml")


def _ours(study: Study, n: int) -> int:
    """Finding the files and reading them with every check."""
    faults = Faults()
    read = [read_matrix(study, origin, n, faults) for origin in find_matrices(study, "rest", PEOPLE, faults)]
    if list(faults) or len(read) != len(PEOPLE):
        raise RuntimeError("the matrices were not read")
    return len(read)


def _bare(file: Path, header: bool) -> np.ndarray:
    """The fastest general parser for this that we measured, told the layout beforehand."""
    return pd.read_csv(
        file, sep="\t", header=None, skiprows=int(header), dtype=np.float64, na_filter=False, low_memory=False
    ).to_numpy()
