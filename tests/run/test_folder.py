"""The run folder: whole files or none."""

from __future__ import annotations

import json
import os
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from socibrain.errors import DataRefused
from socibrain.run.folder import RunFolder, csv_bytes, json_bytes


def test_all_files_or_none(tmp_path: Path) -> None:
    folder = RunFolder(tmp_path / "run")
    folder.open()
    folder.write({"a.csv": b"old"})
    (tmp_path / "run" / "b.csv").mkdir()
    (tmp_path / "run" / "b.csv" / "in the way").touch()
    with pytest.raises(DataRefused, match="cannot be written to"):
        folder.write({"c/d.csv": b"new", "a.csv": b"new"})
    assert (tmp_path / "run" / "a.csv").read_bytes() == b"old"
    assert sorted(path.name for path in (tmp_path / "run").iterdir()) == ["a.csv", "b.csv"]


def test_a_file_where_the_folder_should_be(tmp_path: Path) -> None:
    (tmp_path / "run").write_text("a file")
    with pytest.raises(DataRefused, match="choose another folder") as refused:
        RunFolder(tmp_path / "run").open()
    assert refused.value.exit_code == 4


@pytest.mark.skipif(os.geteuid() == 0, reason="nothing is forbidden to root")
def test_a_folder_without_permission(tmp_path: Path) -> None:
    tmp_path.chmod(0o500)
    with pytest.raises(DataRefused, match="Permission denied"):
        RunFolder(tmp_path / "run").open()


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="needs a full device")
def test_a_full_disk_leaves_nothing(tmp_path: Path) -> None:
    folder = RunFolder(tmp_path)
    (tmp_path / ".half").mkdir()
    (tmp_path / ".half" / "b").symlink_to("/dev/full")
    with pytest.raises(DataRefused, match="No space left"):
        folder.write({"a": b"x", "b": b"x" * 10_000})
    assert list(tmp_path.iterdir()) == []


def test_missing_is_written_out() -> None:
    table = pd.DataFrame({"person": ["007", "NA"], "age": [np.nan, 31.5]})
    assert csv_bytes(table) == b"person,age\n007,n/a\nNA,31.5\n"


def test_json_has_no_nan() -> None:
    assert json.loads(json_bytes({"a": np.nan, "b": [np.float64(1.5), np.int64(2)], "c": ("x",)})) == {
        "a": None,
        "b": [1.5, 2],
        "c": ["x"],
    }
