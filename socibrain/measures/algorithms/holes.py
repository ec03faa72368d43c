"""Structural holes: how far a person's contacts already reach each other (Burt 1992)."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

Array = NDArray[np.float64]
Codes = NDArray[np.int64]
Ties = sparse.csr_array[np.float64]


def constraint(ties: Ties) -> Array:
    """How much of a person's network leads back to the same contacts, shape (n,), no unit.

    ``ties`` is (n, n), non-negative, with a zero diagonal.  With the shares
    p_ij = (a_ij + a_ji) / Σ_k (a_ik + a_ki), constraint is c_i = Σ_j (p_ij + Σ_q p_iq p_qj)²:
    j runs over i's contacts (a tie in either direction), q over everyone.  Direction of ties
    does not matter, only their sum.  Higher means fewer structural holes.  Above 0; 1 with a
    single contact; above 1 is possible with few contacts tied to each other (9/8 in a triangle).
    NaN without contacts: nobody constrains an isolate.
    Burt (1992), Structural Holes, chapter 2.

    A chain of three: the middle person's contacts do not know each other, 2 · (1/2)²; each end
    has one contact.  The fourth person has none.

    >>> chain = np.zeros((4, 4))
    >>> chain[0, 1] = chain[1, 2] = 1.0
    >>> constraint(sparse.csr_array(chain)).tolist()
    [1.0, 0.5, 1.0, nan]
    """
    net = _contacts(ties)
    outward, inward = net.shares
    one, two, long = net.triangles
    through = np.concatenate((one, two, long))
    indirect_outward = np.concatenate(
        (outward[long] * inward[two], inward[one] * outward[long], outward[one] * outward[two])
    )
    indirect_inward = np.concatenate(
        (outward[two] * inward[long], inward[long] * outward[one], inward[two] * inward[one])
    )
    outward = outward + np.bincount(through, indirect_outward, minlength=len(outward))
    inward = inward + np.bincount(through, indirect_inward, minlength=len(inward))
    return net.sum_by_person(outward**2, inward**2)


def effective_size(ties: Ties) -> Array:
    """Non-redundant contacts of each person, shape (n,), in people.

    ``ties`` as in `constraint`.  Σ_j [1 − Σ_q p_iq m_jq] with j over i's contacts, q over everyone,
    p_iq as in `constraint`, and m_jq = (a_jq + a_qj) / max_k (a_jk + a_kj): q's tie with j relative
    to the strongest tie of j with *anyone*.  (Libraries differ on that maximum.)  For binary
    mutual ties this is k − 2t/k, k contacts sharing t ties among themselves.  From 1 to the number
    of contacts; higher means more structural holes.  NaN without contacts.
    Burt (1992), chapter 2; Borgatti (1997), Connections 20(1).

    A triangle with a fourth person hanging on the first: 3 contacts, 1 tie among them, 3 − 2/3.

    >>> ties = np.zeros((4, 4))
    >>> ties[0, 1] = ties[0, 2] = ties[1, 2] = ties[0, 3] = 1.0
    >>> effective_size(sparse.csr_array(ties)).round(3).tolist()
    [2.333, 1.0, 1.0, 1.0]
    """
    net = _contacts(ties)
    outward, inward = net.shares
    strongest = np.zeros(net.people)
    np.maximum.at(strongest, net.lower, net.weight)
    np.maximum.at(strongest, net.upper, net.weight)
    from_lower, from_upper = net.weight / strongest[net.lower], net.weight / strongest[net.upper]
    one, two, long = net.triangles
    redundancy = np.bincount(
        np.concatenate((net.lower[one], net.upper[one], net.upper[two])),
        np.concatenate(
            (
                outward[one] * from_upper[two] + outward[long] * from_lower[two],
                inward[one] * from_upper[long] + outward[two] * from_lower[long],
                inward[long] * from_upper[one] + inward[two] * from_lower[one],
            )
        ),
        minlength=net.people,
    )
    each = np.ones(len(net.weight))
    return net.sum_by_person(each, each) - redundancy


@dataclass(frozen=True)
class _Contacts:
    """Pairs with a tie in either direction, each once, sorted: ``lower`` < ``upper`` are row numbers.

    ``weight`` is a_ij + a_ji.
    """

    people: int
    lower: Codes
    upper: Codes
    weight: Array

    @cached_property
    def shares(self) -> tuple[Array, Array]:
        """p of lower in upper, p of upper in lower, per pair."""
        total = np.bincount(self.lower, self.weight, minlength=self.people)
        total += np.bincount(self.upper, self.weight, minlength=self.people)
        return self.weight / total[self.lower], self.weight / total[self.upper]

    @cached_property
    def triangles(self) -> tuple[Codes, Codes, Codes]:
        """The pairs (i, q), (q, j), (i, j) of every triangle i < q < j, as places in ``weight``.

        P² counts only where there is a contact, so only through triangles.
        """
        onward = np.bincount(self.lower, minlength=self.people)
        first = np.cumsum(onward) - onward
        branches = onward[self.upper]
        one = np.repeat(np.arange(len(self.upper)), branches)
        branch = np.arange(len(one)) - np.repeat(np.cumsum(branches) - branches, branches)
        two = first[self.upper[one]] + branch
        names = self.lower * self.people + self.upper
        wanted = self.lower[one] * self.people + self.upper[two]
        long = np.minimum(np.searchsorted(names, wanted), max(0, len(names) - 1))
        closed = names[long] == wanted
        return one[closed], two[closed], long[closed]

    def sum_by_person(self, at_lower: Array, at_upper: Array) -> Array:
        """Values of each pair added up at its ends; NaN for people without contacts."""
        total = np.bincount(self.lower, at_lower, minlength=self.people)
        total += np.bincount(self.upper, at_upper, minlength=self.people)
        contacts = np.bincount(np.concatenate((self.lower, self.upper)), minlength=self.people)
        return np.where(contacts > 0, total, np.nan)


def _contacts(ties: Ties) -> _Contacts:
    """Ties in both directions added up; stored zeros are no contacts."""
    both_ways = (ties + ties.T).tocsr()
    both_ways.sort_indices()
    people = both_ways.shape[0]
    rows = np.repeat(np.arange(people), np.diff(both_ways.indptr))
    kept = (rows < both_ways.indices) & (both_ways.data != 0)
    return _Contacts(people, rows[kept], both_ways.indices[kept].astype(np.int64), both_ways.data[kept])
