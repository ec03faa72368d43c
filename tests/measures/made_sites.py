"""Small sites made for tests."""

from __future__ import annotations

import numpy as np

from socibrain.measures.social.at_hand import SiteAtHand
from socibrain.networks.social import SocialNetwork
from socibrain.sources.study import TieRule


def site_of(
    named: np.ndarray,
    *,
    rule: TieRule = "directed",
    roles: tuple[str | None, ...] = (),
    answered: np.ndarray | None = None,
    people: tuple[str, ...] = (),
    seed: int = 1,
) -> SiteAtHand:
    """The site in which these people named each other; everyone answered unless said."""
    n = len(named)
    ids = people or tuple(f"p{place:03d}" for place in range(n))
    who = np.ones(n, dtype=bool) if answered is None else answered
    return SiteAtHand(
        SocialNetwork("harbour", "advice", ids, named.astype(bool), who, roles or (None,) * n, rule), seed
    )


def random_named(seed: int, *, people: int = 16, chance: float = 0.2) -> np.ndarray:
    """Who named whom when everyone names everyone with the same chance."""
    named = np.random.default_rng(seed).random((people, people)) < chance
    np.fill_diagonal(named, False)
    return named


def random_ties(seed: int, *, people: int = 16, chance: float = 0.25) -> np.ndarray:
    """The same without direction."""
    upper = np.triu(random_named(seed, people=people, chance=chance))
    return upper | upper.T


def planted_club(seed: int, *, people: int = 32, club: int = 9) -> np.ndarray:
    """Ties of a site whose first ``club`` people all know each other; all other ties are by chance.

    The chance is small enough that club members' many ties would not by themselves join them all.
    """
    rng = np.random.default_rng(seed)
    ties = np.triu(rng.random((people, people)) < 0.12, 1)
    ties[:club, :club] = np.triu(np.ones((club, club), dtype=bool), 1)
    return ties | ties.T
