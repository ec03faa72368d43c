"""The demo cohort: its script still makes the committed files, and its README tells the truth about them."""

from __future__ import annotations

import csv
import subprocess
import sys
from collections import Counter
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from rapidfuzz.distance import Levenshtein

ROOT = Path(__file__).parents[1]
COHORT = ROOT / "demo_cohort"
DATA = {".tsv", ".json"}
SLIP = 2
"""A written text this many edits from a name of the station is that name misspelt."""


def data_files(folder: Path) -> dict[str, bytes]:
    return {
        str(path.relative_to(folder)): path.read_bytes()
        for path in sorted(folder.rglob("*"))
        if path.suffix in DATA and "private" not in path.relative_to(folder).parts
    }


@cache
def rows(name: str) -> list[dict[str, str]]:
    with (COHORT / name).open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file, delimiter="\t", quoting=csv.QUOTE_NONE))


@cache
def matrices() -> dict[tuple[str, str], np.ndarray]:
    found = {}
    for path in sorted((COHORT / "brain").iterdir()):
        person, visit = path.name.split("_")[:2]
        found[person, visit.removeprefix("ses-")] = np.loadtxt(path)
    return found


def readme_tables() -> dict[str, list[int]]:
    """First cell -> whole numbers in the other cells, for every table row that holds only numbers."""
    found = {}
    for line in (COHORT / "README.md").read_text(encoding="utf-8").splitlines():
        cells = [cell.strip() for cell in line.strip().strip("|").split("|")]
        if line.startswith("|") and len(cells) > 1 and all(cell.isdigit() for cell in cells[1:]):
            found[cells[0]] = [int(cell) for cell in cells[1:]]
    return found


def written(question: str) -> list[tuple[str, str]]:
    """(chooser, written text) in file order."""
    if question == "advice":
        pairs = [(row["participant_id"], row["turns_to"]) for row in rows("social/advice.tsv")]
    else:
        pairs = [
            (row["participant_id"], text)
            for row in rows("social/free_time.tsv")
            for column, text in row.items()
            if column.startswith("companion_")
        ]
    return [(chooser, text) for chooser, text in pairs if text != "n/a"]


def what_went_wrong(question: str) -> Counter[str]:
    """Every answer sorted by what is wrong with it, from the files alone."""
    station = {row["participant_id"]: row["station"] for row in rows("roster.tsv")}
    crew = {(row["station"], row["written_name"]): row["participant_id"] for row in rows("roster.tsv")}
    nickname = {(row["site"], row["written"]): row["person"] for row in rows("aliases.tsv")}
    anywhere = {name for _, name in crew}
    plain = {(site, " ".join(name.lower().split())): person for (site, name), person in crew.items()}
    counts: Counter[str] = Counter()
    seen: set[tuple[str, str]] = set()
    for chooser, text in written(question):
        counts["names written"] += 1
        here = station[chooser]
        tidy = (here, " ".join(text.lower().split()))
        person = crew.get((here, text)) or nickname.get((here, text)) or plain.get(tidy)
        if (here, text) in nickname:
            counts["nicknames"] += 1
        elif person and (here, text) not in crew:
            counts["other capitals or spaces"] += 1
        if person == chooser:
            counts["oneself"] += 1
        elif person and (chooser, person) in seen:
            counts["somebody named twice"] += 1
        elif person:
            seen.add((chooser, person))
        elif text in anywhere:
            counts["somebody of another station"] += 1
        elif any(Levenshtein.distance(text, name) <= SLIP for site, name in crew if site == here):
            counts["misspelt names"] += 1
        else:
            counts["nobody on any roster"] += 1
    named = {chooser for chooser, _ in written(question)}
    answered = {row["participant_id"] for row in rows("roster.tsv") if row["answered"] == "yes"}
    assert named <= answered
    counts["answered and named nobody"] = len(answered - named)
    return counts


