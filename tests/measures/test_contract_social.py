"""What every social measure in the catalogue must keep to."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from socibrain.measures.algorithms.brokerage import ROLES
from socibrain.measures.catalogue import Measure, all_measures
from socibrain.measures.social.at_hand import SiteAtHand
from tests.measures.made_sites import planted_club, random_named, random_ties, site_of

SOCIAL = [each for each in all_measures().values() if each.side == "social"]
every_measure = pytest.mark.parametrize("measure", SOCIAL, ids=lambda measure: measure.name)
PERSON_SCALE = {
    "in_degree", "out_degree", "either_degree", "mutual_degree", "reciprocity", "betweenness",
    "constraint", "effective_size", *ROLES, "rich_club_member", "ties_to_best_connected",
}  # fmt: skip
SITE_SCALE = {"site_density", "site_reciprocity", "rich_club_p", "rich_club_from_degree"}
CLASSES = ("deck", "engine", "shore", None)


def sites() -> list[SiteAtHand]:
    """Sites of every rule, with people who did not answer, lack a class, or stand alone."""
    named = random_named(1)
    named[:, 0] = named[0] = False
    answered = np.random.default_rng(2).random(16) < 0.8
    named[~answered] = False
    roles = tuple(CLASSES[place % 4] for place in range(16))
    return [
        *(
            site_of(named, rule=rule, roles=roles, answered=answered)
            for rule in ("directed", "either", "both")
        ),
        site_of(planted_club(3), rule="either", roles=tuple(CLASSES[place % 3] for place in range(32))),
        site_of(~np.eye(4, dtype=bool)),
        site_of(np.array([[False, True], [True, False]]), rule="both", roles=("deck", "shore")),
        site_of(np.zeros((3, 3)), answered=np.zeros(3, dtype=bool)),
        site_of(np.zeros((1, 1))),
    ]


SITES = sites()


def value_of(measure: Measure, site: SiteAtHand) -> np.ndarray:
    return np.asarray(measure.function(site), dtype=np.float64)


def silent(site: SiteAtHand) -> np.ndarray:
    return ~site.network.answered


def nobody_can_tell_contacts(site: SiteAtHand) -> np.ndarray:
    """A tie that takes both cannot be known of somebody who did not answer."""
    return silent(site) & (site.network.rule == "both")


def nobody_can_tell_paths(site: SiteAtHand) -> np.ndarray:
    """Nor can a way onward from such a person, unless one report makes a tie both ways."""
    return silent(site) & (site.network.rule != "either")


def no_contact(site: SiteAtHand) -> np.ndarray:
    return ~(site.ties + site.ties.T).any(axis=1) | nobody_can_tell_contacts(site)


def no_class(site: SiteAtHand) -> np.ndarray:
    return np.array([role is None for role in site.network.roles]) | nobody_can_tell_paths(site)


def nobody_to_return(site: SiteAtHand) -> np.ndarray:
    return ~(site.network.named & site.network.answered).any(axis=1)


def no_draw_differs(site: SiteAtHand, role: str) -> np.ndarray:
    counts = site.drawn_role_counts[ROLES.index(role)]
    return no_class(site) | (counts == counts[0]).all(axis=0)


def same_best_contacts(site: SiteAtHand) -> np.ndarray:
    """Nobody's contacts can be others, or all of one's possible contacts count the same."""
    degrees = site.contacts.sum(axis=1)
    best = degrees >= np.sort(degrees)[::-1][int(np.ceil(len(degrees) / 4)) - 1]
    counts = np.concatenate([block[:, :, best].sum(axis=2) for block in site.drawn_contacts.networks()])
    return (counts == counts[0]).all(axis=0) | nobody_can_tell_contacts(site)


def no_club(site: SiteAtHand) -> bool:
    return not site.club.p <= 0.05


def no_member_known(site: SiteAtHand) -> np.ndarray:
    return nobody_can_tell_contacts(site) | no_club(site)


UNDEFINED: dict[str, Callable[[SiteAtHand], np.ndarray | bool]] = {
    "out_degree": silent,
    "mutual_degree": silent,
    "betweenness": nobody_can_tell_paths,
    "constraint": no_contact,
    "effective_size": no_contact,
    "reciprocity": nobody_to_return,
    "rich_club_member": no_member_known,
    "rich_club_from_degree": no_club,
    "ties_to_best_connected": same_best_contacts,
    **dict.fromkeys(ROLES, no_class),
    **{f"{role}_against_chance": lambda site, role=role: no_draw_differs(site, role) for role in ROLES},
    "site_density": lambda site: not site.network.answered.any() or len(site.network.people) < 2,
    "site_reciprocity": lambda site: bool(nobody_to_return(site).all()),
    "rich_club_p": lambda site: bool(np.isnan(site.club.deviation).all()),
    "rich_club_ties_moved": lambda site: not site.ties.any(),
}
"""Where a measure may be, and must be, undefined; all others never are."""


def test_the_first_set_is_there() -> None:
    assert {each.name for each in SOCIAL if each.scale == "person"} >= PERSON_SCALE
    assert {each.name for each in SOCIAL if each.scale == "site"} >= SITE_SCALE


@every_measure
def test_passport_is_complete(measure: Measure) -> None:
    for text in (
        measure.label, measure.unit, measure.reading, measure.undefined, measure.source, measure.says
    ):  # fmt: skip
        assert text.strip()
    assert measure.low < measure.high


@every_measure
def test_shape_and_range(measure: Measure) -> None:
    for site in SITES:
        values = value_of(measure, site)
        assert values.shape == ((len(site.network.people),) if measure.scale == "person" else ())
        defined = values[~np.isnan(values)]
        assert (defined >= measure.low).all()
        assert (defined <= measure.high).all()
        assert np.isfinite(defined).all()


@every_measure
def test_undefined_exactly_where_the_passport_says(measure: Measure) -> None:
    for site in SITES:
        expected = UNDEFINED.get(measure.name, lambda _: False)(site)
        missing = np.isnan(value_of(measure, site))
        assert np.array_equal(missing, np.broadcast_to(expected, missing.shape))


@every_measure
def test_order_of_the_roster_does_not_matter(measure: Measure) -> None:
    for site in SITES[:5]:
        network = site.network
        order = np.random.default_rng(9).permutation(len(network.people))
        shuffled = site_of(
            network.named[np.ix_(order, order)],
            rule=network.rule,
            roles=tuple(network.roles[place] for place in order),
            answered=network.answered[order],
            people=tuple(network.people[place] for place in order),
        )
        values, again = value_of(measure, site), value_of(measure, shuffled)
        np.testing.assert_allclose(
            again, values[order] if measure.scale == "person" else values, rtol=1e-12, atol=1e-12
        )


@every_measure
def test_same_seed_same_value(measure: Measure) -> None:
    for site in SITES[:2]:
        afresh = SiteAtHand(site.network, site.seed)
        assert value_of(measure, afresh).tobytes() == value_of(measure, site).tobytes()


def test_names_of_classes_do_not_matter() -> None:
    site = SITES[1]
    renamed = tuple(None if role is None else {"deck": "z", "engine": "a", "shore": "k"}[role]
                    for role in site.network.roles)  # fmt: skip
    other = site_of(site.network.named, rule="either", roles=renamed, answered=site.network.answered)
    for role in ROLES:
        measure = all_measures()[role]
        np.testing.assert_array_equal(value_of(measure, other), value_of(measure, site))


def test_only_being_named_is_known_without_own_answers() -> None:
    free = {each.name for each in SOCIAL if each.scale == "person" and "own answers" not in each.needs}
    assert free == {"in_degree"}
    assert all({"roles", "own answers"} <= all_measures()[role].needs for role in ROLES)
    assert "club" in all_measures()["rich_club_member"].needs


def test_silence_is_never_a_position_of_nobody() -> None:
    """Person 4 did not answer and is named by 0, 1 and 3: what only that person could say is unknown."""
    named = np.zeros((5, 5), dtype=bool)
    for chooser, chosen in enumerate([(1, 2, 4), (0, 4), (0, 1), (0, 4), ()]):
        named[chooser, chosen] = True
    answered = np.arange(5) != 4
    known = {}
    for rule in ("directed", "either", "both"):
        site = site_of(named, rule=rule, answered=answered, roles=tuple("xxyyx"))
        known[rule] = {
            each.name for each in SOCIAL if each.scale == "person" and not np.isnan(value_of(each, site)[4])
        }
    assert known["both"] == {"in_degree", "either_degree"}
    assert known["directed"] - known["both"] == {"constraint", "effective_size"}
    assert known["either"] - known["directed"] == {"betweenness", *ROLES}


def test_in_degree_does_not_depend_on_own_answers() -> None:
    """Silencing a person leaves that person's own value as it was."""
    named = random_named(4)
    silent = named.copy()
    silent[3] = False
    answered = np.arange(16) != 3
    measure = all_measures()["in_degree"]
    assert value_of(measure, site_of(silent, answered=answered))[3] == value_of(measure, site_of(named))[3]


def test_sites_do_not_share_draws() -> None:
    ties = random_ties(5)
    one = site_of(ties, rule="either", seed=1).drawn_contacts.mutual
    assert not np.array_equal(one, site_of(ties, rule="either", seed=2).drawn_contacts.mutual)
