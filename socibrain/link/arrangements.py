"""The orders into which people can be put within their sites."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from itertools import combinations
from math import factorial, prod

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Codes = NDArray[np.intp]
BLOCK = 500
"""Orders per block: fixed, so that nothing depends on how much memory or how many workers there are."""
ALIKE = 1e-10
"""Rows that differ by less than this share of the largest entry of their column count as alike."""


def shuffled(generator: np.random.Generator, sites: Codes) -> Codes:
    """One block of random orders, (BLOCK, n): position i receives person ``order[i]`` of its site.

    ``sites`` (n,) must not decrease.  Every order within sites is equally likely.  Each person
    draws a number; packing site, number and index into one integer makes one sort enough.
    """
    people = sites.size
    index_bits = max(1, int(people - 1).bit_length())
    site_bits = max(1, int(sites[-1]).bit_length())
    free = 63 - index_bits - site_bits
    packed = generator.integers(0, 1 << free, size=(BLOCK, people), dtype=np.int64)
    packed <<= index_bits
    packed |= (sites.astype(np.int64) << (63 - site_bits)) | np.arange(people)
    packed.sort(axis=1)
    packed &= (1 << index_bits) - 1
    return packed.astype(np.intp, copy=False)


def alike_within(rows: Array, sites: Codes) -> Codes:
    """Class of each row, (n,): two people share a class where site and row are the same.

    >>> alike_within(np.array([[1.0], [1.0], [1.0], [2.0]]), np.array([0, 0, 1, 1])).tolist()
    [0, 0, 1, 2]
    """
    scale = np.abs(rows).max(axis=0)
    rounded = np.round(rows / np.where(scale > 0, scale, 1.0) / ALIKE) + 0.0
    keyed = np.column_stack([sites, rounded])
    return np.unique(keyed, axis=0, return_inverse=True)[1].ravel().astype(np.intp)


def count_distinct(classes: Codes, sites: Codes) -> int:
    """Number of orders within sites that differ in the class at some position.

    >>> count_distinct(np.array([0, 0, 1, 2, 3]), np.array([0, 0, 0, 1, 1]))  # 3!/2! times 2!
    6
    """
    arranged = prod(factorial(int(size)) for size in np.bincount(sites))
    return arranged // prod(factorial(count) for count in Counter(classes.tolist()).values())


def every_distinct(classes: Codes, sites: Codes) -> Iterator[Codes]:
    """All orders that differ in the class at some position, in blocks of at most BLOCK rows.

    Each stands for the same number of plain orders, so shares among them are shares among all.
    The order that moves nobody is among them.

    >>> np.vstack(list(every_distinct(np.array([0, 0, 1]), np.array([0, 0, 0])))).tolist()
    [[2, 0, 1], [0, 2, 1], [0, 1, 2]]
    """
    choices = [_one_site(np.flatnonzero(sites == site), classes) for site in range(int(sites.max()) + 1)]
    sizes = [len(choice) for choice in choices]
    total = prod(sizes)
    for start in range(0, total, BLOCK):
        numbers = np.arange(start, min(start + BLOCK, total))
        places = np.unravel_index(numbers, sizes)
        yield np.concatenate([choice[place] for choice, place in zip(choices, places, strict=True)], axis=1)


def inverted(orders: Codes) -> Codes:
    """The orders that undo each of ``orders``, (B, n)."""
    back = np.empty_like(orders)
    np.put_along_axis(back, orders, np.broadcast_to(np.arange(orders.shape[1]), orders.shape), axis=1)
    return back


def _one_site(members: Codes, classes: Codes) -> Codes:
    """Orders of one site's members, one for each way to hand the places out to the classes."""
    places = np.arange(members.size)
    kinds = [np.flatnonzero(classes[members] == kind) for kind in np.unique(classes[members])]
    kinds.sort(key=len)  # the largest class takes what is left
    orders = []
    for taken in _hand_out(tuple(places), [len(kind) for kind in kinds]):
        order = np.empty_like(places)
        for kind, chosen in zip(kinds, taken, strict=True):
            order[list(chosen)] = kind
        orders.append(members[order])
    return np.array(orders)


def _hand_out(places: tuple[int, ...], counts: list[int]) -> Iterator[list[tuple[int, ...]]]:
    """All ways to give the first class its count of places, the next class its, and so on."""
    if len(counts) == 1:
        yield [places]
        return
    for chosen in combinations(places, counts[0]):
        rest = tuple(place for place in places if place not in chosen)
        for others in _hand_out(rest, counts[1:]):
            yield [chosen, *others]
