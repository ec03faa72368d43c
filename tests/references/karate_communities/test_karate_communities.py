"""Communities and hubs of the karate club against outside values; see passport.md."""

from __future__ import annotations

import json
from pathlib import Path

import networkx
import numpy as np
import pytest

from socibrain.measures.algorithms.communities import Communities, find_communities, modularity_of
from socibrain.measures.algorithms.hubs import participation, roles, within_module_z

VALUES = json.loads((Path(__file__).parent / "values.json").read_text(encoding="utf-8"))
KARATE = networkx.karate_club_graph()
TIES = networkx.to_numpy_array(KARATE, weight=None)
WEIGHTS = networkx.to_numpy_array(KARATE, weight="weight")


def found_in(weights: np.ndarray) -> Communities:
    return find_communities(weights, resolution=1.0, restarts=50, seed=1)


@pytest.mark.parametrize(("kind", "weights"), [("binary", TIES), ("weighted", WEIGHTS)])
def test_best_modularity(kind: str, weights: np.ndarray) -> None:
    found = found_in(weights)
    assert found.best_quality == pytest.approx(VALUES["modularity"][kind], abs=5e-11)
    assert found.best.max() == VALUES["communities"]


def test_modularity_of_the_split_into_clubs() -> None:
    clubs = np.array([KARATE.nodes[node]["club"] == "Officer" for node in KARATE], dtype=np.int64)
    assert modularity_of(TIES, clubs, resolution=1.0) == pytest.approx(
        VALUES["modularity"]["clubs"], abs=5e-11
    )


@pytest.mark.parametrize("node", VALUES["nodes"])
def test_hubs_on_the_best_partition(node: str) -> None:
    partition = found_in(TIES).best
    spread, z = participation(TIES, partition), within_module_z(TIES, partition)
    expected, place = VALUES["nodes"][node], int(node) - 1
    assert spread[place] == pytest.approx(expected["participation"], abs=5e-8)
    if "z" in expected:
        assert z[place] == pytest.approx(expected["z"], abs=5e-7)
    assert roles(spread, z)[place] == expected["role"]


def test_node_3_lies_exactly_on_the_threshold() -> None:
    spread = participation(TIES, found_in(TIES).best)
    assert spread[2] == pytest.approx(0.62, abs=1e-15)
