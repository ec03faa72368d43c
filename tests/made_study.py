"""A small study made in a folder, for tests that go through the command line."""

from __future__ import annotations

import contextlib
import io
import shutil
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from tempfile import mkdtemp

import numpy as np

from socibrain.cli import main

SITES = ("north", "south")
PER_SITE = 12
REGIONS = 10

STUDY = """\
socibrain: 1
study: small
title: A small study (invented)
seed: 3
people:
  file: people.tsv
  id: person
  site: site
  role: role
  numbers: [age]
roster:
  file: roster.tsv
  person: person
  name: name
  site: site
questionnaire:
  answered: {file: roster.tsv, person: person, column: answered, values: ["yes"]}
  questions:
    advice:
      asks: Whom do you ask for advice?
      file: advice.tsv
      layout: long
      chooser: person
      chosen: asks
      ties: directed
brain:
  rest:
    files: brain/{person}.tsv
    edges: correlation
    negative: drop
    communities: {restarts: 2}
regions:
  file: regions.tsv
  system: system
"""

PLAN = """\
socibrain: 1
plan: small_plan
study: study.yaml
question: Does being asked go with connectivity?
seed: 1
shuffles: 99
hypotheses:
  - id: asked
    says: People who are asked more have stronger connections.
    outcome: rest.mean_connectivity
    predictor: advice.in_degree
    adjust: [age]
"""


@dataclass(frozen=True)
class Told:
    """What a command left: its exit code and what it wrote to the two streams."""

    code: int
    out: str
    err: str


@dataclass(frozen=True)
class MadeStudy:
    """A study of 2 sites with 12 people each, one question and one brain input; plan.yaml beside it."""

    folder: Path

    def text(self, name: str) -> str:
        """What a file says."""
        return (self.folder / name).read_text(encoding="utf-8")

    def write(self, name: str, content: str | bytes) -> None:
        """Write a file anew."""
        path = self.folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_bytes(content.encode() if isinstance(content, str) else content)

    def change(self, name: str, old: str, new: str) -> None:
        """Change the one place of a file where ``old`` stands."""
        text = self.text(name)
        assert text.count(old) == 1, f"{old!r} stands {text.count(old)} times in {name}"
        self.write(name, text.replace(old, new))

    def column(self, name: str, column: str, values: dict[str, str]) -> None:
        """Change cells of one column of a table whose first column is the key."""
        header, *rows = (line.split("\t") for line in self.text(name).splitlines())
        place = header.index(column)
        for row in rows:
            row[place] = values.get(row[0], row[place])
        self.write(name, _table([header, *rows]))

    def without(self, name: str, key: str) -> None:
        """Take out every row of a table whose first cell is ``key``."""
        kept = [line for line in self.text(name).splitlines() if line.split("\t")[0] != key]
        self.write(name, "\n".join(kept) + "\n")

    def matrix(self, person: str) -> np.ndarray:
        """A person's matrix."""
        return np.loadtxt(self.folder / "brain" / f"{person}.tsv", delimiter="\t")

    def put_matrix(self, person: str, weights: np.ndarray) -> None:
        """Write a person's matrix anew."""
        self.write(f"brain/{person}.tsv", matrix_text(weights))

    def run(self, command: str, document: str | None = None, *, out: Path | None = None) -> Told:
        """One command with one worker; the run folder is OUT beside the study folder."""
        document = document or ("plan.yaml" if command == "link" else "study.yaml")
        where = out or self.out
        return call(command, str(self.folder / document), "--out", str(where), "--workers", "1")

    @property
    def out(self) -> Path:
        """Where `run` writes."""
        return self.folder.parent / "out"

    def left(self) -> list[str]:
        """Names of everything in the run folder but finished work."""
        there = self.out.rglob("*") if self.out.is_dir() else ()
        return sorted(
            path.relative_to(self.out).as_posix() for path in there if ".finished" not in path.parts
        )


def call(*arguments: str) -> Told:
    """The command line as a shell calls it."""
    out, err = io.StringIO(), io.StringIO()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        try:
            main(list(arguments))
        except SystemExit as leaving:
            code = int(leaving.code or 0)
    return Told(code, out.getvalue(), err.getvalue())


def make_study(folder: Path) -> MadeStudy:
    """A sound study in ``folder``."""
    shutil.copytree(_original(), folder)
    return MadeStudy(folder)


def matrix_text(weights: np.ndarray) -> str:
    """A matrix as TSV."""
    return "".join("\t".join(f"{value:.6f}" for value in row) + "\n" for row in weights)


def ids(site: str) -> list[str]:
    """Ids of one site's people: `n01` … `n12`, `s01` … `s12`."""
    return [f"{site[0]}{number:02d}" for number in range(1, PER_SITE + 1)]


@cache
def _original() -> Path:
    study = MadeStudy(Path(mkdtemp()) / "original")
    draw = np.random.default_rng(20)
    study.write("study.yaml", STUDY)
    study.write("plan.yaml", PLAN)
    people = [["person", "site", "role", "age"]]
    roster = [["person", "site", "name", "answered"]]
    advice = [["person", "asks"]]
    for site in SITES:
        for person in ids(site):
            people.append([person, site, draw.choice(["crew", "shore"]), str(draw.integers(20, 60))])
            roster.append([person, site, f"Name {person.upper()}", "yes"])
            others = [f"Name {other.upper()}" for other in ids(site) if other != person]
            advice += [[person, name] for name in draw.choice(others, 3, replace=False)]
            noise = draw.normal(0.35, 0.15, (REGIONS, REGIONS)) + draw.normal(0, 0.08)
            weights = np.clip(np.triu(noise, 1) + np.triu(noise, 1).T, -0.9, 0.9)
            np.fill_diagonal(weights, 1)
            study.put_matrix(person, weights)
    regions = [["name", "system"]] + [[f"area{k}", "front" if k < 5 else "back"] for k in range(REGIONS)]
    for name, rows in (("people", people), ("roster", roster), ("advice", advice), ("regions", regions)):
        study.write(f"{name}.tsv", _table(rows))
    return study.folder


def _table(rows: list[list[str]]) -> str:
    return "".join("\t".join(map(str, row)) + "\n" for row in rows)
