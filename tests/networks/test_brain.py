"""Only checked brain networks get through, after the rules that the study declares."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

from socibrain.documents import Document
from socibrain.errors import Fault, Faults
from socibrain.networks.brain import BrainNetwork, BrainReading, build_brain, refuse_odd_sizes
from socibrain.sources.records import MatrixFile, MatrixRecord, RegionTable
from socibrain.sources.study import Study, StudyFile

Array = NDArray[np.float64]

TABLE = RegionTable(("bow", "keel", "mast"), ("hull", "hull", "rig"))


def build(
    weights: Array | list[list[float]],
    regions: RegionTable | None = None,
    names: tuple[str, ...] = (),
    **rules: object,
) -> tuple[BrainReading, list[Fault]]:
    source = {"files": "{person}.tsv", "edges": "other", "negative": "refuse"} | rules
    says = StudyFile.model_validate(
        {
            "socibrain": 1, "study": "x", "title": "x", "people": {"file": "people.tsv"},
            "brain": {"rest": source},
        }
    )  # fmt: skip
    given = np.array(weights, dtype=float)
    given.setflags(write=False)
    faults = Faults()
    origin = MatrixFile("rest", "7", "2", "7.tsv")
    study = Study(Document(Path("study.yaml"), says, None))
    return build_brain(study, MatrixRecord(origin, given, names), regions, faults), list(faults)


def network_of(result: tuple[BrainReading, list[Fault]]) -> BrainNetwork:
    reading, faults = result
    assert faults == []
    assert reading.left_out == ""
    assert reading.network is not None
    return reading.network


def fault_of(result: tuple[BrainReading, list[Fault]]) -> tuple[str, str, str]:
    reading, (fault,) = result
    assert reading == BrainReading(None)
    assert fault.grave
    assert fault.file == "7.tsv"
    assert fault.mend
    return fault.place, fault.kind, fault.found


def random_weights(seed: int, n: int = 9) -> Array:
    upper = np.triu(np.random.default_rng(seed).standard_normal((n, n)), 1)
    return upper + upper.T


def test_a_sound_matrix_by_hand() -> None:
    network = network_of(build([[9, 1, 2], [1, 9, 6], [2, 6, 9]], TABLE))
    assert network.weights.tolist() == [[0, 1, 2], [1, 0, 6], [2, 6, 0]]
    assert network.mean_connectivity == 3
    assert (network.source, network.person, network.visit) == ("rest", "7", "2")
    assert network.regions is TABLE
    assert not network.weights.flags.writeable


def test_without_a_region_table_regions_are_numbered() -> None:
    regions = network_of(build(random_weights(1, 3), negative="drop")).regions
    assert regions == RegionTable(("r1", "r2", "r3"), ("", "", ""))


@pytest.mark.parametrize("diagonal", [0.0, 1.0, -3.0, np.nan, np.inf])
def test_the_diagonal_does_not_count(diagonal: float) -> None:
    weights = [[diagonal, 0.25, 0.5], [0.25, diagonal, 1], [0.5, 1, diagonal]]
    network = network_of(build(weights, edges="correlation"))
    assert np.diag(network.weights).tolist() == [0, 0, 0]
    assert network.mean_connectivity == pytest.approx(1.75 / 3)


def test_the_record_is_left_as_it_was() -> None:
    weights = np.array([[1, -0.5], [-0.5, 1]])
    build(weights, negative="absolute")
    assert weights.tolist() == [[1, -0.5], [-0.5, 1]]


@pytest.mark.parametrize("scale", [1e-9, 1.0, 1e9])
def test_rounding_is_averaged_away(scale: float) -> None:
    weights = scale * np.array([[0, 1, 2], [1, 0, 1], [2 + 1.9e-6, 1, 0]])
    network = network_of(build(weights))
    assert network.weights[0, 2] == network.weights[2, 0] == pytest.approx(scale * (2 + 0.95e-6), rel=1e-12)
    weights[2, 0] = scale * (2 + 2.1e-6)
    assert fault_of(build(weights))[:2] == ("row 1, column 3", "not-symmetric")


def test_the_worst_asymmetry_is_named() -> None:
    place, kind, found = fault_of(build([[0, 1, 2], [1.5, 0, 3], [2, 5, 0]]))
    assert (place, kind) == ("row 2, column 3", "not-symmetric")
    assert found == "holds 3 where row 3, column 2 holds 5"


@pytest.mark.parametrize(
    "weights",
    [
        [[1, 0, 0.5], [0, 1, 0], [0.5, 0, 1]],
        [[1, np.nan, 0.5], [np.nan, np.nan, np.nan], [0.5, np.nan, 1]],
    ],
)
def test_dead_regions(weights: list[list[float]]) -> None:
    place, kind, found = fault_of(build(weights, TABLE))
    assert (place, kind) == ("row 2", "dead-region")
    assert found == "dead region without any weight: 'keel'"
    reading, (fault,) = build(weights, TABLE, dead_regions="exclude_person")
    assert reading == BrainReading(None, "dead region without any weight: 'keel'")
    assert (fault.kind, fault.place, fault.grave) == ("dead-region", "row 2", False)


def test_all_dead_regions_are_named() -> None:
    weights = [[0, 0, 0], [0, 0, np.nan], [0, np.nan, 0]]
    found = fault_of(build(weights, TABLE))[2]
    assert found == "dead regions without any weight: 'bow', 'keel', 'mast'"


def test_a_region_with_ties_in_one_direction_is_not_dead() -> None:
    assert fault_of(build([[0, 1, 2], [0, 0, 0], [2, 1, 0]]))[1] == "not-symmetric"


SIGNED = [[0, 0.5, -0.25], [0.5, 0, 0.75], [-0.25, 0.75, 0]]


def test_negative_weights_refused_by_their_first_pair() -> None:
    place, kind, found = fault_of(build(SIGNED))
    assert (place, kind, found) == ("row 1, column 3", "negative-weight", "the weight is -0.25")
    assert fault_of(build([[0, 1, -1], [1, 0, -2], [-1, -2, 0]]))[2] == (
        "the weight is -1 (and 1 more pairs are negative)"
    )


@pytest.mark.parametrize(("rule", "weight"), [("drop", 0.0), ("absolute", 0.25)])
def test_negative_weights_after_their_rule(rule: str, weight: float) -> None:
    network = network_of(build(SIGNED, negative=rule))
    assert network.weights[0, 2] == network.weights[2, 0] == weight
    assert not np.signbit(network.weights).any()
    assert network.mean_connectivity == pytest.approx(1 / 3)  # before the rule: (.5 - .25 + .75) / 3


def test_a_region_that_the_rule_empties_is_not_dead() -> None:
    network = network_of(build([[0, -1, -1], [-1, 0, 2], [-1, 2, 0]], negative="drop"))
    assert network.weights[0].tolist() == [0, 0, 0]


@pytest.mark.parametrize("edges", ["correlation", "partial_correlation"])
def test_correlations_lie_within_one(edges: str) -> None:
    weights = [[1, -1 - 5e-7], [-1 - 5e-7, 1]]
    network_of(build(weights, edges=edges, negative="absolute"))
    outside = [[1, 0.5, 1], [0.5, 1, -1.25], [1, -1.25, 1]]
    place, kind, found = fault_of(build(outside, edges=edges, negative="drop"))
    assert (place, kind) == ("row 2, column 3", "not-a-correlation")
    assert "-1.25" in found
    network_of(build([[1, 2], [2, 1]], edges="fisher_z"))


def test_a_file_that_names_the_regions_in_another_order_is_refused() -> None:
    weights = np.array([[0.0, 1, 2], [1, 0, 3], [2, 3, 0]])
    network_of(build(weights, TABLE, names=TABLE.names))
    network_of(build(weights, TABLE, names=("1", "2", "3")))
    place, kind, found = fault_of(build(weights, TABLE, names=("bow", "mast", "keel")))
    assert (place, kind) == ("row 2", "region-order")
    assert found == "region 'mast' stands where the region table has 'keel'"


@pytest.mark.parametrize("rule", ["drop", "absolute"])
@pytest.mark.parametrize("seed", range(3))
def test_every_network_keeps_its_promises(seed: int, rule: str) -> None:
    given = random_weights(seed)
    network = network_of(build(given, negative=rule))
    weights = network.weights
    assert (weights == weights.T).all()
    assert (np.diag(weights) == 0).all()
    assert (weights >= 0).all()
    assert (weights[given > 0] == given[given > 0]).all()
    assert network.mean_connectivity == pytest.approx(given[np.triu_indices(9, 1)].mean(), rel=1e-12)


@pytest.mark.parametrize("seed", range(3))
def test_relabelling_and_scale_carry_through(seed: int) -> None:
    given = random_weights(seed)
    plain = network_of(build(given, negative="drop"))
    order = np.random.default_rng(seed).permutation(9)
    moved = network_of(build(4 * given[np.ix_(order, order)], negative="drop"))
    assert (moved.weights == 4 * plain.weights[np.ix_(order, order)]).all()
    assert moved.mean_connectivity == pytest.approx(4 * plain.mean_connectivity, rel=1e-12)


def test_weights_that_are_all_the_same_are_put_on_record() -> None:
    reading, (fault,) = build([[0, 2, 2], [2, 0, 2], [2, 2, 0]])
    assert reading.network is not None
    assert not fault.grave
    assert (fault.file, fault.kind, fault.found) == ("7.tsv", "equal-weights", "all weights are the same (2)")
    assert build([[0, 2, 2], [2, 0, 1], [2, 1, 0]])[1] == []


def test_every_file_of_another_size_is_refused_with_the_size_of_the_others() -> None:
    faults = Faults()
    files = [("a.tsv", 30), ("b.tsv", 29), ("c.tsv", 30), ("d.tsv", 31)]
    refuse_odd_sizes({"rest": files, "story": [("e.tsv", 30)]}, faults)
    assert [(fault.file, fault.found, fault.grave) for fault in faults] == [
        ("b.tsv", "29 regions; 2 other files of this input hold 30", True),
        ("d.tsv", "31 regions; 2 other files of this input hold 30", True),
    ]


def test_inputs_of_one_study_have_one_set_of_regions() -> None:
    faults = Faults()
    refuse_odd_sizes({"rest": [("a.tsv", 30)], "empty": [], "fibres": [("b.tsv", 60), ("c.tsv", 60)]}, faults)
    (fault,) = faults
    assert (fault.file, fault.found) == ("b.tsv", "input 'fibres' has 60 regions where 'rest' has 30")
