"""Random streams addressed by name, never by call order."""

from __future__ import annotations

import hashlib

import numpy as np


def address(seed: int, *parts: object) -> int:
    """A 128-bit whole number that belongs to this seed and address alone.

    >>> address(1, "modules", "sub-01") == address(1, "modules", "sub-01")
    True
    >>> address(1, "modules", "sub-01") == address(1, "modules", "sub-0", "1")
    False
    """
    text = "\x1f".join([str(seed), *(str(part) for part in parts)])
    return int.from_bytes(hashlib.blake2b(text.encode(), digest_size=16).digest(), "big")


def stream(seed: int, *parts: object) -> np.random.Generator:
    """The random generator of one task: same seed and address, same numbers, on any worker.

    >>> bool(stream(7, "shuffle", 3).integers(100) == stream(7, "shuffle", 3).integers(100))
    True
    """
    return np.random.Generator(np.random.PCG64(address(seed, *parts)))


def small_seed(seed: int, *parts: object) -> int:
    """A non-negative 31-bit seed for libraries that take a plain integer.

    >>> 0 <= small_seed(7, "communities", "sub-01", 4) < 2**31
    True
    """
    return address(seed, *parts) & 0x7FFFFFFF
