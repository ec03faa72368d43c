"""Matrix files are found for exactly the people and visits that are known; strays are told."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest

from socibrain.errors import Fault, Faults
from socibrain.sources.matrix_files import find_matrices
from socibrain.sources.study import read_study

Found = tuple[list[tuple[str, str, str]], list[Fault]]
Finder = Callable[..., Found]


@pytest.fixture
def finder(tmp_path: Path) -> Finder:
    """Finds among these files what fits the pattern, as (person, visit, file)."""

    def find(pattern: str, files: list[str], ids: list[str], visits: list[str] | None = None) -> Found:
        for file in files:
            (tmp_path / file).parent.mkdir(parents=True, exist_ok=True)
            (tmp_path / file).touch()
        (tmp_path / "study.yaml").write_text(
            "socibrain: 1\nstudy: x\ntitle: x\npeople: {file: people.tsv}\n"
            f"visits: {visits or []}\n"
            f"brain:\n  rest: {{files: '{pattern}', edges: other, negative: drop}}\n",
            encoding="utf-8",
        )
        faults = Faults()
        origins = find_matrices(read_study(tmp_path / "study.yaml"), "rest", ids, faults)
        assert all(origin.source == "rest" for origin in origins)
        return [(origin.person, origin.visit, origin.file) for origin in origins], list(faults)

    return find


def test_people_in_the_order_of_the_table(finder: Finder) -> None:
    found, faults = finder("m/{person}.tsv", ["m/a.tsv", "m/b.tsv", "m/c.csv"], ["b", "c", "a"])
    assert found == [("b", "", "m/b.tsv"), ("a", "", "m/a.tsv")]
    assert faults == []


def test_ids_are_text(finder: Finder) -> None:
    files = ["m/007.tsv", "m/NA.tsv", "m/a[1]*.tsv"]
    found, faults = finder("m/{person}.tsv", files, ["007", "NA", "a[1]*"])
    assert [person for person, _, _ in found] == ["007", "NA", "a[1]*"]
    assert faults == []


def test_visits_and_repeated_placeholders(finder: Finder) -> None:
    pattern = "{person}/{visit}/{person}_{visit}.npy"
    files = ["a/1/a_1.npy", "a/2/a_2.npy", "b/2/b_2.npy", "b/2/b_1.npy"]
    found, faults = finder(pattern, files, ["a", "b"], ["1", "2"])
    assert found == [("a", "1", "a/1/a_1.npy"), ("a", "2", "a/2/a_2.npy"), ("b", "2", "b/2/b_2.npy")]
    assert faults == []  # b/2/b_1.npy says two visits at once: it does not fit the pattern


def test_underscores_in_ids_do_not_confuse(finder: Finder) -> None:
    found, faults = finder("{person}_{visit}.tsv", ["a_1_1.tsv", "a_1.tsv"], ["a", "a_1"], ["1"])
    assert found == [("a", "1", "a_1.tsv"), ("a_1", "1", "a_1_1.tsv")]
    assert faults == []


@pytest.mark.parametrize(
    ("pattern", "known", "file", "meant"),
    [
        ("{person}.tsv", "007", "7.tsv", "'007'"),
        ("{person}.tsv", "7", "007.tsv", "'7'"),
        ("{person}.tsv", "sub-AB", "sub-ab.tsv", "'sub-AB'"),
        ("{person}.tsv", "sub-07", "07.tsv", "'sub-07'"),
        ("sub-{person}.tsv", "sub-07", "sub-07.tsv", "'sub-07'"),
        ("{person}.tsv", "07", "sub-07.tsv", "'07'"),
        ("{person}.tsv", "70", "7.tsv", ""),
        ("{person}.tsv", "x", "y.tsv", ""),
    ],
)
def test_ids_that_nearly_fit_are_suggested_never_taken(
    finder: Finder, pattern: str, known: str, file: str, meant: str
) -> None:
    other = pattern.replace("{person}", "other")
    found, faults = finder(pattern, [file, other], [known, "other"])
    assert found == [("other", "", other)]
    (fault,) = faults
    assert (fault.file, fault.kind, fault.grave) == (file, "unknown-person", True)
    assert (f"is it {meant}?" in fault.mend) if meant else ("is it" not in fault.mend)


def test_a_visit_that_is_not_declared(finder: Finder) -> None:
    found, faults = finder("{person}_{visit}.tsv", ["a_1.tsv", "a_3.tsv", "z_3.tsv"], ["a"], ["1", "2"])
    assert found == [("a", "1", "a_1.tsv")]
    assert [(fault.file, fault.kind, fault.grave) for fault in faults] == [
        ("a_3.tsv", "unknown-visit", False),
        ("z_3.tsv", "unknown-person", True),
    ]


@pytest.mark.parametrize("files", [[], ["elsewhere/a.tsv"], ["m/a.csv"]])
def test_no_file_at_all_is_grave(finder: Finder, files: list[str]) -> None:
    found, (fault,) = finder("m/{person}.tsv", files, ["a", "b"])
    assert found == []
    assert (fault.kind, fault.grave) == ("no-matrices", True)
    assert "m/a.tsv" in fault.mend


def test_nobody_known_is_grave_too(finder: Finder) -> None:
    found, faults = finder("{person}.tsv", ["a.tsv"], [])
    assert found == []
    assert [(fault.kind, fault.grave) for fault in faults] == [
        ("unknown-person", True),
        ("no-matrices", True),
    ]


ENTITIES = ["sub-7", "ses-2", "task-rest", "atlas-Coast"]
RELATION = "m/{person}_ses-{visit}_task-rest_atlas-Coast_relmat.tsv"


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("atlas", ["atlas-Coast", "seg-Coast"])
def test_entities_of_relation_matrices_in_any_order(finder: Finder, seed: int, atlas: str) -> None:
    order = np.random.default_rng(seed).permutation(4)
    entities = [*ENTITIES[:3], atlas]
    file = "m/" + "_".join(entities[k] for k in order) + "_relmat.tsv"
    for pattern in (
        RELATION,
        RELATION.replace("atlas-", "seg-"),
        RELATION.replace("{person}", "sub-{person}"),
    ):
        person = "7" if "sub-{person}" in pattern else "sub-7"
        found, faults = finder(pattern, [file], [person], ["2"])
        assert found == [(person, "2", file)]
        assert faults == []


@pytest.mark.parametrize(
    "file",
    [
        "m/sub-7_ses-2_task-rest_atlas-Other_relmat.tsv",
        "m/sub-7_ses-2_task-rest_run-1_atlas-Coast_relmat.tsv",
        "m/sub-7_ses-2_atlas-Coast_relmat.tsv",
        "m/sub-7_ses-2_task-rest_atlas-Coast_timeseries.tsv",
    ],
)
def test_relation_matrices_of_something_else_are_passed_over(finder: Finder, file: str) -> None:
    files = [file, "m/sub-8_ses-2_task-rest_atlas-Coast_relmat.tsv"]
    found, faults = finder(RELATION, files, ["sub-7", "sub-8"], ["2"])
    assert [person for person, _, _ in found] == ["sub-8"]
    assert faults == []


def test_strays_among_relation_matrices(finder: Finder) -> None:
    files = [
        "m/atlas-Coast_sub-07_ses-2_task-rest_relmat.tsv",
        "m/task-rest_sub-8_ses-9_seg-Coast_relmat.tsv",
        "m/sub-8_ses-2_task-rest_seg-Coast_relmat.tsv",
    ]
    found, faults = finder(RELATION, files, ["sub-7", "sub-8"], ["2"])
    assert found == [("sub-8", "2", files[2])]
    assert [(fault.file, fault.kind) for fault in faults] == [
        (files[0], "unknown-person"),
        (files[1], "unknown-visit"),
    ]
    assert "'sub-7'" in faults[0].mend


def test_two_files_for_the_same_matrix_are_refused(finder: Finder) -> None:
    files = [
        "m/sub-7_ses-2_task-rest_atlas-Coast_relmat.tsv",
        "m/sub-7_ses-2_task-rest_seg-Coast_relmat.tsv",
    ]
    _, (fault,) = finder(RELATION, files, ["sub-7"], ["2"])
    assert (fault.file, fault.kind, fault.grave) == (files[0], "same-entities", True)
    assert files[1] in fault.found


def test_folders_above_and_absolute_patterns(finder: Finder, tmp_path: Path) -> None:
    assert finder("./m/{person}.tsv", ["m/a.tsv"], ["a"])[0] == [("a", "", "./m/a.tsv")]
    there = f"{tmp_path}/m/{{person}}.tsv"
    assert finder(there, ["m/a.tsv"], ["a"])[0] == [("a", "", f"{tmp_path}/m/a.tsv")]


def test_files_of_another_input_and_tables_belong_to_somebody(tmp_path: Path) -> None:
    """``{person}.tsv`` fits ``a_structure.tsv`` and ``people.tsv`` as well."""
    (tmp_path / "study.yaml").write_text(
        "socibrain: 1\nstudy: two\ntitle: Two inputs\npeople: {file: people.tsv}\nbrain:\n"
        "  rest: {files: '{person}.tsv', edges: correlation, negative: drop}\n"
        "  structure: {files: '{person}_structure.tsv', edges: streamlines, negative: refuse}\n"
    )
    for name in ("people.tsv", "a.tsv", "a_structure.tsv", "b_structure.tsv"):
        (tmp_path / name).write_text("1")
    faults = Faults()
    study = read_study(tmp_path / "study.yaml")
    assert [matrix.file for matrix in find_matrices(study, "rest", ["a"], faults)] == ["a.tsv"]
    assert [fault.file for fault in faults] == ["b_structure.tsv"]
