"""Times the main job on the demo cohort as a user runs it, installation apart."""

from __future__ import annotations

import subprocess
import sys
import tempfile
import time
from pathlib import Path

from tests.benchmarks.pairing import Result

ROOT = Path(__file__).parents[2]
ALLOWED = 60.0
"""Seconds on two cores that the main job may take."""


def run() -> list[Result]:
    """``link`` then ``report`` into a new folder; the baseline is the time allowed, not a program."""
    with tempfile.TemporaryDirectory() as room:
        out = str(Path(room) / "run")
        start = time.perf_counter()
        for words in (["link", "analyses/brokers/plan.yaml", "--out", out], ["report", out]):
            command = [sys.executable, "-m", "socibrain", *words]
            subprocess.run(command, cwd=ROOT, check=True, capture_output=True)
        seconds = time.perf_counter() - start
    return [Result("make demo without installation", seconds / ALLOWED, f"{ALLOWED:g} s", 1.0, seconds)]
