"""What every brain measure in the catalogue must keep to."""

from __future__ import annotations

import numpy as np
import pytest

from socibrain.measures.brain.at_hand import BrainAtHand
from socibrain.measures.catalogue import Measure, all_measures
from tests.measures.made_brains import at_hand, planted, two_stars

BRAIN = [each for each in all_measures().values() if each.side == "brain"]
every_measure = pytest.mark.parametrize("measure", BRAIN, ids=lambda measure: measure.name)

PERSON_SCALE = {
    "modularity", "community_count", "restart_agreement", "system_modularity", "mean_participation",
    "mean_within_module_z", "largest_within_module_z", "connector_hubs", "provincial_hubs",
    "mean_strength", "mean_connectivity",
}  # fmt: skip
REGION_SCALE = {"participation", "within_module_z", "strength"}


def weak(seed: int) -> np.ndarray:
    """A brain without clear communities, so that what draws at random shows it."""
    weights = np.triu(np.random.default_rng(seed).exponential(size=(50, 50)), 1)
    return weights + weights.T


def brains() -> list[BrainAtHand]:
    weights, systems = planted(1)
    apart = weights.copy()
    apart[:2] = apart[:, :2] = 0.0
    return [
        at_hand(weights, systems=systems),
        at_hand(apart, systems=systems),
        at_hand(weak(2)),
        at_hand(weak(3), resolution=2.0),
        at_hand(two_stars()),
        at_hand(np.zeros((4, 4))),
    ]


def value_of(measure: Measure, hand: BrainAtHand) -> np.ndarray:
    return np.asarray(measure.function(hand), dtype=np.float64)


def test_the_first_set_is_there() -> None:
    assert {each.name for each in BRAIN if each.scale == "person"} >= PERSON_SCALE
    assert {each.name for each in BRAIN if each.scale == "region"} >= REGION_SCALE


@every_measure
def test_passport_is_complete(measure: Measure) -> None:
    for text in (
        measure.label,
        measure.unit,
        measure.reading,
        measure.undefined,
        measure.source,
        measure.says,
    ):
        assert text.strip() == text
        assert text
    assert measure.low < measure.high
    assert measure.scale in ("person", "region")
    assert measure.says.endswith(".")


@every_measure
def test_shape_type_and_range(measure: Measure) -> None:
    for hand in brains():
        value = measure.function(hand)
        if measure.scale == "person":
            assert isinstance(value, float)
        else:
            assert value.dtype == np.float64
            assert value.shape == (len(hand.network.regions),)
        defined = np.asarray(value)[~np.isnan(value)]
        assert np.isfinite(defined).all()
        assert ((defined >= measure.low) & (defined <= measure.high)).all()


@every_measure
def test_undefined_only_where_the_passport_says_so(measure: Measure) -> None:
    weights, systems = planted(5)
    assert not np.isnan(value_of(measure, at_hand(weights, systems=systems))).any()
    missing = np.isnan(value_of(measure, at_hand(np.zeros((4, 4))))).any()
    assert missing == (not measure.undefined.startswith("never"))


@every_measure
def test_relabelling_regions_carries_values_along(measure: Measure) -> None:
    weights, systems = planted(6)
    order = np.random.default_rng(7).permutation(len(weights))
    before = value_of(measure, at_hand(weights, systems=systems))
    moved = at_hand(weights[np.ix_(order, order)], systems=tuple(systems[place] for place in order))
    expected = before[order] if measure.scale == "region" else before
    np.testing.assert_allclose(value_of(measure, moved), expected, rtol=1e-10, atol=1e-12)


@every_measure
def test_scale_goes_through_or_cancels(measure: Measure) -> None:
    weights, systems = planted(8)
    before = value_of(measure, at_hand(weights, systems=systems))
    factor = 1000.0 if measure.unit == "weight" else 1.0
    after = value_of(measure, at_hand(weights * 1000, systems=systems))
    np.testing.assert_allclose(after, before * factor, rtol=1e-10, atol=1e-12)


@every_measure
def test_same_seed_same_value(measure: Measure) -> None:
    one, again = (value_of(measure, at_hand(weak(9), seed=4)) for _ in range(2))
    np.testing.assert_array_equal(one, again)
