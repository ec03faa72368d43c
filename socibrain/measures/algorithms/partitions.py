"""Partitions of n things into communities, and how alike they are."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Labels = NDArray[np.int64]


def numbered(partitions: Labels) -> Labels:
    """The same partitions (n_partitions, n), communities numbered from 1.

    The largest community is 1; among equals the one whose first member comes first.  Two rows are
    equal after this exactly when they are the same partition.

    >>> numbered(np.array([[7, 7, 3, 3, 3], [0, 0, 1, 1, 2]])).tolist()
    [[2, 2, 1, 1, 1], [1, 1, 2, 2, 3]]
    """
    n_partitions, n = partitions.shape
    names, labels = np.unique(partitions, return_inverse=True)
    labels = labels.reshape(partitions.shape)
    places = labels + len(names) * np.arange(n_partitions)[:, None]
    sizes = np.bincount(places.ravel(), minlength=n_partitions * len(names))
    first = np.full(sizes.shape, n)
    np.minimum.at(first, places.ravel(), np.tile(np.arange(n), n_partitions))
    rank = np.argsort((first - (n + 1) * sizes).reshape(n_partitions, -1), axis=1).argsort(axis=1)
    return np.take_along_axis(rank, labels, axis=1).astype(np.int64) + 1


def members(partition: Labels) -> Array:
    """Who belongs where: (n, n_communities) of 0 and 1, communities in ascending order of label.

    >>> members(np.array([1, 2, 1])).tolist()
    [[1.0, 0.0], [0.0, 1.0], [1.0, 0.0]]
    """
    labels, which = np.unique(partition, return_inverse=True)
    belongs: Array = (which[:, None] == np.arange(len(labels))).astype(np.float64)
    return belongs


def together(partitions: Labels, times: Labels) -> Array:
    """Share of partitions in which two things share a community, (n, n).

    ``partitions`` (n_partitions, n), each counted ``times`` (n_partitions,).

    >>> together(np.array([[1, 1, 2], [1, 2, 2]]), np.array([3, 1]))[1].tolist()
    [0.75, 1.0, 0.25]
    """
    memberships = [members(partition) for partition in partitions]
    counted = np.hstack([count * who for count, who in zip(times, memberships, strict=True)])
    shares: Array = counted @ np.hstack(memberships).T / times.sum()
    return shares


def adjusted_rand(partitions: Labels) -> Array:
    """Adjusted Rand index of every two of ``partitions`` (n_partitions, n): symmetric, 1 on the diagonal.

    Pairs of things that both partitions keep together, corrected for chance: 1 = the same
    partition, 0 = what random partitions of the same community sizes have on average, never below
    −1/2.  Two partitions without any choice (all in one, or each alone) count as 1.
    Hubert & Arabie (1985).

    >>> adjusted_rand(np.array([[1, 1, 2, 2], [1, 2, 1, 2]])).round(6).tolist()
    [[1.0, -0.5], [-0.5, 1.0]]
    """
    memberships = [members(partition) for partition in partitions]
    starts = np.cumsum([0, *(who.shape[1] for who in memberships[:-1])])
    side_by_side = np.hstack(memberships)
    shared = _pairs(side_by_side.T @ side_by_side)
    both = np.add.reduceat(np.add.reduceat(shared, starts, axis=0), starts, axis=1)
    kept = np.diag(both)
    all_pairs = _pairs(np.float64(partitions.shape[1]))
    expected = np.outer(kept, kept) / max(float(all_pairs), 1.0)
    most = (kept[:, None] + kept) / 2
    no_choice = most == expected
    index: Array = (both - expected) / np.where(no_choice, 1.0, most - expected)
    index[no_choice] = 1.0
    np.fill_diagonal(index, 1.0)
    return index


def _pairs(count: Array | np.float64) -> Array:
    pairs: Array = np.asarray(count * (count - 1) / 2)
    return pairs
