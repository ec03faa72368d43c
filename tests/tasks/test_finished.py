"""Finished work: recalled as it was, and never half."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from socibrain.tasks.finished import Finished, digest, file_digest


def test_what_was_kept_is_recalled(tmp_path: Path) -> None:
    finished = Finished(tmp_path / "memory")
    assert finished.recall("a") is None
    finished.keep("a", {"x": np.array([1.5, np.nan]), "y": np.array(3)})
    recalled = finished.recall("a")
    assert recalled is not None
    np.testing.assert_array_equal(recalled["x"], [1.5, np.nan])
    assert recalled["y"] == 3
    assert [path.name for path in finished.folder.iterdir()] == ["a.npz"]


def test_a_truncated_entry_counts_as_none(tmp_path: Path) -> None:
    finished = Finished(tmp_path)
    finished.keep("a", {"x": np.arange(1000.0)})
    path = tmp_path / "a.npz"
    path.write_bytes(path.read_bytes()[:200])
    assert finished.recall("a") is None
    path.write_bytes(b"")
    assert finished.recall("a") is None


def test_every_part_changes_the_digest() -> None:
    assert len({digest("a", "b"), digest("ab"), digest("b", "a"), digest("a", ["b"])}) == 4


def test_file_digest_is_sha_256(tmp_path: Path) -> None:
    """The test vector for "abc" is published in FIPS 180-4's examples (from memory)."""
    path = tmp_path / "abc"
    path.write_bytes(b"abc")
    assert file_digest(path).startswith("ba7816bf8f01cfea414140de5dae2223")
