"""Social measures on sites small enough to work out by hand."""

from __future__ import annotations

import networkx
import numpy as np
import pytest

from socibrain.measures.algorithms.brokerage import ROLES
from socibrain.measures.catalogue import find_measure
from socibrain.measures.social.at_hand import SiteAtHand
from socibrain.sources.study import TieRule
from tests.measures.made_sites import planted_club, random_named, random_ties, site_of


def arrows(text: str, people: int) -> np.ndarray:
    """Who named whom from ``"01 12"``: 0 named 1, 1 named 2."""
    named = np.zeros((people, people), dtype=bool)
    for pair in text.split():
        named[int(pair[0]), int(pair[1])] = True
    return named


def values(name: str, site: SiteAtHand) -> list[float]:
    return np.asarray(find_measure(name).function(site)).round(6).tolist()


SMALL = arrows("01 10 02 20 03 12 34", 6)
"""0 and 1, 0 and 2 named each other; 0 named 3, 1 named 2, 3 named 4; nobody knows 5."""


@pytest.mark.parametrize(
    ("name", "expected"),
    [
        ("in_degree", [2, 1, 2, 1, 1, 0]),
        ("out_degree", [3, 2, 1, 1, 0, 0]),
        ("either_degree", [3, 2, 2, 2, 1, 0]),
        ("mutual_degree", [2, 1, 1, 0, 0, 0]),
    ],
)
def test_degrees_count_nominations_whatever_the_rule(name: str, expected: list[float]) -> None:
    for rule in ("directed", "either", "both"):
        assert values(name, site_of(SMALL, rule=rule)) == expected


def test_reciprocity_leaves_out_those_who_did_not_answer() -> None:
    everyone = site_of(SMALL)
    assert values("reciprocity", everyone)[:4] == [0.666667, 0.5, 1.0, 0.0]
    assert values("site_reciprocity", everyone) == pytest.approx(4 / 7, abs=1e-6)
    without_3 = SMALL.copy()
    without_3[3] = False
    site = site_of(without_3, answered=np.arange(6) != 3)
    assert values("reciprocity", site)[0] == 1.0  # of 1 and 2, both returned; what 3 would say is unknown
    assert values("site_reciprocity", site) == 0.8


def test_density_counts_only_nominations_that_could_be_made() -> None:
    assert values("site_density", site_of(SMALL)) == pytest.approx(7 / 30, abs=1e-6)
    without_3 = SMALL.copy()
    without_3[3] = False
    site = site_of(without_3, answered=np.arange(6) != 3)
    assert values("site_density", site) == 6 / 25


def test_betweenness_follows_the_tie_rule() -> None:
    """Directed: 0 carries 1→3, 1→4, 2→1, 2→3, 2→4; 3 carries 0→4, 1→4, 2→4; nobody else any."""
    assert values("betweenness", site_of(SMALL)) == [5, 0, 0, 3, 0, 0]
    assert values("betweenness", site_of(SMALL, rule="either")) == [4, 0, 0, 3, 0, 0]
    assert values("betweenness", site_of(SMALL, rule="both")) == [1, 0, 0, 0, 0, 0]


@pytest.mark.parametrize("rule", ["directed", "either", "both"])
def test_betweenness_agrees_with_an_independent_library(rule: str) -> None:
    for seed in range(5):
        site = site_of(random_named(seed, people=30, chance=0.12), rule=rule)
        kind = networkx.DiGraph if rule == "directed" else networkx.Graph
        reference = networkx.betweenness_centrality(
            networkx.from_numpy_array(site.ties, create_using=kind), normalized=False
        )
        np.testing.assert_allclose(
            find_measure("betweenness").function(site), [reference[person] for person in range(30)], atol=1e-9
        )


def test_mutual_ties_weigh_twice_in_constraint_under_a_directed_rule() -> None:
    """Person 0 and 1 named each other, 0 named 2: shares 2/3 and 1/3, contacts unconnected."""
    site = site_of(arrows("01 10 02", 3))
    assert values("constraint", site)[0] == pytest.approx(4 / 9 + 1 / 9, abs=1e-6)
    assert values("constraint", site_of(arrows("01 10 02", 3), rule="either"))[0] == 0.5


