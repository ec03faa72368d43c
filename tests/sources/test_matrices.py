"""The brain loader reads every format alike, and names the cell at fault."""

from __future__ import annotations

import pickle
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
import scipy.io
import scipy.sparse
from numpy.typing import NDArray

from socibrain.errors import Faults
from socibrain.sources.matrices import read_matrix
from socibrain.sources.records import MatrixFile, MatrixRecord
from socibrain.sources.study import read_study

Array = NDArray[np.float64]
Reader = Callable[..., tuple[MatrixRecord | None, Faults]]

SMALL = "0\t.5\t.25\n.5\t0\t-.125\n.25\t-.125\t0\n"
EXPECTED = [[0, 0.5, 0.25], [0.5, 0, -0.125], [0.25, -0.125, 0]]


@pytest.fixture
def reader(tmp_path: Path) -> Reader:
    """Reads one file of a study whose brain input has these entries."""

    def read(
        file: str, content: str | bytes | None = None, *, n_regions: int | None = None, **entries: object
    ) -> tuple[MatrixRecord | None, Faults]:
        if content is not None:
            data = content.encode() if isinstance(content, str) else content
            (tmp_path / file).write_bytes(data)
        lines = "".join(f"    {name}: {value}\n" for name, value in entries.items())
        (tmp_path / "study.yaml").write_text(
            "socibrain: 1\nstudy: x\ntitle: x\npeople: {file: people.tsv}\nbrain:\n  rest:\n"
            "    files: '{person}.tsv'\n    edges: other\n    negative: drop\n" + lines,
            encoding="utf-8",
        )
        faults = Faults()
        study = read_study(tmp_path / "study.yaml")
        return read_matrix(study, MatrixFile("rest", "7", "", file), n_regions, faults), faults

    return read


def weights_of(result: tuple[MatrixRecord | None, Faults]) -> list[list[float]]:
    record, faults = result
    assert record is not None, [str(fault) for fault in faults]
    assert not list(faults)
    assert not record.weights.flags.writeable
    assert record.weights.dtype == np.float64
    rows: list[list[float]] = record.weights.tolist()
    return rows


def fault_of(result: tuple[MatrixRecord | None, Faults]) -> tuple[str, str, str]:
    """Place, kind and text of the only fault, which is grave and names the file."""
    record, faults = result
    assert record is None
    (fault,) = faults
    assert fault.grave
    assert fault.file.startswith("7.")
    assert fault.mend
    return fault.place, fault.kind, fault.found


@pytest.mark.parametrize(
    ("file", "content", "names"),
    [
        ("7.tsv", SMALL, ()),
        ("7.tsv", SMALL.rstrip(), ()),
        ("7.tsv", SMALL + "\n\n", ()),
        ("7.tsv", SMALL.replace("\n", "\r\n"), ()),
        ("7.tsv", SMALL.replace("\n", "\r"), ()),
        ("7.tsv", b"\xef\xbb\xbf" + SMALL.encode(), ()),
        ("7.csv", SMALL.replace("\t", ","), ()),
        ("7.csv", SMALL.replace("\t", ", "), ()),
        ("7.txt", SMALL.replace("\t", "  "), ()),
        ("7.tsv", "a\tb\tc\n" + SMALL, ("a", "b", "c")),
        ("7.csv", '"a","b","c, left"\n' + SMALL.replace("\t", ","), ("a", "b", "c, left")),
        ("7.tsv", "\ta\tb\tc\na\t0\t.5\t.25\nb\t.5\t0\t-.125\nc\t.25\t-.125\t0\n", ("a", "b", "c")),
        ("7.tsv", "region\ta\tb\tc\na\t0\t.5\t.25\nb\t.5\t0\t-.125\nc\t.25\t-.125\t0\n", ("a", "b", "c")),
        ("7.tsv", "a\tb\tc\na\t0\t.5\t.25\nb\t.5\t0\t-.125\nc\t.25\t-.125\t0\n", ("a", "b", "c")),
        ("7.tsv", "a\t0\t.5\t.25\nb\t.5\t0\t-.125\nc\t.25\t-.125\t0\n", ("a", "b", "c")),
        ("7.tsv", "\t1\t2\t3\n1\t0\t.5\t.25\n2\t.5\t0\t-.125\n3\t.25\t-.125\t0\n", ("1", "2", "3")),
        (
            "7.csv",
            pd.DataFrame([[0, 0.5, 0.25], [0.5, 0, -0.125], [0.25, -0.125, 0]]).to_csv(),
            ("0", "1", "2"),
        ),
    ],
)
def test_text_layouts(reader: Reader, file: str, content: str | bytes, names: tuple[str, ...] | None) -> None:
    result = reader(file, content, n_regions=3)
    assert weights_of(result) == EXPECTED
    assert result[0] is not None
    assert result[0].names == names


