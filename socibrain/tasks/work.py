"""Many independent tasks, here, on several workers."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from functools import cache
from typing import TypeVar

from joblib import Parallel, delayed
from threadpoolctl import ThreadpoolController

Item = TypeVar("Item")
Result = TypeVar("Result")


def run_tasks(
    function: Callable[[Item], Result],
    items: Sequence[Item],
    *,
    workers: int,
    done: Callable[[int], None],
) -> list[Result]:
    """``function`` of every item, in the order of the items.

    ``function`` and items must be importable and picklable.  Results do not depend on the number
    of workers as long as each task draws from a stream of its own.  ``done`` is told how many
    tasks have finished.
    """
    calls: Iterable[Result]
    if workers == 1 or len(items) < 2:
        calls = (_alone(function, item) for item in items)
    else:
        pool = Parallel(n_jobs=workers, return_as="generator", batch_size="auto")
        calls = pool(delayed(_alone)(function, item) for item in items)
    results = []
    for result in calls:
        results.append(result)
        done(len(results))
    return results


def _alone(function: Callable[[Item], Result], item: Item) -> Result:
    """One task on one thread: the workers are the parallelism."""
    with _threads().limit(limits=1):
        return function(item)


@cache
def _threads() -> ThreadpoolController:
    """The libraries that start threads, looked for once: looking takes longer than a small task."""
    return ThreadpoolController()
