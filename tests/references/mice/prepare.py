"""Makes a study folder from the fetched mouse connectomes."""

from __future__ import annotations

import csv
import shutil
from pathlib import Path

FETCHED = Path(__file__).parents[3] / ".testdata" / "mice"

STUDY = """\
socibrain: 1
study: mice
title: Connectomes of 32 mice of four strains
people:
  file: participants.tsv
brain:
  diffusion:
    files: connectomes/{person}_ses-1_dti.edgelist
    edges: streamlines
    layout: edge_list
    first_index: 0
    negative: refuse
    communities:
      restarts: 2
regions:
  file: regions.tsv
  name: name
  system: system
"""


def prepare_mice(folder: Path) -> Path:
    """Write the study into ``folder``, and return the path of its study file.

    ``participants.tsv`` has the columns participant_id, strain, sex; the systems of
    ``regions.tsv`` are the 14 blocks.  Raises `FileNotFoundError` when the data were not fetched.
    """
    if not (FETCHED / "fetched.txt").is_file():
        raise FileNotFoundError("the mouse connectomes are not here: run `make testdata` first")
    shutil.copytree(FETCHED, folder / "connectomes", ignore=shutil.ignore_patterns("*.csv", "*.txt"))
    people = ["participant_id\tstrain\tsex"]
    people += ["\t".join(row) for row in rows("participants.csv")]
    regions = ["name\tsystem"]
    for block, hemisphere, first, end in rows("blocks.csv"):
        regions += [f"region_{number}\t{block}_{hemisphere}" for number in range(int(first), int(end))]
    (folder / "participants.tsv").write_text("\n".join(people) + "\n", encoding="utf-8")
    (folder / "regions.tsv").write_text("\n".join(regions) + "\n", encoding="utf-8")
    study = folder / "study.yaml"
    study.write_text(STUDY, encoding="utf-8")
    return study


def rows(name: str) -> list[list[str]]:
    """The rows of one fetched table, without its header."""
    with (FETCHED / name).open(encoding="utf-8", newline="") as lines:
        return [row for row in csv.reader(lines) if row][1:]