@pytest.mark.parametrize(
    ("content", "place", "kind", "says"),
    [
        ("", "", "empty", "is empty"),
        (" \n\n", "", "empty", "is empty"),
        ("a\tb\tc\n", "line 1", "empty", "no numbers"),
        (SMALL.replace("-.125", "x", 1), "line 2, column 3", "text-in-cell", "'x' is not a number"),
        ("a\tb\tc\n" + SMALL.replace("-.125", "x", 1), "line 3, column 3", "text-in-cell", "'x'"),
        (SMALL.replace("-.125", "x"), "line 2, column 3", "text-in-cell", "and 1 more"),
        (SMALL.replace("-.125", "-0,125", 1), "line 2, column 3", "text-in-cell", "'-0,125'"),
        (SMALL.replace("-.125", "", 1), "line 2, column 3", "text-in-cell", "the cell is empty"),
        (SMALL.replace("-.125", "NA", 1), "line 2, column 3", "text-in-cell", "'NA'"),
        (SMALL.replace("-.125", "1_0", 1), "line 2, column 3", "text-in-cell", "'1_0'"),
        (SMALL[:-8], "line 3", "truncated", "has 1 cells where the lines before have 3"),
        (SMALL.replace(".5\t0\t", ".5\t0\t1\t"), "line 2", "ragged", "has 4 cells"),
        (SMALL.replace("\n", "\n\n", 1), "line 2", "ragged", "has 0 cells"),
        (SMALL[: SMALL.index("\n.25")], "", "not-square", "is 2 × 3"),
        (SMALL + "1\t2\t3\n", "", "not-square", "is 4 × 3"),
        ("1\n", "", "not-square", "is 1 × 1"),
        (SMALL.replace("-.125", "nan", 1), "row 2, column 3", "not-finite", "the weight is nan"),
        (SMALL.replace("-.125", "n/a"), "row 2, column 3", "not-finite", "and 1 more"),
        (SMALL.replace("-.125", "inf", 1), "row 2, column 3", "not-finite", "the weight is inf"),
        (SMALL.replace("-.125", "1e400", 1), "row 2, column 3", "not-finite", "the weight is inf"),
        ("0\tn/a\tinf\nn/a\t0\tn/a\ninf\tn/a\t0\n", "row 1, column 3", "not-finite", "the weight is inf"),
        (SMALL.replace("-.125", "é", 1).encode("latin-1"), "line 2", "encoding", "not UTF-8"),
        (SMALL.encode("utf-16"), "line 1", "encoding", "not UTF-8"),
        ("a\tb\n" + SMALL, "line 1", "ragged", "2 names for 3 columns"),
        ("a\tb\tc\td\n" + SMALL, "line 1", "ragged", "4 names for 3 columns"),
    ],
)
def test_text_faults_name_the_cell(
    reader: Reader, content: str | bytes, place: str, kind: str, says: str
) -> None:
    found = fault_of(reader("7.tsv", content))
    assert found[:2] == (place, kind)
    assert says in found[2]


def test_a_wholly_missing_region_passes_whatever_the_diagonal(reader: Reader) -> None:
    rows = weights_of(reader("7.tsv", "n/a\tn/a\t.5\nn/a\t1\tn/a\n.5\tn/a\tinf\n"))
    assert rows[0][2] == rows[2][0] == 0.5
    assert np.isnan(rows[1][0])


def test_missing_file_and_folder_in_its_place(reader: Reader, tmp_path: Path) -> None:
    assert fault_of(reader("7.tsv"))[:2] == ("", "missing-file")
    (tmp_path / "7.csv").mkdir()
    assert fault_of(reader("7.csv"))[:2] == ("", "unreadable")


@pytest.mark.parametrize("suffix", ["npy", "npz", "mat", "tsv"])
def test_size_must_be_that_of_the_region_table(reader: Reader, tmp_path: Path, suffix: str) -> None:
    weights = np.array(EXPECTED)
    write(weights, tmp_path / f"7.{suffix}")
    place, kind, found = fault_of(reader(f"7.{suffix}", n_regions=4))
    assert (place, kind) == ("", "wrong-size")
    assert "3 × 3" in found
    assert "4 regions" in found


def write(weights: Array, path: Path) -> None:
    """Write a matrix in the format of the suffix; an edge list as .edges."""
    if path.suffix == ".npy":
        np.save(path, weights)
    elif path.suffix == ".npz":
        np.savez_compressed(path, weights=weights)
    elif path.suffix == ".mat":
        scipy.io.savemat(path, {"subject": "seven", "count": 3.0, "weights": weights})
    elif path.suffix == ".edges":
        lines = [f"{i + 1} {j + 1} {weights[i, j]!r}" for i, j in np.argwhere(np.triu(weights, 1))]
        path.write_text("\n".join(line.replace("np.float64(", "").replace(")", "") for line in lines))
    else:
        separator = {".tsv": "\t", ".csv": ","}[path.suffix]
        path.write_text("\n".join(separator.join(map(repr, row)) for row in weights.tolist()))


