"""How far a person's ties lean towards the best-connected."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from socibrain.measures.algorithms.chance import deviation_from_chance
from socibrain.measures.catalogue import measure
from socibrain.measures.social.at_hand import SiteAtHand

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

BEST_CONNECTED = 0.25
"""Share of a site that counts as best-connected: our choice, declared here alone."""


@measure(
    label="Ties to the best-connected, against chance",
    side="social",
    scale="person",
    unit="SDs of the random networks",
    low=-np.inf,
    high=np.inf,
    reading="higher = more of the person's ties go to the best-connected than their numbers would bring",
    undefined="where all random networks give the same count (no contacts, say), and who did not answer",
    source="our own measure, after the idea of the rich club; see rich_club_member",
    needs=("own answers",),
)
def ties_to_best_connected(site: SiteAtHand) -> Array:
    """Standardised excess of contacts among the best-connected, after the tie rule.

    Shape (n_people,). The best-connected are the quarter of the site with most distinct contacts, and
    whoever has as many as the last of them. (count − mean) / SD over random networks in which everyone has
    as many contacts. Defined also where there is no rich club.

    In a chain of three nothing can be drawn differently:

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> ties_to_best_connected(bare_site([[1], [2], []], rule="either")).tolist()
    [nan, nan, nan]
    """
    best = best_connected(site)
    pairs = site.drawn_contacts.mutual
    draws = np.arange(len(pairs))[:, None] * site.people
    counts = sum(
        np.bincount((draws + one)[best[other]], minlength=len(pairs) * site.people)
        for one, other in ((pairs[..., 0], pairs[..., 1]), (pairs[..., 1], pairs[..., 0]))
    )
    drawn = np.asarray(counts, dtype=np.float64).reshape(len(pairs), site.people)
    lean = deviation_from_chance(site.contacts[:, best].sum(axis=1).astype(np.float64), drawn)
    return np.where(site.contacts_known, lean, np.nan)


def best_connected(site: SiteAtHand) -> Mask:
    """True for the quarter of the site with most contacts, ties with the last of them included.

    >>> from socibrain.measures.social.at_hand import bare_site
    >>> best_connected(bare_site([[1, 2, 3], [2], [], []], rule="either")).tolist()
    [True, False, False, False]
    """
    enough = np.sort(site.contact_degrees)[::-1][: int(np.ceil(BEST_CONNECTED * site.people))]
    best: Mask = site.contact_degrees >= enough.min(initial=site.people)
    return best
