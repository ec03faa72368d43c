"""Whether a site's best-connected form a club, and who belongs to it."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand

Array = NDArray[np.float64]
SOURCE = "Zhou & Mondragón (2004), IEEE Communications Letters 8; Colizza et al. (2006), Nature Physics 2"
NO_CLUB = (
    "in sites without a rich club, that is where the curve is not significant at .05: membership is "
    "then undefined rather than invented"
)


@measure(
    label="Rich-club member",
    side="social",
    scale="person",
    unit="1 = member, 0 = not",
    low=0,
    high=1,
    reading="1 = one of the best-connected who tie more to each other than chance would have it",
    undefined=f"{NO_CLUB}; and for people who did not answer",
    source=SOURCE,
    needs=("own answers", "club"),
)
def rich_club_member(site: SiteAtHand) -> Array:
    """Whether this person belongs to the site's rich club, after the tie rule.

    Shape (n_people,). Degree is the number of distinct contacts; under a directed rule a tie in either
    direction makes a contact. φ(k), the density of ties among people of degree > k, is compared with
    random networks in which everyone has as many contacts, for every k that leaves three people or more.
    If the largest deviation over all k is significant, members are the people above the lower end of
    the run of significant k around it.

    Nobody in a ring is richer than another, so there is no club:

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> rich_club_member(bare_site([[1], [2], [3], [0]], rule="either")).tolist()
    [nan, nan, nan, nan]
    """
    if np.isnan(site.club.from_degree):
        return np.full(site.people, np.nan)
    return np.where(site.contacts_known, site.contact_degrees >= site.club.from_degree, np.nan)


@measure(
    label="Rich-club test",
    side="social",
    scale="site",
    unit="p",
    low=0,
    high=1,
    reading="lower = stronger evidence that the best-connected tie to each other more than chance",
    undefined="for sites where no k can tell networks with the same degrees apart (all equally rich, say)",
    source=f"{SOURCE}; p as in Phipson & Smyth (2010)",
)
def rich_club_p(site: SiteAtHand) -> float:
    """One p for the whole rich-club curve: largest deviation over k against the same in the draws.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> rich_club_p(bare_site([[1], [2], [3], [0]], rule="either"))
    nan
    """
    return site.club.p


@measure(
    label="Contacts that make a rich-club member",
    side="social",
    scale="site",
    unit="people",
    low=1,
    high=np.inf,
    reading="higher = only the better-connected belong to the club",
    undefined=NO_CLUB,
    source=SOURCE,
)
def rich_club_from_degree(site: SiteAtHand) -> float:
    """Smallest number of contacts with which a person belongs to the club.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> rich_club_from_degree(bare_site([[1], [2], [3], [0]], rule="either"))
    nan
    """
    return site.club.from_degree


@measure(
    label="Contacts moved in the random networks",
    side="social",
    scale="site",
    unit="share",
    low=0,
    high=1,
    reading="lower = the random networks behind the rich-club test resemble the observed one",
    undefined="for sites without any tie",
    source="our own account of the null's reach",
)
def rich_club_ties_moved(site: SiteAtHand) -> float:
    """Share of ties that join two people who are not contacts in the observed network.

    A chain of three can only be itself:

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> rich_club_ties_moved(bare_site([[1], [2], []], rule="either"))
    0.0
    """
    return site.drawn_contacts.moved


@measure(
    label="Different random networks drawn",
    side="social",
    scale="site",
    unit="networks",
    low=1,
    high=np.inf,
    reading="low = too few networks have these degrees for the rich-club test to say much",
    undefined="never",
    source="our own account of the null's reach",
)
def rich_club_distinct_draws(site: SiteAtHand) -> float:
    """How many of the random networks behind the rich-club test differ from each other.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> rich_club_distinct_draws(bare_site([[1], [2], []], rule="either"))
    1.0
    """
    return float(site.drawn_contacts.distinct)