@pytest.mark.parametrize("seed", range(5))
def test_every_format_gives_the_same_matrix(reader: Reader, tmp_path: Path, seed: int) -> None:
    rng = np.random.default_rng(seed)
    n = int(rng.integers(2, 40))
    weights = np.triu(rng.standard_normal((n, n)) * 10.0 ** rng.integers(-12, 12, (n, n)), 1)
    weights += weights.T
    for suffix in ("tsv", "csv", "npy", "npz", "mat"):
        write(weights, tmp_path / f"7.{suffix}")
        assert weights_of(reader(f"7.{suffix}", n_regions=n)) == weights.tolist()
    write(weights, tmp_path / "7.edges")
    edges = reader("7.edges", n_regions=n, layout="edge_list", first_index=1)
    assert weights_of(edges) == weights.tolist()


def test_other_kinds_of_numbers_become_float64(reader: Reader, tmp_path: Path) -> None:
    for kind in (np.int16, np.uint8, np.float32, ">f8", np.bool_):
        np.save(tmp_path / "7.npy", np.array([[0, 1], [1, 0]]).astype(kind))
        assert weights_of(reader("7.npy")) == [[0, 1], [1, 0]]
    scipy.io.savemat(tmp_path / "7.mat", {"ties": scipy.sparse.csc_array(np.array([[0.0, 2], [2, 0]]))})
    assert weights_of(reader("7.mat")) == [[0, 2], [2, 0]]


@pytest.mark.parametrize("suffix", ["npz", "mat"])
def test_which_array_is_meant(reader: Reader, tmp_path: Path, suffix: str) -> None:
    arrays = {"first": np.eye(3), "second": np.array(EXPECTED)}
    path = tmp_path / f"7.{suffix}"
    if suffix == "npz":
        np.savez(path, **arrays)  # type: ignore[arg-type]
    else:
        scipy.io.savemat(path, arrays)
    assert weights_of(reader(path.name, variable="second")) == EXPECTED
    place, kind, found = fault_of(reader(path.name))
    assert (place, kind) == ("", "no-variable")
    assert "'first' (3, 3), 'second' (3, 3)" in found
    assert "no array 'third'" in fault_of(reader(path.name, variable="third"))[2]


def test_pickles_are_never_opened(reader: Reader, tmp_path: Path) -> None:
    class Trap:
        def __reduce__(self) -> tuple[object, tuple[str]]:
            return exec, (f"open({str(tmp_path / 'sprung')!r}, 'w')",)

    objects = np.array([[Trap(), 1.0], [1.0, 0.0]], dtype=object)
    np.save(tmp_path / "7.npy", objects, allow_pickle=True)
    assert fault_of(reader("7.npy"))[:2] == ("", "pickle")
    np.savez(tmp_path / "7.npz", weights=objects)
    assert fault_of(reader("7.npz"))[:2] == ("", "pickle")
    (tmp_path / "7.npy").write_bytes(pickle.dumps(Trap()))
    assert fault_of(reader("7.npy"))[:2] == ("", "pickle")
    assert not (tmp_path / "sprung").exists()


@pytest.mark.parametrize(
    ("array", "kind"),
    [
        (np.array([["a", "b"], ["c", "d"]]), "not-numbers"),
        (np.eye(2) * 1j, "not-numbers"),
        (np.zeros((2, 2), dtype=[("x", float)]), "not-numbers"),
        (np.zeros((2, 2, 2)), "not-square"),
        (np.zeros(4), "not-square"),
        (np.zeros((2, 3)), "not-square"),
        (np.float64(3), "not-square"),
        (np.zeros((0, 0)), "not-square"),
        (np.array([[0, np.nan, 1], [np.nan, 0, 1], [1, 1, 0]]), "not-finite"),
    ],
)
def test_arrays_that_are_no_matrix(reader: Reader, tmp_path: Path, array: Array, kind: str) -> None:
    np.save(tmp_path / "7.npy", array)
    assert fault_of(reader("7.npy"))[1] == kind


@pytest.mark.parametrize("suffix", ["npy", "npz", "mat"])
def test_files_cut_short_at_any_byte(reader: Reader, tmp_path: Path, suffix: str) -> None:
    write(np.array(EXPECTED), tmp_path / f"7.{suffix}")
    whole = (tmp_path / f"7.{suffix}").read_bytes()
    kinds = {fault_of(reader(f"7.{suffix}", whole[:length]))[1] for length in range(0, len(whole) - 1, 3)}
    assert kinds <= {"empty", "truncated", "no-variable", "pickle"}
    assert "truncated" in kinds


