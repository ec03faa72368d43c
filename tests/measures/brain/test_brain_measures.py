"""Brain measures on brains small enough to work out by hand."""

from __future__ import annotations

import numpy as np
import pytest

from socibrain.measures.algorithms.communities import modularity_of
from socibrain.measures.algorithms.hubs import participation as participation_in
from socibrain.measures.brain.communities import community_count, modularity, restart_agreement
from socibrain.measures.brain.connectivity import mean_connectivity
from socibrain.measures.brain.hubs import connector_hubs, provincial_hubs
from socibrain.measures.brain.participation import mean_participation, participation
from socibrain.measures.brain.strength import mean_strength, strength
from socibrain.measures.brain.systems import system_modularity
from socibrain.measures.brain.within_module_z import (
    largest_within_module_z,
    mean_within_module_z,
    within_module_z,
)
from tests.measures.made_brains import at_hand, planted, two_stars

TWO_TRIOS = np.kron(np.eye(2), np.ones((3, 3)) - np.eye(3))


def joined_trios() -> np.ndarray:
    """Two triangles and one tie of weight 1 between regions 2 and 3."""
    weights = TWO_TRIOS.copy()
    weights[2, 3] = weights[3, 2] = 1.0
    return weights


def test_communities_of_joined_trios() -> None:
    # 6 of 7 ties inside, half of the tie ends on each side.
    hand = at_hand(joined_trios())
    assert modularity(hand) == pytest.approx(6 / 7 - 1 / 2, rel=1e-14)
    assert community_count(hand) == 2.0
    assert restart_agreement(hand) == 1.0
    assert hand.communities.consensus.tolist() == [1, 1, 1, 2, 2, 2]


def test_resolution_is_the_declared_one() -> None:
    hand = at_hand(joined_trios(), systems=("left",) * 3 + ("right",) * 3, resolution=0.5)
    assert modularity(hand) == pytest.approx(max(6 / 7 - 1 / 4, 1 - 1 / 2), rel=1e-14)
    assert system_modularity(hand) == pytest.approx(6 / 7 - 1 / 4, rel=1e-14)


def test_participation_of_joined_trios() -> None:
    # The two regions at the bridge have 2 of 3 ties at home: 1 − 4/9 − 1/9.
    hand = at_hand(joined_trios())
    np.testing.assert_allclose(participation(hand), [0, 0, 4 / 9, 4 / 9, 0, 0], atol=1e-15)
    assert mean_participation(hand) == pytest.approx(4 / 27, rel=1e-14)


def test_hub_measures_use_the_consensus() -> None:
    rng = np.random.default_rng(3)
    noise = np.triu(rng.exponential(size=(50, 50)), 1)
    hand = at_hand(noise + noise.T)
    found = hand.communities
    assert not np.array_equal(found.best, found.consensus)
    np.testing.assert_array_equal(
        participation(hand), participation_in(hand.network.weights, found.consensus)
    )
    assert modularity(hand) == found.qualities.max()
    assert community_count(hand) == found.consensus.max()


def test_mean_participation_leaves_regions_without_weight_out() -> None:
    weights = np.zeros((7, 7))
    weights[:6, :6] = joined_trios()
    hand = at_hand(weights)
    assert np.isnan(participation(hand)[6])
    assert mean_participation(hand) == pytest.approx(4 / 27, rel=1e-14)


def test_within_module_z_of_two_stars() -> None:
    # A centre has 9 inside and each arm 2: mean 2.7, SD 7·√.09 = 2.1, so 3 and −1/3.
    hand = at_hand(two_stars())
    z = within_module_z(hand)
    assert z[[0, 10]] == pytest.approx([3.0, 3.0], rel=1e-12)
    assert z[1:10] == pytest.approx([-1 / 3] * 9, rel=1e-12)
    assert largest_within_module_z(hand) == pytest.approx(3.0, rel=1e-12)
    assert mean_within_module_z(hand) == 0.0


def test_centres_that_keep_to_themselves_are_provincial() -> None:
    hand = at_hand(two_stars())
    assert (provincial_hubs(hand), connector_hubs(hand)) == (2.0, 0.0)


def test_a_centre_that_reaches_out_is_a_connector() -> None:
    # The first centre has 9 at home and 9 × .25 = 2.25 away: P = 1 − (9² + 2.25²)/11.25² = .32.
    weights = two_stars()
    weights[0, 11:20] = weights[11:20, 0] = 0.25
    hand = at_hand(weights)
    assert participation(hand)[0] == pytest.approx(0.32, rel=1e-12)
    assert (provincial_hubs(hand), connector_hubs(hand)) == (1.0, 1.0)


def test_smaller_communities_hold_no_hub() -> None:
    hand = at_hand(two_stars(arms=6))
    assert largest_within_module_z(hand) == pytest.approx(6**0.5, rel=1e-12)
    assert (provincial_hubs(hand), connector_hubs(hand)) == (0.0, 0.0)


def test_strength_and_connectivity() -> None:
    hand = at_hand(joined_trios() * 0.5)
    assert strength(hand).tolist() == [1.0, 1.0, 1.5, 1.5, 1.0, 1.0]
    assert mean_strength(hand) == pytest.approx(7 / 6, rel=1e-14)
    assert mean_connectivity(hand) == hand.network.mean_connectivity == pytest.approx(7 / 30, rel=1e-14)


def test_modularity_of_the_declared_systems() -> None:
    # Systems across the trios: ties 0–1, 3–4 inside a system of two, 2–3 apart; see the sums.
    systems = ("a", "a", "b", "a", "a", "b")
    # Inside a: 0–1 and 3–4; inside b: none.  Strengths: a 2+2+3+2 = 9, b 3+2 = 5 of 14.
    hand = at_hand(joined_trios(), systems=systems)
    assert system_modularity(hand) == pytest.approx(2 / 7 - (81 + 25) / 196, rel=1e-13)


def test_systems_named_apart_from_their_order() -> None:
    weights, systems = planted(4)
    renamed = tuple({"ash": "z", "birch": "y", "cedar": "x", "elm": "w"}[system] for system in systems)
    assert system_modularity(at_hand(weights, systems=systems)) == pytest.approx(
        system_modularity(at_hand(weights, systems=renamed)), rel=1e-13
    )


def test_regions_without_system_are_left_out() -> None:
    hand = at_hand(joined_trios(), systems=("a", "a", "", "b", "b", ""))
    pairs = np.array([[0, 1, 0, 0], [1, 0, 0, 0], [0, 0, 0, 1], [0, 0, 1, 0.0]])
    assert system_modularity(hand) == modularity_of(pairs, np.array([1, 1, 2, 2]), resolution=1.0) == 0.5


def test_no_systems_no_modularity_of_them() -> None:
    assert np.isnan(system_modularity(at_hand(joined_trios())))
