"""Brain inputs guessed from the names of the files in a folder."""

from __future__ import annotations

import re
from collections import Counter, defaultdict
from collections.abc import Collection, Iterable, Sequence
from dataclasses import dataclass, replace
from pathlib import Path, PurePosixPath

import numpy as np
from numpy.typing import NDArray

from socibrain.errors import Faults
from socibrain.sources.matrix_arrays import SUFFIXES, read_array
from socibrain.sources.matrix_files import RELATION
from socibrain.sources.matrix_text import read_numbers

TEXT_SUFFIXES = (".tsv", ".csv", ".txt", ".edgelist", ".edges")
LOOKED_AT = 8
"""Files of one pattern that are read to guess what all of them hold."""
LABEL = r"[0-9A-Za-z+]+"
VISIT = re.compile(
    rf"(?<![0-9A-Za-z{{])(?P<word>ses-|(?:session|visit|wave|time|scan|v|t|w)[-_]?(?=[0-9]))(?P<value>{LABEL})"
    rf"(?![0-9A-Za-z}}])|(?<![0-9A-Za-z])(?P<alone>pre|post|baseline|followup)(?![0-9A-Za-z])",
    re.IGNORECASE,
)
BARE_NUMBER = re.compile(r"(?<![0-9A-Za-z{-])[0-9]{1,2}(?![0-9A-Za-z}])")


@dataclass(frozen=True)
class FilePattern:
    """Files whose paths differ by person (and visit) only."""

    pattern: str
    files: tuple[str, ...]
    persons: frozenset[str]
    visits: tuple[str, ...]


@dataclass(frozen=True)
class Look:
    """What the matrix files of a pattern look like inside; ``trouble`` says why the first is no network.

    ``low`` and ``high`` are the lowest and highest weight in the ``files`` that were looked at, all
    else is of the first.
    """

    layout: str = ""
    regions: int = 0
    low: float = 0.0
    high: float = 0.0
    first_index: int = 0
    trouble: str = ""
    several: bool = False
    """Whether the file holds several arrays; ``trouble`` then lists them."""
    files: int = 1


def file_patterns(files: Iterable[str], ids: Collection[str]) -> list[FilePattern]:
    """Patterns with ``{person}`` and ``{visit}`` that stand for the files' paths, most people first.

    Without ids, BIDS labels (``sub-...``) are taken for them.  A file belongs to the pattern that
    holds the most people.

    >>> files = ["b/7_ses-1.npy", "b/7_ses-2.npy", "b/8_ses-1.npy"]
    >>> [each.pattern for each in file_patterns(files, ["7", "8"])]
    ['b/{person}_ses-{visit}.npy']
    """
    wanted = [file for file in files if PurePosixPath(file).suffix.lower() in (*SUFFIXES, *TEXT_SUFFIXES)]
    known = ids or {label for file in wanted for label in re.findall(rf"sub-{LABEL}", file)}
    if not known:
        return []
    anybody = re.compile(
        "(?<![0-9A-Za-z])(?:"
        + "|".join(map(re.escape, sorted(known, key=len, reverse=True)))
        + ")(?![0-9A-Za-z])"
    )
    readings = {file: _readings(file, anybody) for file in wanted}
    people: defaultdict[str, set[str]] = defaultdict(set)
    for choices in readings.values():
        for pattern, person in choices:
            people[_in_one_order(_with_visit(pattern)[0])].add(person)
    groups: defaultdict[str, list[_Reading]] = defaultdict(list)
    for file, choices in readings.items():
        told = [_Reading(file, person, *_with_visit(pattern)) for pattern, person in choices]
        if told:
            best = max(told, key=lambda each: len(people[_in_one_order(each.pattern)]))
            groups[_in_one_order(best.pattern)].append(best)
    found = _joined_by_number([_pattern(rows) for rows in groups.values()])
    return sorted(found, key=lambda each: (-len(each.persons), each.pattern))


def look_inside(folder: Path, files: FilePattern) -> Look:
    """Read up to eight files of a pattern, spread over all of them, and say what they hold."""
    last = len(files.files) - 1
    places = np.linspace(0, last, min(LOOKED_AT, last + 1)).round().astype(int)
    first, *others = (_look_at(folder, files.files[place]) for place in places)
    alike = [first, *(look for look in others if first.layout and look.layout == first.layout)]
    low, high = min(look.low for look in alike), max(look.high for look in alike)
    return replace(first, low=low, high=high, files=len(alike))


