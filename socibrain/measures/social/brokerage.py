"""How often a person stands between two others not tied directly, by the classes of the three."""

from __future__ import annotations

from functools import partial

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.algorithms.brokerage import ROLES
from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand

Array = NDArray[np.float64]
SOURCE = "Gould & Fernandez (1989), Sociological Methodology 19"
UNDEFINED = (
    "for people whose class is missing, and who did not answer; paths that touch somebody without a "
    "class are not counted"
)


role = partial(
    measure,
    side="social",
    scale="person",
    unit="open paths (each triad twice where ties have no direction)",
    low=0,
    high=np.inf,
    undefined=UNDEFINED,
    source=SOURCE,
    needs=("own answers", "roles"),
)
"""What the passports of all roles share."""


@role(
    label="Coordinator",
    reading="higher = brokers more often between two people of one's own class",
)
def coordinator(site: SiteAtHand) -> Array:
    """Open paths through a person that lead between two people of one's own class.

    Shape (n_people,).  After the tie rule: paths source → broker → target without a tie source →
    target, where all three are of one class.
    Under a rule without direction each open triad is walked both ways and counts twice.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> coordinator(bare_site([[1], [2], []], roles="xxx")).tolist()
    [0.0, 1.0, 0.0]
    """
    return _count(site, "coordinator")


@role(
    label="Itinerant broker",
    reading="higher = brokers more often between two people of one other class",
)
def itinerant(site: SiteAtHand) -> Array:
    """Open paths through a person that lead between two people of one other class.

    Shape (n_people,).  After the tie rule: paths source → broker → target without a tie source →
    target, where source and target are of one class, the broker of another.
    Under a rule without direction each open triad is walked both ways and counts twice.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> itinerant(bare_site([[1], [2], []], roles="xyx")).tolist()
    [0.0, 1.0, 0.0]
    """
    return _count(site, "itinerant")


@role(
    label="Gatekeeper",
    reading="higher = brokers more often from another class into one's own; where ties have no direction "
    "the same as representative",
)
def gatekeeper(site: SiteAtHand) -> Array:
    """Open paths through a person that lead from another class into one's own.

    Shape (n_people,).  After the tie rule: paths source → broker → target without a tie source →
    target, where broker and target are of one class, the source of another.
    Under a rule without direction each open triad is walked both ways and counts twice.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> gatekeeper(bare_site([[1], [2], []], roles="xyy")).tolist()
    [0.0, 1.0, 0.0]
    """
    return _count(site, "gatekeeper")


@role(
    label="Representative",
    reading="higher = brokers more often from one's own class to another; where ties have no direction "
    "the same as gatekeeper",
)
def representative(site: SiteAtHand) -> Array:
    """Open paths through a person that lead from one's own class to another.

    Shape (n_people,).  After the tie rule: paths source → broker → target without a tie source →
    target, where source and broker are of one class, the target of another.
    Under a rule without direction each open triad is walked both ways and counts twice.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> representative(bare_site([[1], [2], []], roles="xxy")).tolist()
    [0.0, 1.0, 0.0]
    """
    return _count(site, "representative")


@role(
    label="Liaison",
    reading="higher = brokers more often between two other classes",
)
def liaison(site: SiteAtHand) -> Array:
    """Open paths through a person that lead between two other classes.

    Shape (n_people,).  After the tie rule: paths source → broker → target without a tie source →
    target, where all three are of different classes.
    Under a rule without direction each open triad is walked both ways and counts twice.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> liaison(bare_site([[1], [2], []], roles="xyz")).tolist()
    [0.0, 1.0, 0.0]
    """
    return _count(site, "liaison")


def _count(site: SiteAtHand, role: str) -> Array:
    return np.where(site.onward_known, site.role_counts[ROLES.index(role)], np.nan)
