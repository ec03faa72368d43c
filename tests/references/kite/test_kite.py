"""Position in the kite against outside values; see passport.md."""

from __future__ import annotations

import networkx
import pytest

from socibrain.measures.catalogue import find_measure
from tests.measures.made_sites import site_of

PEOPLE = ("Andre", "Beverley", "Carol", "Diane", "Ed", "Fernando", "Garth", "Heather", "Ike", "Jane")
SITE = site_of(networkx.to_numpy_array(networkx.krackhardt_kite_graph()), rule="either", people=PEOPLE)


@pytest.mark.parametrize(
    ("name", "person", "expected", "tolerance"),
    [
        ("either_degree", "Diane", 6, 0),
        ("constraint", "Diane", 0.470170, 5e-7),
        ("betweenness", "Heather", 14, 1e-12),
        ("constraint", "Heather", 0.431111, 5e-7),
        ("betweenness", "Ike", 8, 1e-12),
        ("constraint", "Ike", 0.5, 1e-12),
        ("constraint", "Jane", 1, 1e-12),
    ],
)
def test_position(name: str, person: str, expected: float, tolerance: float) -> None:
    value = find_measure(name).function(SITE)[PEOPLE.index(person)]
    assert value == pytest.approx(expected, abs=tolerance)
