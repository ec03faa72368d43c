"""The output folder: every file is written whole or not at all."""

from __future__ import annotations

import json
import shutil
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from errno import EISDIR
from io import BytesIO
from pathlib import Path

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from socibrain.errors import DataRefused, Fault

Contents = Mapping[str, bytes]


@dataclass(frozen=True)
class RunFolder:
    """One run's folder."""

    path: Path

    @property
    def memory(self) -> Path:
        """Where finished work is kept."""
        return self.path / ".finished"

    def open(self) -> None:
        """Make the folder and show that it can be written to, before any work is done."""
        self._guarded(self._try)

    def write(self, contents: Contents) -> None:
        """Write all files under temporary names, then move each to its own.

        When one cannot be written, none is moved.  Raises `DataRefused`.
        """
        self._guarded(lambda: self._write(contents))

    def _try(self) -> None:
        self.path.mkdir(parents=True, exist_ok=True)
        trial = self.path / ".trial"
        trial.write_bytes(b"can be written")
        trial.unlink()

    def _write(self, contents: Contents) -> None:
        self.path.mkdir(parents=True, exist_ok=True)
        half = self.path / ".half"
        half.mkdir(exist_ok=True)
        try:
            for name, content in contents.items():
                (half / name).write_bytes(content)
                if (self.path / name).is_dir():
                    raise IsADirectoryError(EISDIR, f"'{name}' is a folder")
            for name in contents:
                (half / name).replace(self.path / name)
        finally:
            shutil.rmtree(half, ignore_errors=True)

    def _guarded(self, act: Callable[[], None]) -> None:
        try:
            act()
        except OSError as error:
            raise DataRefused(
                Fault(
                    str(self.path), "", "unwritable",
                    f"the output folder cannot be written to ({error.strerror})",
                    "free space or choose another folder with --out",
                )
            ) from None  # fmt: skip


def csv_bytes(table: pd.DataFrame) -> bytes:
    """A table as CSV; missing values are written n/a."""
    return table.to_csv(index=False, na_rep="n/a", lineterminator="\n").encode()


def parquet_bytes(table: pd.DataFrame) -> bytes:
    """A table as Parquet."""
    buffer = BytesIO()
    table.to_parquet(buffer, index=False)
    return buffer.getvalue()


def json_bytes(content: object) -> bytes:
    """JSON text, indented; NaN becomes null."""
    return (json.dumps(_plain(content), indent=2, ensure_ascii=False) + "\n").encode()


def arrays_bytes(arrays: Mapping[str, NDArray[np.float64]]) -> bytes:
    """Named arrays as NPZ."""
    buffer = BytesIO()
    np.savez_compressed(buffer, allow_pickle=False, **arrays)
    return buffer.getvalue()


def _plain(content: object) -> object:
    if isinstance(content, Mapping):
        return {str(key): _plain(value) for key, value in content.items()}
    if isinstance(content, list | tuple):
        return [_plain(value) for value in content]
    if isinstance(content, float | np.floating):
        return None if np.isnan(content) or np.isinf(content) else float(content)
    if isinstance(content, np.integer):
        return int(content)
    if isinstance(content, Path):
        return content.as_posix()
    return content
