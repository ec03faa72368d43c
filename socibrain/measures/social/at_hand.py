"""A site's network as measures see it: what several of them share is computed once."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import igraph
import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from socibrain.measures.algorithms.brokerage import UNKNOWN, role_counts
from socibrain.measures.algorithms.rewiring import Rewired, rewire
from socibrain.measures.algorithms.rich_club import RichClub, rich_club
from socibrain.networks.convert import ties_to_igraph
from socibrain.networks.social import SocialNetwork
from socibrain.streams import stream

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
Codes = NDArray[np.int64]

DRAWS = 499
"""Random networks behind every comparison with chance: smallest p 1/500."""
CLUB_LEVEL = 0.05
"""p at or below which a site has a rich club."""
CLUB_FEWEST = 3
"""Fewest members a rich club may have: two people cannot be told from one tie."""


@dataclass(frozen=True)
class SiteAtHand:
    """One site's network with the seed for measures that draw at random."""

    network: SocialNetwork
    seed: int

    @property
    def people(self) -> int:
        """How many people are on the roster."""
        return len(self.network.people)

    @property
    def directed(self) -> bool:
        """Whether ties have a direction under the declared rule."""
        return self.network.rule == "directed"

    @cached_property
    def ties(self) -> Array:
        """Ties after the declared rule, (n_people, n_people)."""
        return self.network.ties

    @cached_property
    def sparse_ties(self) -> sparse.csr_array[np.float64]:
        """The same ties, stored sparsely."""
        return sparse.csr_array(self.ties)

    @cached_property
    def graph(self) -> igraph.Graph:
        """The same ties as a graph; vertex i is person i."""
        return ties_to_igraph(self.ties, directed=self.directed)

    @cached_property
    def contacts(self) -> Mask:
        """Pairs with a tie in either direction after the declared rule, symmetric."""
        return (self.ties + self.ties.T) > 0

    @cached_property
    def contact_degrees(self) -> Codes:
        """Distinct contacts of each person; under a directed rule, in either direction."""
        degrees: Codes = self.contacts.sum(axis=1)
        return degrees

    @cached_property
    def contacts_known(self) -> Mask:
        """Whose contacts are known, if only from others.

        Where a tie takes both, nobody can tell whom a person who did not answer is tied to.
        """
        answered = self.network.answered
        return answered if self.network.rule == "both" else np.ones_like(answered)

    @cached_property
    def onward_known(self) -> Mask:
        """Whose ties towards others are known: where one report makes a tie both ways, from others too."""
        answered = self.network.answered
        return np.ones_like(answered) if self.network.rule == "either" else answered

    @cached_property
    def classes(self) -> Codes:
        """A whole number per class; `UNKNOWN` where a person's class is missing."""
        numbers = {
            name: place for place, name in enumerate(sorted({role for role in self.network.roles if role}))
        }
        return np.array([numbers.get(role or "", UNKNOWN) for role in self.network.roles], dtype=np.int64)

    @cached_property
    def role_counts(self) -> Array:
        """Brokerage role counts, (5, n_people), in the order of `algorithms.brokerage.ROLES`."""
        return role_counts(self.ties[None] > 0, self.classes)[:, 0]

    @cached_property
    def drawn_role_counts(self) -> Array:
        """The same in the drawn networks, (5, draws, n_people)."""
        return np.concatenate(
            [role_counts(block, self.classes) for block in self.drawn_ties.networks()], axis=1
        )

    @cached_property
    def drawn_contacts(self) -> Rewired:
        """Random networks in which everyone has as many contacts as observed."""
        return self._drawn(self.contacts, "contacts")

    @cached_property
    def drawn_ties(self) -> Rewired:
        """Random networks with everyone's mutual, sent and received ties as observed."""
        return self._drawn(self.ties > 0, "ties") if self.directed else self.drawn_contacts

    @cached_property
    def club(self) -> RichClub:
        """The rich-club curve of the contacts with its test."""
        return rich_club(self.contacts, self.drawn_contacts.mutual, level=CLUB_LEVEL, fewest=CLUB_FEWEST)

    def _drawn(self, ties: Mask, what: str) -> Rewired:
        """Draws that depend on who has ties with whom, never on the order of the roster."""
        order = np.argsort(np.array(self.network.people))
        rng = stream(self.seed, "rewiring", self.network.site, self.network.question, what)
        drawn = rewire(ties[np.ix_(order, order)], draws=DRAWS, rng=rng)
        return Rewired(drawn.people, order[drawn.mutual], order[drawn.one_way], drawn.moved, drawn.distinct)


def bare_site(
    named: list[list[int]],
    *,
    rule: Literal["directed", "either", "both"] = "directed",
    roles: str = "",
    seed: int = 0,
) -> SiteAtHand:
    """A site at hand from who-named-whom alone: everyone answered, ids in row order.

    ``named`` lists, for each person, the row numbers of those they named; ``roles`` gives one
    letter per person.

    >>> bare_site([[1], [], [1]]).ties.tolist()
    [[0.0, 1.0, 0.0], [0.0, 0.0, 0.0], [0.0, 1.0, 0.0]]
    """
    people = len(named)
    dense = np.zeros((people, people), dtype=bool)
    for person, chosen in enumerate(named):
        dense[person, chosen] = True
    ids = tuple(f"{person:04d}" for person in range(people))
    classes = tuple(roles) if roles else (None,) * people
    network = SocialNetwork("site", "question", ids, dense, np.ones(people, dtype=bool), classes, rule)
    return SiteAtHand(network, seed)
