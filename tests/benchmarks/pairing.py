"""Times two ways of doing the same thing, in turns, in one process.

A benchmark is a file ``tests/benchmarks/bench_<subject>.py`` with one function::

    def run() -> list[Result]:
        return [compare("what is done, at which size", ours, bare, against="what bare is", goal=1.3)]

``python -m tests.benchmarks`` runs them all, writes bench.json at the top of the repository;
``python -m tests.benchmarks subject …`` runs some, only prints.  A machine's absolute speed drifts,
so what counts is the ratio of ours to a bare call of a general library.  Goals are never asserted
in tests.
"""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable
from dataclasses import dataclass


@dataclass(frozen=True)
class Result:
    """One comparison: ``ratio`` is our time over the baseline's, ``seconds`` our median time."""

    name: str
    ratio: float
    baseline: str
    goal: float
    seconds: float

    @property
    def met(self) -> bool:
        """Whether the ratio is within the goal.

        >>> Result("sum", 1.2, "built-in sum", 1.3, 0.5).met
        True
        """
        return self.ratio <= self.goal


def compare(
    name: str,
    ours: Callable[[], object],
    bare: Callable[[], object],
    *,
    against: str,
    goal: float,
    rounds: int = 9,
) -> Result:
    """The median ratio over ``rounds`` rounds; who goes first changes from round to round.

    Both are called once before the clock starts, so that caches and imports are warm for both.
    """
    ours()
    bare()
    times = [_round(ours, bare) if number % 2 else _round(bare, ours)[::-1] for number in range(rounds)]
    ratio = statistics.median(mine / theirs for mine, theirs in times)
    return Result(name, ratio, against, goal, statistics.median(mine for mine, _ in times))


def _round(first: Callable[[], object], second: Callable[[], object]) -> tuple[float, float]:
    return _seconds(first), _seconds(second)


def _seconds(work: Callable[[], object]) -> float:
    start = time.perf_counter()
    work()
    return time.perf_counter() - start
