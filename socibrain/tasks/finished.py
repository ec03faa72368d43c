"""Finished work, kept by what went into it, so that a second run need not do it again."""

from __future__ import annotations

import hashlib
import json
import os
import zipfile
from collections.abc import Callable, Collection
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from socibrain.errors import DataRefused, Fault

Arrays = dict[str, NDArray[np.generic]]


def digest(*parts: object) -> str:
    """A name that belongs to these parts alone (they must be JSON-like).

    >>> digest("a", 1) == digest("a", 1), digest("a", 1) == digest("a", "1")
    (True, False)
    """
    text = json.dumps(parts, sort_keys=True, default=str)
    return hashlib.blake2b(text.encode(), digest_size=20).hexdigest()


def file_digest(path: Path) -> str:
    """SHA-256 of a file's bytes."""
    with path.open("rb") as file:
        return hashlib.file_digest(file, "sha256").hexdigest()


@dataclass(frozen=True)
class Finished:
    """A folder of finished tasks; each entry is written whole or not at all."""

    folder: Path

    def once(self, key: str, wanted: Collection[str], make: Callable[[], Arrays]) -> Arrays:
        """Arrays of these names: recalled when they are finished, else made and kept."""
        arrays = self.recall(key)
        if arrays is None or set(arrays) != set(wanted):
            arrays = make()
            self.keep(key, arrays)
        return arrays

    def recall(self, key: str) -> Arrays | None:
        """Arrays of the finished task, or None when there is no sound entry."""
        path = self.folder / f"{key}.npz"
        try:
            with path.open("rb") as file, np.load(file, allow_pickle=False) as entry:
                return {name: entry[name] for name in entry.files}
        except (OSError, ValueError, zipfile.BadZipFile, KeyError, EOFError):
            return None

    def keep(self, key: str, arrays: Arrays) -> None:
        """Keep the arrays of a finished task; raises `DataRefused` when they cannot be written."""
        half = self.folder / f"{key}.{os.getpid()}.half"
        try:
            self.folder.mkdir(parents=True, exist_ok=True)
            with half.open("wb") as file:
                np.savez(file, allow_pickle=False, **arrays)
            half.replace(self.folder / f"{key}.npz")
        except OSError as error:
            if half.exists():
                half.unlink()
            raise DataRefused(
                Fault(
                    str(self.folder), "", "unwritable", f"finished work cannot be kept ({error.strerror})",
                    "free space or choose another folder with --out",
                )
            ) from None  # fmt: skip