def test_open_triads_count_twice_without_direction() -> None:
    chain = arrows("01 12", 3)
    roles = ("deck", "deck", "deck")
    assert values("coordinator", site_of(chain, roles=roles)) == [0, 1, 0]
    assert values("coordinator", site_of(chain, roles=roles, rule="either")) == [0, 2, 0]
    assert values("coordinator", site_of(chain, roles=roles, rule="both")) == [0, 0, 0]


@pytest.mark.parametrize("rule", ["either", "both"])
def test_in_and_out_of_ones_class_are_one_thing_without_direction(rule: TieRule) -> None:
    site = site_of(
        random_named(8, chance=0.4), rule=rule, roles=tuple("abc"[place % 3] for place in range(16))
    )
    assert max(values("gatekeeper", site)) > 0
    assert values("gatekeeper", site) == values("representative", site)
    assert values("gatekeeper_against_chance", site) == pytest.approx(
        values("representative_against_chance", site), nan_ok=True
    )


def test_brokerage_against_chance_is_centred_on_random_networks() -> None:
    """A site that is itself one of the random networks deviates by about 0 on average, SD 1."""
    classes = tuple("abc"[place % 3] for place in range(20))
    for rule in ("directed", "either"):
        scores = []
        for seed in range(6):
            site = site_of(random_named(seed, people=20), rule=rule, roles=classes)
            scores.append([find_measure(f"{role}_against_chance").function(site) for role in ROLES])
        flat = np.concatenate([np.ravel(each) for each in scores])
        assert abs(np.nanmean(flat)) < 0.2
        assert 0.8 < np.nanstd(flat) < 1.2


def test_planted_club_is_found_with_its_members() -> None:
    """All planted members belong; so may others, where the significant run reaches to lower k."""
    others = []
    for seed in range(5):
        site = site_of(planted_club(seed), rule="either")
        assert values("rich_club_p", site) <= 0.05
        member = np.array(values("rich_club_member", site))
        assert member[:9].all()
        others.append(member[9:].mean())
        assert values("rich_club_from_degree", site) == site.contacts.sum(axis=1)[member > 0].min()
        lean = np.array(values("ties_to_best_connected", site))
        assert np.nanmean(lean[:9]) > 0.5
        assert np.nanmean(lean[9:]) < 0
    assert np.mean(others) < 0.5


def test_rich_club_counts_contacts_in_either_direction_when_ties_are_directed() -> None:
    ties = planted_club(1)
    one_way = np.triu(ties)
    directed, plain = site_of(one_way), site_of(ties, rule="either")
    np.testing.assert_array_equal(directed.contact_degrees, plain.ties.sum(axis=1))
    np.testing.assert_array_equal(directed.club.density, plain.club.density)
    assert directed.club.p <= 0.05


def test_no_club_in_a_site_where_all_are_equal() -> None:
    ring = np.roll(np.eye(8, dtype=bool), 1, axis=1)
    site = site_of(ring, rule="either")
    assert np.isnan(values("rich_club_p", site))
    assert np.isnan(values("rich_club_member", site)).all()


def test_no_club_where_the_best_connected_avoid_each_other() -> None:
    """Three hubs tied to everyone but each other: no network with these degrees has fewer ties among them."""
    ties = np.zeros((15, 15), dtype=bool)
    ties[:3, 3:] = ties[3:, :3] = True
    ties[np.arange(3, 15), np.roll(np.arange(3, 15), 1)] = True
    ties |= ties.T
    site = site_of(ties, rule="either")
    assert values("rich_club_p", site) > 0.5
    assert np.isnan(values("rich_club_member", site)).all()


def test_draws_keep_what_they_promise_under_each_rule() -> None:
    named = random_named(7)
    for rule in ("directed", "either", "both"):
        site = site_of(named, rule=rule)
        for block in site.drawn_ties.networks():
            np.testing.assert_array_equal(block.sum(axis=2), np.tile(site.ties.sum(axis=1), (len(block), 1)))
            np.testing.assert_array_equal(block.sum(axis=1), np.tile(site.ties.sum(axis=0), (len(block), 1)))
    assert site_of(random_ties(7), rule="either").drawn_ties.one_way.shape[1] == 0
