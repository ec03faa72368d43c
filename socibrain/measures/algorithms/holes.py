"""Structural holes: how far a person's contacts already reach each other (Burt 1992)."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

Array = NDArray[np.float64]
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
    both_ways = _both_ways(ties)
    shares, contact = _shares(both_ways), _support(both_ways)
    invested = shares + (shares @ shares).multiply(contact)
    return _unless_alone(both_ways, invested.power(2).sum(axis=1))


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
    both_ways = _both_ways(ties)
    shares, contact = _shares(both_ways), _support(both_ways)
    relative = _scaled(both_ways, _strongest(both_ways))
    redundancy: Array = (shares @ relative.T).multiply(contact).sum(axis=1)
    return _unless_alone(both_ways, np.diff(both_ways.indptr) - redundancy)


def _both_ways(ties: Ties) -> Ties:
    """a_ij + a_ji, without stored zeros, so that what is stored are the contacts."""
    both_ways: Ties = (ties + ties.T).tocsr()
    both_ways.eliminate_zeros()
    return both_ways


def _scaled(ties: Ties, divisor: Array) -> Ties:
    """Each row divided by its own number."""
    data = ties.data / np.repeat(divisor, np.diff(ties.indptr))
    return sparse.csr_array((data, ties.indices, ties.indptr), shape=ties.shape)


def _shares(both_ways: Ties) -> Ties:
    """Share of a person's ties that goes to each contact; rows sum to 1."""
    return _scaled(both_ways, np.asarray(both_ways.sum(axis=1), dtype=np.float64))


def _support(both_ways: Ties) -> Ties:
    """1 for each contact."""
    ones = np.ones_like(both_ways.data)
    return sparse.csr_array((ones, both_ways.indices, both_ways.indptr), shape=both_ways.shape)


def _strongest(both_ways: Ties) -> Array:
    """Strongest tie of each person; 0 without contacts."""
    strongest = np.zeros(len(both_ways.indptr) - 1)
    some = np.flatnonzero(np.diff(both_ways.indptr))
    if len(some):
        strongest[some] = np.maximum.reduceat(both_ways.data, both_ways.indptr[some])
    return strongest


def _unless_alone(both_ways: Ties, values: Array) -> Array:
    """NaN where a person has no contact."""
    return np.where(np.diff(both_ways.indptr) > 0, values, np.nan)
