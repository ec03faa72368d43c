"""Folders made for the tests of a first study file."""

from __future__ import annotations

import re
from collections.abc import Iterable
from pathlib import Path

import numpy as np
import scipy.io

from socibrain.sources.begin import begin
from socibrain.sources.study import Study, read_study

IDS = ("007", "012", "NA", "31")
NAMES = ("Ada Quill", "Bo Marsh", "Cy Tern", "Di Holm")
CHOICES = {
    "asks": "whom do you trust?",
    "ties": "either",
    "edges": "other",
    "negative": "drop",
    "variable": "conn",
}


def decided(text: str, choices: dict[str, str] = CHOICES) -> str:
    """The file as a human leaves it: one line taken for each decision."""
    for entry, choice in choices.items():
        text = re.sub(
            rf"^( +)# {entry}: (?:{re.escape(choice)}|\.\.\.)( .*)?$",
            rf"\1{entry}: {choice}",
            text,
            flags=re.M,
        )
    return text


def study_of(folder: Path, choices: dict[str, str] = CHOICES) -> Study:
    (folder / "study.yaml").write_text(decided(begin(folder), choices), encoding="utf-8")
    return read_study(folder / "study.yaml")


def write(folder: Path, file: str, rows: Iterable[Iterable[object]], separator: str = "\t") -> None:
    path = folder / file
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text("".join(separator.join(map(str, row)) + "\n" for row in rows), encoding="utf-8")


def write_matrix(folder: Path, file: str, size: int = 6, low: float = 0.0) -> None:
    path = folder / file
    path.parent.mkdir(parents=True, exist_ok=True)
    weights = np.random.default_rng(len(file)).uniform(low, 1, (size, size))
    weights = (weights + weights.T) / 2
    if path.suffix == ".npy":
        np.save(path, weights)
    elif path.suffix == ".mat":
        scipy.io.savemat(path, {"conn": weights, "other": weights})
    elif path.suffix == ".edges":
        upper = zip(*np.triu_indices(size, 1), strict=True)
        path.write_text("".join(f"{i + 1} {j + 1} {weights[i, j]}\n" for i, j in upper))
    else:
        np.savetxt(path, weights, delimiter="\t")


def write_people(folder: Path, ids: Iterable[str] = IDS, file: str = "participants.tsv") -> None:
    rows = [(i, "north" if n % 2 else "south", "deck", 30 + n, "yes") for n, i in enumerate(ids)]
    write(folder, file, [("participant_id", "harbour", "duty", "age", "scanned"), *rows])
