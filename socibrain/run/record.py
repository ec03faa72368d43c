"""What a run was made from: version, options, seeds, digests, timings."""

from __future__ import annotations

import platform
import time
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from datetime import UTC, datetime
from importlib.metadata import version as installed
from pathlib import Path

from socibrain.tasks.finished import file_digest

VERSION = installed("socibrain")
COMPUTES_WITH = ("numpy", "scipy", "pandas", "igraph", "statsmodels", "networkx", "matplotlib")


@dataclass
class Clock:
    """Seconds spent in each stage."""

    started: str = field(default_factory=lambda: datetime.now(UTC).isoformat(timespec="seconds"))
    seconds: dict[str, float] = field(default_factory=dict)

    @contextmanager
    def stage(self, name: str) -> Iterator[None]:
        """Time one stage."""
        start = time.perf_counter()
        yield
        self.seconds[name] = round(time.perf_counter() - start, 3)


def packages() -> dict[str, str]:
    """Versions of what computes."""
    return {"python": platform.python_version()} | {name: installed(name) for name in COMPUTES_WITH}


def digests(folder: Path, files: list[str]) -> dict[str, str]:
    """SHA-256 of each file, by its path as the study writes it."""
    return {name: file_digest(folder / name) for name in files if (folder / name).is_file()}
