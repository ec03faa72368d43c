"""Matrices of another size never get in among the others, with or without a table of regions."""

from __future__ import annotations

from pathlib import Path

import pandas as pd

from tests.broken_study import assert_told
from tests.made_study import REGIONS, make_study

REGIONS_TABLE = "regions:\n  file: regions.tsv\n  system: system\n"


def test_a_matrix_of_another_size_is_refused_without_a_region_table(tmp_path: Path) -> None:
    study = make_study(tmp_path / "study")
    study.change("study.yaml", REGIONS_TABLE, "")
    assert study.run("measure").code == 0
    study.put_matrix("n03", study.matrix("n03")[1:, 1:])
    message = (
        "brain/n03.tsv",
        f"{REGIONS - 1} regions; 23 other files of this input hold {REGIONS}",
        "same regions",
    )
    told = study.run("measure", out=tmp_path / "second")
    assert_told(told, 4, message)
    assert study.run("audit", out=tmp_path / "third").code == 4
    problems = pd.read_csv(tmp_path / "third/problems.csv")
    assert problems.loc[problems["kind"] == "odd-size", "file"].tolist() == ["brain/n03.tsv"]
