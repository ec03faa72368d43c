"""How many people a person is tied to, counted four ways from nominations as given."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand

Array = NDArray[np.float64]
SOURCE = "Freeman (1979), Social Networks 1"


@measure(
    label="Named by others (in-degree)",
    side="social",
    scale="person",
    unit="people",
    low=0,
    high=np.inf,
    reading="higher = named by more people",
    undefined="never; people who did not answer could not name anyone, so counts are low where many did not",
    source=SOURCE,
)
def in_degree(site: SiteAtHand) -> Array:
    """How many people named this person, before any tie rule.

    Shape (n_people,).  Known also for people who did not answer themselves.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> in_degree(bare_site([[1, 2], [0], []])).tolist()
    [1.0, 1.0, 1.0]
    """
    return np.asarray(site.network.named.sum(axis=0), dtype=np.float64)


@measure(
    label="Names given (out-degree)",
    side="social",
    scale="person",
    unit="people",
    low=0,
    high=np.inf,
    reading="higher = named more people",
    undefined="for people who did not answer: whom they would have named is unknown, not nobody",
    source=SOURCE,
    needs=("own answers",),
)
def out_degree(site: SiteAtHand) -> Array:
    """How many people this person named, (n_people,), before any tie rule.

    Shape (n_people,).

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> out_degree(bare_site([[1, 2], [0], []])).tolist()
    [2.0, 1.0, 0.0]
    """
    return np.where(site.network.answered, site.network.named.sum(axis=1), np.nan)


@measure(
    label="Contacts in either direction",
    side="social",
    scale="person",
    unit="people",
    low=0,
    high=np.inf,
    reading="higher = more distinct people who named or were named",
    undefined="for people who did not answer: whom they would have named is unknown, not nobody",
    source=SOURCE,
    needs=("own answers",),
)
def either_degree(site: SiteAtHand) -> Array:
    """How many distinct people this person named or was named by, before any tie rule.

    Shape (n_people,).

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> either_degree(bare_site([[1, 2], [0], []])).tolist()
    [2.0, 1.0, 1.0]
    """
    return np.asarray((site.network.named | site.network.named.T).sum(axis=1), dtype=np.float64)


@measure(
    label="Mutual contacts",
    side="social",
    scale="person",
    unit="people",
    low=0,
    high=np.inf,
    reading="higher = more people who named and were named",
    undefined="for people who did not answer; contacts who did not answer cannot count",
    source=SOURCE,
    needs=("own answers",),
)
def mutual_degree(site: SiteAtHand) -> Array:
    """How many people this person named and was named by, before any tie rule.

    Shape (n_people,).

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> mutual_degree(bare_site([[1, 2], [0], []])).tolist()
    [1.0, 1.0, 0.0]
    """
    mutual = (site.network.named & site.network.named.T).sum(axis=1)
    return np.where(site.network.answered, mutual, np.nan)
