"""Position in the karate club against outside values; see passport.md."""

from __future__ import annotations

import networkx
import numpy as np
import pytest

from socibrain.measures.algorithms.rich_club import rich_club_density
from socibrain.measures.catalogue import find_measure
from tests.measures.made_sites import site_of

TIES = networkx.to_numpy_array(networkx.karate_club_graph(), weight=None) > 0
SITE = site_of(TIES, rule="either")


@pytest.mark.parametrize(
    ("name", "node", "expected", "tolerance"),
    [
        ("betweenness", 1, 231.071429, 5e-7),
        ("betweenness", 34, 160.551587, 5e-7),
        ("constraint", 1, 0.155423, 5e-7),
        ("constraint", 34, 0.156419, 5e-7),
        ("effective_size", 1, 13.75, 1e-12),
        ("effective_size", 34, 15.235294, 5e-7),
    ],
)
def test_position(name: str, node: int, expected: float, tolerance: float) -> None:
    assert find_measure(name).function(SITE)[node - 1] == pytest.approx(expected, abs=tolerance)


def test_rich_club_density() -> None:
    levels, density = rich_club_density(TIES)
    by_level = dict(zip(levels.tolist(), density.tolist(), strict=True))
    assert by_level[5] == pytest.approx(0.5238095, abs=5e-8)
    assert by_level[10] == pytest.approx(1 / 3, abs=1e-12)


def test_the_rule_makes_no_difference_to_mutual_ties() -> None:
    for rule in ("both", "directed"):
        other = site_of(TIES, rule=rule)
        for name in ("constraint", "effective_size", "rich_club_p"):
            np.testing.assert_array_equal(
                find_measure(name).function(other), find_measure(name).function(SITE)
            )