def _look_at(folder: Path, file: str) -> Look:
    """Read one file, and say what it holds."""
    faults = Faults()
    content = (folder / file).read_bytes()
    suffix = PurePosixPath(file).suffix.lower()
    if suffix in SUFFIXES:
        weights = read_array(content, suffix, None, file, faults)
    else:
        table = read_numbers(content, file, faults)
        weights = None if table is None else table.values
        if table is not None and not table.names and _is_edge_list(table.values):
            ends = table.values[:, :2]
            first = min(1, int(ends.min()))
            seen = int(ends.max()) - first + 1
            low, high = table.values[:, 2].min(), table.values[:, 2].max()
            return Look("edge_list", seen, float(low), float(high), first)
    if weights is None:
        fault = next(iter(faults))
        return Look(trouble=fault.found, several="several" in fault.found)
    if weights.ndim != 2 or weights.shape[0] != weights.shape[1]:
        return Look(trouble=f"is {' × '.join(map(str, weights.shape))}, not square")
    beside = weights[~np.eye(len(weights), dtype=bool)]
    beside = beside[np.isfinite(beside)]
    if not len(beside):
        return Look(trouble="holds no numbers")
    return Look("matrix", len(weights), float(beside.min()), float(beside.max()))


@dataclass(frozen=True)
class _Reading:
    """One way to read one path."""

    file: str
    person: str
    pattern: str
    visit: str


def _readings(file: str, anybody: re.Pattern[str]) -> list[tuple[str, str]]:
    """Every way to read a path as a pattern and a person; first the one with the id once in each part."""
    places: defaultdict[tuple[str, str], list[re.Match[str]]] = defaultdict(list)
    for match in anybody.finditer(file):
        word = re.search(r"([A-Za-z]+)-$", file[: match.start()])
        places[match[0], word[1] if word else ""].append(match)
    readings = []
    for (person, _), matches in places.items():
        once = {file[: match.start()].count("/"): match for match in reversed(matches)}
        readings.append((_holed(file, [once[depth] for depth in sorted(once)]), person))
        if len(matches) > 1:
            readings += [(_holed(file, [match]), person) for match in matches]
    return readings


def _holed(file: str, matches: Sequence[re.Match[str]]) -> str:
    for match in reversed(matches):
        file = file[: match.start()] + "{person}" + file[match.end() :]
    return file


def _with_visit(pattern: str) -> tuple[str, str]:
    """The pattern with ``{visit}`` where it names one, and the visit; as it is, and '', without."""
    first = VISIT.search(pattern)
    if first is None:
        return pattern, ""
    visit = first["value"] or first["alone"]

    def hole(match: re.Match[str]) -> str:
        same = (match["value"] or match["alone"]) == visit
        return (match["word"] or "") + "{visit}" if same else match[0]

    return VISIT.sub(hole, pattern), visit


def _in_one_order(pattern: str) -> str:
    """What the names of one relation matrix have in common: their entities may stand in any order."""
    if not pattern.endswith(RELATION):
        return pattern
    folder, slash, name = pattern.rpartition("/")
    entities = name.removesuffix(RELATION).replace("seg-", "atlas-").split("_")
    return folder + slash + "_".join(sorted(entities)) + RELATION


def _pattern(rows: list[_Reading]) -> FilePattern:
    """The pattern of files that belong together: with visits where there are several to tell apart."""
    shared = Counter(row.pattern for row in rows).most_common(1)[0][0]
    visits = tuple(sorted({row.visit for row in rows}))
    persons = frozenset(row.person for row in rows)
    files = tuple(sorted(row.file for row in rows))
    if "{visit}" in shared and (len(visits) > 1 or "ses-{visit}" in shared):
        return FilePattern(shared, files, persons, visits)
    return FilePattern(shared.replace("{visit}", visits[0]), files, persons, ())


def _joined_by_number(patterns: list[FilePattern]) -> list[FilePattern]:
    """Patterns that differ in one bare number only are visits of one pattern."""
    plain = [each for each in patterns if "{visit}" not in each.pattern]
    holed = {each: BARE_NUMBER.sub("{visit}", each.pattern, count=1) for each in plain}
    times = Counter(holed.values())
    joined: dict[str, FilePattern] = {}
    for each in plain:
        shared = holed[each]
        if times[shared] < 2:
            joined[each.pattern] = each
            continue
        match = BARE_NUMBER.search(each.pattern)
        visits = (match[0],) if match else ()
        before = joined.get(shared, replace(each, pattern=shared, persons=frozenset(), visits=()))
        joined[shared] = replace(
            before,
            persons=before.persons | each.persons,
            visits=tuple(sorted({*before.visits, *visits})),
            files=tuple(sorted({*before.files, *each.files})),
        )
    return [each for each in patterns if "{visit}" in each.pattern] + list(joined.values())


def _is_edge_list(values: NDArray[np.float64]) -> bool:
    if values.shape[1] != 3 or values.shape[0] == 3:
        return False
    ends = values[:, :2]
    return bool(np.isfinite(values).all() and (ends >= 0).all() and (ends == np.floor(ends)).all())
