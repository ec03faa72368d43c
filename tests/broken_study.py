"""Ways to break a made study, and what has to be told of it."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from tests.made_study import SITES, MadeStudy, Told, ids

EVERYONE = [person for site in SITES for person in ids(site)]
STATUS = '  answered: {file: roster.tsv, person: person, column: answered, values: ["yes"]}\n'

Break = Callable[[MadeStudy], object]
Message = tuple[str, str, str]
"""Where, and parts of what was found and of how to mend it."""


def messages(told: Told) -> list[tuple[str, str]]:
    """Every fault that was told: where and what, and how to mend it."""
    lines = told.err.splitlines()
    return [
        (lines[place - 1], line.removeprefix("  to mend: "))
        for place, line in enumerate(lines)
        if line.startswith("  to mend: ")
    ]


def assert_told(told: Told, code: int, *expected: Message) -> None:
    """Exactly these faults are told, each once, and the command ends with this code."""
    assert told.code == code, told.err
    assert "Traceback" not in told.err
    found = messages(told)
    assert len(found) == len(expected), told.err
    for (said, mend), (where, what, remedy) in zip(found, expected, strict=True):
        assert said.startswith(f"{where}  "), said
        assert what in said
        assert remedy in mend


def gone(*files: str) -> Break:
    return lambda study: [(study.folder / file).unlink() for file in files]


def added(file: str, line: str) -> Break:
    return lambda study: study.write(file, study.text(file) + line + "\n")


def cell(file: str, column: str, **values: str) -> Break:
    return lambda study: study.column(file, column, values)


def changed(file: str, old: str, new: str) -> Break:
    return lambda study: study.change(file, old, new)


def weights(act: Callable[[np.ndarray], np.ndarray | None]) -> Break:
    """Do something to the matrix of n03."""

    def broken(study: MadeStudy) -> None:
        matrix = study.matrix("n03")
        done = act(matrix)
        study.put_matrix("n03", matrix if done is None else done)

    return broken


def cut(characters: int) -> Break:
    return lambda study: study.write("brain/n03.tsv", study.text("brain/n03.tsv")[:characters])


def put(row: int, column: int, value: float, *, both: bool = False) -> Break:
    def act(matrix: np.ndarray) -> None:
        matrix[row - 1, column - 1] = value
        if both:
            matrix[column - 1, row - 1] = value

    return weights(act)
