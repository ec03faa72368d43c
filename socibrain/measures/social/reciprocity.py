"""Whether those whom people name, name them too."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand
from socibrain.networks.social import SocialNetwork

Array = NDArray[np.float64]
SOURCE = "Wasserman & Faust (1994), Social Network Analysis, chapter 13"


@measure(
    label="Own nominations returned",
    side="social",
    scale="person",
    unit="share",
    low=0,
    high=1,
    reading="higher = more of those whom the person named, named the person too",
    undefined="for people who named nobody who answered: there is nothing that could be returned",
    source=SOURCE,
    needs=("own answers",),
)
def reciprocity(site: SiteAtHand) -> Array:
    """Share of a person's nominations that are returned, before any tie rule.

    Shape (n_people,). Nominations of people who did not answer are left out: whether they would be
    returned is unknown.

    Person 0 named 1 and 2, of whom only 1 named 0; person 2 named nobody:

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> reciprocity(bare_site([[1, 2], [0], []])).tolist()
    [0.5, 1.0, nan]
    """
    given, returned = _answerable(site.network)
    share: Array = np.divide(returned, given, out=np.full(site.people, np.nan), where=given > 0)
    return share


@measure(
    label="Nominations returned in the site",
    side="social",
    scale="site",
    unit="share",
    low=0,
    high=1,
    reading="higher = more nominations go both ways",
    undefined="for sites where nobody who answered named anybody else who did",
    source=SOURCE,
)
def site_reciprocity(site: SiteAtHand) -> float:
    """Share of nominations among those who answered that are returned, before any tie rule.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> round(site_reciprocity(bare_site([[1, 2], [0], []])), 3)
    0.667
    """
    given, returned = _answerable(site.network)
    return float(returned.sum() / given.sum()) if given.any() else np.nan


def _answerable(network: SocialNetwork) -> tuple[Array, Array]:
    """Nominations of people who answered, and how many of them are returned, by chooser."""
    given = network.named & network.answered
    return given.sum(axis=1).astype(np.float64), (given & network.named.T).sum(axis=1).astype(np.float64)
