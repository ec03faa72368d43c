"""Tasks: same results whatever the number of workers."""

from __future__ import annotations

from socibrain.streams import stream
from socibrain.tasks.work import run_tasks


def draw(number: int) -> float:
    return float(stream(1, "draw", number).random())


def test_results_do_not_depend_on_the_number_of_workers() -> None:
    told: list[int] = []
    alone = run_tasks(draw, range(12), workers=1, done=told.append)
    assert alone == run_tasks(draw, range(12), workers=2, done=lambda _: None)
    assert told == list(range(1, 13))
    assert len(set(alone)) == 12
