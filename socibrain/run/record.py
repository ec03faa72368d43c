"""What a run was made from: version, options, seeds, digests, timings."""

from __future__ import annotations

import os
import platform
import time
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from datetime import UTC, datetime
from importlib.metadata import version as installed
from pathlib import Path

from socibrain.cohort.gather import Gathered, input_files
from socibrain.plan.planfile import Plan
from socibrain.run.folder import RunFolder
from socibrain.sources.decisions import decided_rows
from socibrain.tasks.finished import digest, file_digest

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


def make_record(
    gathered: Gathered, plan: Plan | None, clock: Clock, folder: RunFolder | None
) -> dict[str, object]:
    """The record of a run.

    Paths of study and plan are from the run folder where there is one, so that folder and project
    can be moved together; inputs are named as the study writes them, with their SHA-256.
    """
    study = gathered.study

    def seen_from_run(path: Path) -> str:
        return Path(os.path.relpath(path, folder.path) if folder else path).as_posix()

    record: dict[str, object] = {
        "socibrain": VERSION,
        "packages": {"python": platform.python_version()} | {name: installed(name) for name in COMPUTES_WITH},
        "study": study.says.study,
        "study_title": study.says.title,
        "study_file": seen_from_run(study.document.path),
        "study_digest": file_digest(study.document.path),
        "study_says": study.says.model_dump(mode="json"),
        "inputs": {
            name: file_digest(study.path(name))
            for name in input_files(gathered)
            if study.path(name).is_file()
        },
        "decisions_digest": digest(decided_rows(study)),
        "started": clock.started,
        "seconds": clock.seconds,
    }
    if plan:
        record |= {
            "plan": plan.says.plan,
            "plan_file": seen_from_run(plan.document.path),
            "plan_digest": file_digest(plan.document.path),
            "plan_says": plan.says.model_dump(mode="json"),
        }
    return record
