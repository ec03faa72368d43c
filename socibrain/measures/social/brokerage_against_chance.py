"""How much more often a person brokers than chance would have it, by the classes of the three."""

from __future__ import annotations

from functools import partial

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.algorithms.brokerage import ROLES
from socibrain.measures.algorithms.chance import deviation_from_chance
from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand

Array = NDArray[np.float64]
SOURCE = "Gould & Fernandez (1989), Sociological Methodology 19"
UNDEFINED = (
    "where all random networks give the same count, for people whose class is missing, and who did not answer"
)


role = partial(
    measure,
    side="social",
    scale="person",
    unit="SDs of the random networks",
    low=-np.inf,
    high=np.inf,
    undefined=UNDEFINED,
    source=SOURCE,
    needs=("own answers", "roles"),
)
"""What the passports of all roles share."""


@role(
    label="Coordinator, against chance",
    reading="higher = brokers between two people of one's own class more than by one's number of ties alone",
)
def coordinator_against_chance(site: SiteAtHand) -> Array:
    """Excess of paths that lead between two people of one's own class over random networks.

    Shape (n_people,).  (count − mean) / SD over random networks that keep everyone's mutual ties, ties
    sent and ties received as many as after the tie rule, hence the dyad census too.

    A ring of four can be drawn in three ways; in one of them, as in the given one, person 0 stands
    in this role, else not: (1 − 1/3) / √(2/9), up to the draws.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> ring = bare_site([[1, 2], [3], [3], []], rule="either", roles="xxxy")
    >>> bool(abs(coordinator_against_chance(ring)[0] - 2**0.5) < 0.1)
    True
    """
    return _against_chance(site, "coordinator")


@role(
    label="Itinerant broker, against chance",
    reading="higher = brokers between two people of one other class more than by one's number of ties alone",
)
def itinerant_against_chance(site: SiteAtHand) -> Array:
    """Excess of paths that lead between two people of one other class over random networks.

    Shape (n_people,).  (count − mean) / SD over random networks that keep everyone's mutual ties, ties
    sent and ties received as many as after the tie rule, hence the dyad census too.

    A ring of four can be drawn in three ways; in one of them, as in the given one, person 0 stands
    in this role, else not: (1 − 1/3) / √(2/9), up to the draws.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> ring = bare_site([[1, 2], [3], [3], []], rule="either", roles="xyyx")
    >>> bool(abs(itinerant_against_chance(ring)[0] - 2**0.5) < 0.1)
    True
    """
    return _against_chance(site, "itinerant")


@role(
    label="Gatekeeper, against chance",
    reading="higher = brokers from another class into one's own more than by one's number of ties alone; "
    "where ties have no direction the same as representative_against_chance",
)
def gatekeeper_against_chance(site: SiteAtHand) -> Array:
    """Excess of paths that lead from another class into one's own over random networks.

    Shape (n_people,).  (count − mean) / SD over random networks that keep everyone's mutual ties, ties
    sent and ties received as many as after the tie rule, hence the dyad census too.

    A ring of four can be drawn in three ways; in two of them, as in the given one, person 0 stands
    in this role, else not: (1 − 2/3) / √(2/9), up to the draws.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> ring = bare_site([[1, 2], [3], [3], []], rule="either", roles="xxyx")
    >>> bool(abs(gatekeeper_against_chance(ring)[0] - 0.5**0.5) < 0.1)
    True
    """
    return _against_chance(site, "gatekeeper")


@role(
    label="Representative, against chance",
    reading="higher = brokers from one's own class to another more than by one's number of ties alone; "
    "where ties have no direction the same as gatekeeper_against_chance",
)
def representative_against_chance(site: SiteAtHand) -> Array:
    """Excess of paths that lead from one's own class to another over random networks.

    Shape (n_people,).  (count − mean) / SD over random networks that keep everyone's mutual ties, ties
    sent and ties received as many as after the tie rule, hence the dyad census too.

    A ring of four can be drawn in three ways; in two of them, as in the given one, person 0 stands
    in this role, else not: (1 − 2/3) / √(2/9), up to the draws.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> ring = bare_site([[1, 2], [3], [3], []], rule="either", roles="xxyx")
    >>> bool(abs(representative_against_chance(ring)[0] - 0.5**0.5) < 0.1)
    True
    """
    return _against_chance(site, "representative")


@role(
    label="Liaison, against chance",
    reading="higher = brokers between two other classes more than by one's number of ties alone",
)
def liaison_against_chance(site: SiteAtHand) -> Array:
    """Excess of paths that lead between two other classes over random networks.

    Shape (n_people,).  (count − mean) / SD over random networks that keep everyone's mutual ties, ties
    sent and ties received as many as after the tie rule, hence the dyad census too.

    A ring of four can be drawn in three ways; in one of them, as in the given one, person 0 stands
    in this role, else not: (1 − 1/3) / √(2/9), up to the draws.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> ring = bare_site([[1, 2], [3], [3], []], rule="either", roles="xyzx")
    >>> bool(abs(liaison_against_chance(ring)[0] - 2**0.5) < 0.1)
    True
    """
    return _against_chance(site, "liaison")


def _against_chance(site: SiteAtHand, role: str) -> Array:
    place = ROLES.index(role)
    excess = deviation_from_chance(site.role_counts[place], site.drawn_role_counts[place])
    return np.where(site.onward_known, excess, np.nan)
