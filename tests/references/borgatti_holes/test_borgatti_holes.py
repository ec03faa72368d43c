"""Structural holes in a published network against outside values; see passport.md."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import sparse

from socibrain.measures.algorithms.holes import constraint, effective_size

WEIGHTS = {"AB": 2, "AF": 3, "AG": 5, "AE": 2, "EG": 8, "FG": 3, "BG": 4, "BD": 1, "DG": 3, "GC": 10}


def network(*, weighted: bool) -> sparse.csr_array:
    ties = np.zeros((7, 7))
    for (one, other), weight in WEIGHTS.items():
        ties["ABCDEFG".index(one), "ABCDEFG".index(other)] = weight if weighted else 1
    return sparse.csr_array(ties)


@pytest.mark.parametrize(
    ("weighted", "person", "expected", "tolerance"),
    [
        (False, "G", 0.400, 5e-4),
        (False, "A", 0.595, 5e-4),
        (False, "C", 1.0, 1e-12),
        (True, "G", 0.299, 5e-4),
        (True, "A", 0.795, 5e-4),
    ],
)
def test_constraint(*, weighted: bool, person: str, expected: float, tolerance: float) -> None:
    value = constraint(network(weighted=weighted))["ABCDEFG".index(person)]
    assert value == pytest.approx(expected, abs=tolerance)


@pytest.mark.parametrize(("person", "expected"), [("G", 4.67), ("A", 2.50)])
def test_effective_size(person: str, expected: float) -> None:
    value = effective_size(network(weighted=False))["ABCDEFG".index(person)]
    assert value == pytest.approx(expected, abs=5e-3)
