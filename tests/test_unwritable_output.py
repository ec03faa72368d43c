"""Run folders that cannot be written to, wholly or at the last moment: nothing is half written."""

from __future__ import annotations

import errno
import io
from pathlib import Path

import numpy as np
import pytest

from tests.broken_study import assert_told, gone, put
from tests.made_study import MadeStudy, make_study


@pytest.fixture
def study(tmp_path: Path) -> MadeStudy:
    return make_study(tmp_path / "study")


CHOOSE = "choose another folder with --out"


@pytest.mark.parametrize("command", ["audit", "measure", "link"])
def test_a_file_where_the_run_folder_should_be(study: MadeStudy, command: str) -> None:
    study.out.write_text("in the way")
    assert_told(study.run(command), 4, (str(study.out), "cannot be written to (File exists)", CHOOSE))
    assert study.out.read_text() == "in the way"


def test_a_folder_where_a_table_should_be(study: MadeStudy) -> None:
    (study.out / "sites.csv").mkdir(parents=True)
    assert_told(study.run("measure"), 4, (str(study.out), "'sites.csv' is a folder", CHOOSE))
    assert study.left() == ["sites.csv"]


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="needs a full device")
def test_a_disk_that_is_full_when_tables_are_written(study: MadeStudy) -> None:
    half = study.out / ".half"
    half.mkdir(parents=True)
    (half / "regions.parquet").symlink_to("/dev/full")
    assert_told(study.run("measure"), 4, (str(study.out), "No space left on device", CHOOSE))
    assert study.left() == []


def test_a_disk_that_is_full_when_finished_work_is_kept(
    study: MadeStudy, monkeypatch: pytest.MonkeyPatch
) -> None:
    def full(file: io.BufferedWriter, **_: object) -> None:
        file.write(b"half of it")
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(np, "savez", full)
    where = str(study.out / ".finished")
    assert_told(study.run("measure"), 4, (where, "cannot be kept (No space left on device)", CHOOSE))
    assert list((study.out / ".finished").iterdir()) == []
    assert study.left() == []


def test_results_never_go_among_the_inputs(study: MadeStudy) -> None:
    before = sorted(study.folder.iterdir())
    told = study.run("measure", out=study.folder)
    assert_told(told, 4, (str(study.folder), "holds what the study reads", "a folder of their own"))
    assert sorted(study.folder.iterdir()) == before


def test_a_refused_run_leaves_the_run_before_as_it_was(study: MadeStudy) -> None:
    assert study.run("measure").code == 0
    before = {path.name: path.read_bytes() for path in study.out.iterdir() if path.is_file()}
    gone("roster.tsv")(study)
    put(3, 4, np.nan)(study)
    assert study.run("measure").code == 4
    assert {path.name: path.read_bytes() for path in study.out.iterdir() if path.is_file()} == before
