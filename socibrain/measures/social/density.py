"""How many of the nominations that could have been made were made."""

from __future__ import annotations

import numpy as np

from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand


@measure(
    label="Density of nominations",
    side="social",
    scale="site",
    unit="share",
    low=0,
    high=1,
    reading="higher = people who answered named more of those they could name",
    undefined="for sites where nobody answered or with one person only: no nomination was possible",
    source="Wasserman & Faust (1994), Social Network Analysis, chapter 4",
)
def site_density(site: SiteAtHand) -> float:
    """Nominations made over nominations possible to those who answered, before any tie rule.

    Each person who answered could name everyone else on the roster.

    Three people gave three names where six were possible:

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> site_density(bare_site([[1, 2], [0], []]))
    0.5
    """
    possible = int(site.network.answered.sum()) * (site.people - 1)
    return float(site.network.named.sum() / possible) if possible else np.nan