@pytest.mark.parametrize("suffix", ["npy", "npz", "mat"])
def test_noise_is_refused_not_raised(reader: Reader, suffix: str) -> None:
    for seed in range(20):
        noise = np.random.default_rng(seed).bytes(300)
        assert fault_of(reader(f"7.{suffix}", noise))[1] in ("truncated", "pickle", "no-variable")


@pytest.mark.parametrize("start", [b"\x89HDF\r\n\x1a\n", b"MATLAB 7.3 MAT-file, Platform: any"])
def test_newer_matlab_files_are_named(reader: Reader, start: bytes) -> None:
    place, kind, found = fault_of(reader("7.mat", start + bytes(600)))
    assert (place, kind) == ("", "newer-format")
    assert "7.3" in found


@pytest.mark.parametrize(
    ("content", "first_index"),
    [
        ("0 1 .5\n0 2 .25\n1 2 -.125\n", 0),
        ("1 0 .5\n2 0 .25\n1 2 -.125\n", 0),
        ("0 1 .5\n1 0 .5\n0 2 .25\n2 1 -.125\n1 1 9\n", 0),
        ("1\t2\t.5\n1\t3\t.25\n2\t3\t-.125\n", 1),
        ("from,to,weight\n1,2,.5\n1,3,.25\n2,3,-.125\n", 1),
        ("# ties of one person\n1 2 .5\n1 3 .25\n2 3 -.125\n", 1),
        ("1.0 2.0 .5\n1.0 3.0 .25\n2.0 3.0 -.125\n", 1),
    ],
)
def test_edge_lists(reader: Reader, content: str, first_index: int) -> None:
    for n_regions in (3, None):
        result = reader("7.edges", content, n_regions=n_regions, layout="edge_list", first_index=first_index)
        assert weights_of(result) == EXPECTED


def test_regions_without_a_tie_count(reader: Reader) -> None:
    rows = weights_of(reader("7.edges", "0 1 2\n", n_regions=3, layout="edge_list"))
    assert rows == [[0, 2, 0], [2, 0, 0], [0, 0, 0]]


@pytest.mark.parametrize(
    ("content", "place", "kind", "says"),
    [
        (
            "0 1 2\n0 3 1\n",
            "line 2, column 2",
            "unknown-region",
            "no region 3: regions are numbered from 0 to 2",
        ),
        ("i j w\n0 1 2\n-1 2 1\n", "line 3, column 1", "unknown-region", "no region -1"),
        ("0 1 2\n0.5 2 1\n", "line 2, column 1", "unknown-region", "no region 0.5"),
        ("0 1 2\n0 n/a 1\n", "line 2, column 2", "unknown-region", "no region nan"),
        ("0 1 2\n0 2 n/a\n", "line 2, column 3", "not-finite", "nan"),
        ("0 1 2\n0 2 inf\n", "line 2, column 3", "not-finite", "inf"),
        ("0 1 2\n0 2 x\n", "line 2, column 3", "text-in-cell", "'x'"),
        ("0 1 2\n0 2\n", "line 2", "truncated", "has 2 cells"),
        ("0 1\n0 2\n", "line 1", "not-an-edge-list", "has 2 columns"),
        ("a 1 2\nb 2 1\n", "line 1", "not-an-edge-list", "the first one text"),
        ("0 1 2\n0 2 1\n1 0 3\n", "line 3", "not-symmetric", "gives 3 for the tie that line 1 gives 2"),
        ("0 1 2\n0 2 1\n0 1 3\n", "line 3", "not-symmetric", "gives 3 for the tie that line 1 gives 2"),
        ("", "", "empty", "is empty"),
    ],
)
def test_edge_list_faults(reader: Reader, content: str, place: str, kind: str, says: str) -> None:
    found = fault_of(reader("7.edges", content, n_regions=3, layout="edge_list"))
    assert found[:2] == (place, kind)
    assert says in found[2]


def test_order_and_direction_of_an_edge_list_do_not_matter(reader: Reader) -> None:
    rng = np.random.default_rng(3)
    ties = [(i, j, float(rng.integers(1, 9))) for i in range(12) for j in range(i)]
    plain = weights_of(reader("7.edges", "\n".join(f"{i} {j} {w}" for i, j, w in ties), layout="edge_list"))
    order = rng.permutation(len(ties))
    turned = [ties[k] if k % 2 else (ties[k][1], ties[k][0], ties[k][2]) for k in order]
    mixed = "\n".join(f"{i} {j} {w}" for i, j, w in turned)
    assert weights_of(reader("7.edges", mixed, layout="edge_list")) == plain
