"""A first study file from what lies in a folder."""

from __future__ import annotations

import os
import re
from collections.abc import Iterator
from pathlib import Path

from socibrain.errors import DataRefused, Fault
from socibrain.sources.first_brain import brain_lines, regions_lines, visits_line
from socibrain.sources.first_people import people_lines, questionnaire_lines, roster_lines
from socibrain.sources.first_words import one_line, yaml_text
from socibrain.sources.found_matrices import FilePattern, Look, file_patterns, look_inside
from socibrain.sources.found_tables import FoundTables, find_people, find_tables

PASSED_OVER = ("runs", "private")
"""Folders that hold what we wrote, or what nobody should read."""
OURS = ({"run.json"}, {"ledger.json", "flow.json"})
"""What a folder holds that a run or an audit wrote, whatever it is called."""

HEAD = """\
# A first study file, made from the names and columns of what lies beside it.
# Where it says `decide`, take the # off the line that is right, or correct it: nobody else can
# know, and the study is refused until it is done.  Check the rest as well: it is guessed.
socibrain: 1
study: {study}
title: {title}
"""


def begin(folder: Path) -> str:
    """The text of a first study file for what lies in ``folder``, with comments.

    What cannot be known from names and columns (the tie rule, what a weight is, …) is left as
    commented lines to choose from, so that `read_study` refuses the file until they are decided.
    Raises `DataRefused` when there is no such folder, when it has a study file already, or when
    nothing in it looks like a part of a study.
    """
    target = folder / "study.yaml"
    if not folder.is_dir():
        raise DataRefused(
            Fault(str(folder), "", "missing-folder", "there is no such folder", "check the path")
        )
    if target.exists():
        raise DataRefused(
            Fault(
                str(target), "", "exists", "there is a study file already", "edit it, or move it away first"
            )
        )
    files = list(_files(folder))
    people = find_people(folder, files)
    patterns = file_patterns(files, people[0].column(people[1]) if people else ())
    looks = {each: look_inside(folder, each) for each in patterns}
    sizes = {look.regions for look in looks.values()}
    brains = {each: look for each, look in looks.items() if look.layout or look.several}
    personal = {file for each in patterns if each in brains or len(each.persons) > 1 for file in each.files}
    found = find_tables(folder, [file for file in files if file not in personal], people, sizes)
    if not (people or brains or found.regions):
        found_not = "holds no table of people and no matrices named by person"
        mend = "put participants.tsv with a column participant_id into it"
        raise DataRefused(Fault(str(folder), "", "nothing-found", found_not, mend))
    name = re.sub(r"[^A-Za-z0-9_-]+", "_", folder.resolve().name).strip("_") or "study"
    taken: set[str] = set()
    parts = [
        HEAD.format(study=yaml_text(name), title=yaml_text(folder.resolve().name)),
        people_lines(found, bool(brains)),
        roster_lines(found),
        questionnaire_lines(found, taken),
        brain_lines(brains, taken),
        regions_lines(found, sizes),
        visits_line(brains),
        _exclusions(found, bool(brains)),
        _remarks(found, looks, brains),
    ]
    return "\n".join(part for part in parts if part)


def _files(folder: Path) -> Iterator[str]:
    """Paths of all files from the folder, in order; hidden folders and our own are passed over."""
    for here, folders, names in os.walk(folder):
        folders[:] = sorted(
            name for name in folders if name[0] != "." and name.isprintable() and name not in PASSED_OVER
        )
        if Path(here) != folder and any(marks <= set(names) for marks in OURS):
            folders.clear()
            continue
        for name in sorted(names):
            if name[0] != "." and name.isprintable():
                yield (Path(here) / name).relative_to(folder).as_posix()


def _exclusions(found: FoundTables, brains: bool) -> str:
    """Commented rules: no limit is set by itself."""
    lines = []
    for table, person, visit, column in found.measured if brains else ():
        lines += [f"#   - file: {yaml_text(table.file)}", f"#     person: {yaml_text(person)}"]
        lines += [f"#     visit: {yaml_text(visit)}"] if visit else []
        lines += [f"#     column: {yaml_text(column)}", "#     above: ...", "#     because: ..."]
    head = "# rules that leave people out, for whoever wants one: set a limit and say why\n# exclusions:\n"
    return head + "\n".join(lines) + "\n" if lines else ""


def _remarks(found: FoundTables, looks: dict[FilePattern, Look], brains: dict[FilePattern, Look]) -> str:
    lines = [f"# not used: {file}" for file in found.unused]
    lines += [
        f"# not used: {each.pattern}: {one_line(look.trouble)}"
        for each, look in looks.items()
        if each not in brains
    ]
    if not brains:
        lines.append("# no matrices were found whose names hold a person's id: there is no `brain:`")
    if not found.nominations:
        lines.append("# no table was found in which people name each other: there is no `questionnaire:`")
    return "\n".join(lines) + "\n" if lines else ""