def whole_cohort() -> dict[str, int]:
    people, scans = rows("participants.tsv"), rows("scans.tsv")
    moved = [scan for scan in scans if float(scan["mean_framewise_displacement"]) > 0.5]
    return {
        "people": len(people),
        "stations": len({row["station"] for row in people}),
        "answered": sum(row["answered"] == "yes" for row in rows("roster.tsv")),
        "invited to the scanner": sum(row["invited"] == "yes" for row in people),
        "scanned": sum(row["scanned"] == "yes" for row in people),
        "scanned twice": sum(scan["visit"] == "2" for scan in scans),
        "scans": len(scans),
        "scans with too much motion, first visit": sum(scan["visit"] == "1" for scan in moved),
        "scans with too much motion, second visit": sum(scan["visit"] == "2" for scan in moved),
        "scans with a dead region": sum(not weights.any(axis=1).all() for weights in matrices().values()),
        "ages missing": sum(row["age"] == "n/a" for row in people),
        "nicknames known": len(rows("aliases.tsv")),
    }


def test_the_script_makes_the_committed_files_byte_for_byte(tmp_path: Path) -> None:
    subprocess.run([sys.executable, "-m", "demo_cohort.make", "--out", tmp_path], cwd=ROOT, check=True)
    made, committed = data_files(tmp_path), data_files(COHORT)
    assert made.keys() == committed.keys()
    assert [name for name in made if made[name] != committed[name]] == []


def test_the_cohort_is_small_enough_to_keep() -> None:
    assert sum(map(len, data_files(COHORT).values())) <= 12_000_000


@pytest.mark.parametrize("column", [0, 1], ids=["advice", "free_time"])
def test_readme_counts_what_went_wrong_in_the_answers(column: int) -> None:
    found = what_went_wrong(["advice", "free_time"][column])
    told = {what: numbers[column] for what, numbers in readme_tables().items() if len(numbers) == 2}
    assert told == dict(found)


def test_readme_counts_the_cohort() -> None:
    assert {
        what: numbers[0] for what, numbers in readme_tables().items() if len(numbers) == 1
    } == whole_cohort()


def test_one_person_moved_station() -> None:
    """All who are named from another station are one person, now on the roster of Mirrowick."""
    name = {row["written_name"]: row["participant_id"] for row in rows("roster.tsv")}
    station = {row["participant_id"]: row["station"] for row in rows("roster.tsv")}
    moves = {
        (name[text], station[chooser], station[name[text]])
        for question in ("advice", "free_time")
        for chooser, text in written(question)
        if text in name and station[name[text]] != station[chooser]
    }
    assert [(left, joined) for _, left, joined in moves] == [("Brevolk", "Mirrowick")]


def test_tables_agree_about_who_there_is() -> None:
    people = {row["participant_id"]: row for row in rows("participants.tsv")}
    assert len(people) == len(rows("participants.tsv"))
    assert {"sub-007", "sub-NA", "sub-1e5"} <= set(people)
    assert {row["participant_id"]: row["station"] for row in rows("roster.tsv")} == {
        person: row["station"] for person, row in people.items()
    }
    scans = {(row["participant_id"], row["visit"]) for row in rows("scans.tsv")}
    assert scans == set(matrices())
    assert {person for person, _ in scans} == {p for p, row in people.items() if row["scanned"] == "yes"}
    assert all(row["invited"] == "yes" for row in people.values() if row["scanned"] == "yes")


def test_nobody_names_more_than_six() -> None:
    for question in ("advice", "free_time"):
        assert max(Counter(chooser for chooser, _ in written(question)).values()) == 6


def test_weights_look_like_correlations() -> None:
    regions = rows("regions.tsv")
    assert len({row["name"] for row in regions}) == len(regions) == 80
    assert Counter(Counter(row["system"] for row in regions).values()) == {10: 8}
    below_zero = []
    for weights in matrices().values():
        assert weights.shape == (80, 80)
        assert (weights == weights.T).all()
        off_diagonal = weights[~np.eye(80, dtype=bool)]
        assert np.abs(off_diagonal).max() < 1
        below_zero.append((off_diagonal < 0).mean())
    assert 0 < np.mean(below_zero) < 0.03
