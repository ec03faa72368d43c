"""A first study file from what lies in a folder."""

from __future__ import annotations

import json
import os
import re
from collections.abc import Iterator, Sequence
from pathlib import Path

from socibrain.errors import DataRefused, Fault
from socibrain.sources.found_matrices import FilePattern, Look, file_patterns, look_inside
from socibrain.sources.found_tables import (
    REGION_WORDS,
    ROLE_WORDS,
    SITE_WORDS,
    SYSTEM_WORDS,
    FoundTables,
    Nominations,
    find_people,
    find_tables,
    is_numeric,
    values,
    word_column,
    yes_values,
)
from socibrain.sources.tables import TextTable

PASSED_OVER = ("runs", "private")
"""Folders that hold what we wrote, or what nobody should read."""
SHOWN = 8
"""How many entries of a column a remark lists."""

HEAD = """\
# A first study file, made from the names and columns of what lies beside it.
# Where it says `decide`, take the # off the line that is right, or correct it: nobody else can
# know, and the study is refused until it is done.  Check the rest as well: it is guessed.
socibrain: 1
study: {study}
title: {title}
"""
TIES = """\
      # decide: when is there a tie?
      # ties: directed         # as named: from the one who names to the one who is named
      # ties: either           # when one of the two names the other
      # ties: both             # when both name each other
"""
EDGES = """\
    # decide: what is a weight?
    # edges: correlation
    # edges: fisher_z
    # edges: partial_correlation
    # edges: streamlines
    # edges: other
"""
NEGATIVE = """\
    # decide: what becomes of negative weights?
    # negative: drop           # they count as no tie
    # negative: absolute       # they count by their size
    # negative: refuse         # there must not be any
"""
NONE_SEEN = "no negative weight was seen; a file that holds one is refused"


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
        HEAD.format(study=_text(name), title=_text(folder.resolve().name)),
        _people(found),
        _roster(found),
        _questionnaire(found, taken),
        _brain(brains, taken),
        _regions(found, sizes),
        _visits(brains),
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
        for name in sorted(names):
            if name[0] != "." and name.isprintable():
                yield (Path(here) / name).relative_to(folder).as_posix()


def _people(found: FoundTables) -> str:
    table = found.people
    if table is None:
        return (
            "# decide: there must be a table with one row per person\n"
            "# people:\n#   file: participants.tsv     # with a column participant_id\n"
        )
    lines = ["people:", f"  file: {_text(table.file)}"]
    if found.people_id != "participant_id":
        lines.append(f"  id: {_text(found.people_id)}")
    used = {found.people_id, found.roster[2] if found.roster else ""}
    for entry, words, why in (
        ("site", SITE_WORDS, "the column that says where people could name each other"),
        ("role", ROLE_WORDS, "the column by which brokerage roles are counted"),
    ):
        column = word_column(table, words)
        lines.append(f"  {entry}: {_text(column)}" if column else f"  # {entry}: ...           # {why}")
        used.add(column or "")
    for entry in ("invited", "scanned"):
        column = word_column(table, (entry,))
        if column:
            used.add(column)
            lines += _chosen(f"  {entry}", table, column)
    numbers = [column for column in table.columns if column not in used and is_numeric(table, column)]
    if numbers:
        lines.append(f"  numbers: {_list(numbers)}    # take out codes that only look like numbers")
    return "\n".join(lines) + "\n"


def _chosen(entry: str, table: TextTable, column: str, more: str = "") -> list[str]:
    """An entry for the people whose cell says yes; a commented one when no cell does."""
    said = yes_values(table, column)
    inside = f"{{{more}column: {_text(column)}, values: {_list(said)}}}"
    seen = _remark("the column holds " + ", ".join(values(table, column)[:SHOWN]))
    if said:
        return [f"{entry}: {inside}    # {seen}"]
    indent = entry[: len(entry) - len(entry.lstrip())]
    return [f"{indent}# decide which entries mean it; {seen}", f"{indent}# {entry.strip()}: {inside}"]


def _roster(found: FoundTables) -> str:
    if found.roster is None or not found.nominations:
        return ""
    table, person, name = found.roster
    lines = ["roster:", f"  file: {_text(table.file)}"]
    if person != "participant_id":
        lines.append(f"  person: {_text(person)}")
    lines.append(f"  name: {_text(name)}")
    site = word_column(table, SITE_WORDS)
    if site and found.people and word_column(found.people, SITE_WORDS):
        lines.append(f"  site: {_text(site)}")
    return "\n".join(lines) + "\n"


def _questionnaire(found: FoundTables, taken: set[str]) -> str:
    if not found.nominations:
        return ""
    lines = ["questionnaire:"]
    if found.answered:
        table, person, column = found.answered
        more = f"file: {_text(table.file)}, "
        more += f"person: {_text(person)}, " if person != "participant_id" else ""
        lines += _chosen("  answered", table, column, more)
    if found.aliases:
        lines.append(f"  aliases: {_text(found.aliases.file)}")
    lines.append("  questions:")
    for each in found.nominations:
        lines += _question(each, _fresh(Path(each.table.file).stem, taken))
    return "\n".join(lines) + "\n"


def _question(each: Nominations, name: str) -> list[str]:
    columns = "there are so many columns" if each.layout == "wide" else "the most names that one person gave"
    return [
        f"    {name}:",
        "      # decide: the question, word for word",
        "      # asks: ...",
        f"      file: {_text(each.table.file)}",
        f"      layout: {each.layout}",
        f"      chooser: {_text(each.chooser)}",
        f"      chosen: {_text(each.chosen)}",
        *TIES.splitlines(),
        f"      # cap: {each.most}                 # how many names could be given at most; {columns}",
    ]


def _brain(brains: dict[FilePattern, Look], taken: set[str]) -> str:
    if not brains:
        return ""
    lines = ["brain:"]
    with_visits = any(each.visits for each in brains)
    for each, look in brains.items():
        dumb = "" if bool(each.visits) == with_visits else "# "
        if dumb:
            lines.append("  # these names hold no visit, others do: rename the files to use them")
        name = _fresh(_subject(each.pattern), taken)
        body = [f"  {name}:", f"    files: {_text(each.pattern)}    # {len(each.persons)} people"]
        if look.several:
            body += [f"    # decide: {each.files[0]} {_remark(look.trouble)}", "    # variable: ..."]
        else:
            seen = f"in {look.files} of {len(each.files)} files weights are {look.low:.3g} to {look.high:.3g}"
            body.append(f"    # {each.files[0]}: {look.regions} regions; {seen}")
        if look.layout == "edge_list":
            body.append("    layout: edge_list")
            body.append(
                f"    first_index: {look.first_index}         # the lowest region number in that file"
            )
        body += EDGES.splitlines()
        if look.several or look.low < 0:
            body += NEGATIVE.splitlines()
        else:
            body.append(f"    negative: refuse         # {NONE_SEEN}")
        lines += [dumb + line for line in body]
    return "\n".join(lines) + "\n"


def _regions(found: FoundTables, sizes: set[int]) -> str:
    fitting = [table for table in found.regions if len(table.rows) in sizes] or list(found.regions)
    if not fitting:
        return ""
    table = fitting[0]
    lines = [
        "regions:",
        f"  file: {_text(table.file)}    # {len(table.rows)} rows, in the order of the matrices",
    ]
    name = word_column(table, REGION_WORDS)
    if name and name != "name":
        lines.append(f"  name: {_text(name)}")
    system = word_column(table, SYSTEM_WORDS)
    lines.append(
        f"  system: {_text(system)}" if system else "  # system: ...            # which system it is in"
    )
    others = ", ".join(other.file for other in fitting[1:])
    return "\n".join([*lines, *([f"  # or one of {others}"] if others else [])]) + "\n"


def _visits(brains: dict[FilePattern, Look]) -> str:
    visits = sorted({visit for each in brains for visit in each.visits})
    return f"visits: {_list(visits)}\n" if visits else ""


def _exclusions(found: FoundTables, brains: bool) -> str:
    """Commented rules: no limit is set by itself."""
    lines = []
    for table, person, visit, column in found.measured if brains else ():
        lines += [f"#   - file: {_text(table.file)}", f"#     person: {_text(person)}"]
        lines += [f"#     visit: {_text(visit)}"] if visit else []
        lines += [f"#     column: {_text(column)}", "#     above: ...", "#     because: ..."]
    head = "# rules that leave people out, for whoever wants one: set a limit and say why\n# exclusions:\n"
    return head + "\n".join(lines) + "\n" if lines else ""


def _remarks(found: FoundTables, looks: dict[FilePattern, Look], brains: dict[FilePattern, Look]) -> str:
    lines = [f"# not used: {file}" for file in found.unused]
    lines += [
        f"# not used: {each.pattern}: {_remark(look.trouble)}"
        for each, look in looks.items()
        if each not in brains
    ]
    if not brains:
        lines.append("# no matrices were found whose names hold a person's id: there is no `brain:`")
    if not found.nominations:
        lines.append("# no table was found in which people name each other: there is no `questionnaire:`")
    return "\n".join(lines) + "\n" if lines else ""


def _subject(pattern: str) -> str:
    """A name for a brain input: the last word of its path that is no label of person or visit."""
    task = re.search(r"task-([0-9A-Za-z+]+)", pattern)
    if task:
        return task[1]
    words = re.findall(r"[A-Za-z][A-Za-z0-9]*", re.sub(r"\{\w+\}", " ", pattern.rpartition(".")[0]))
    kept = [
        word for word in words if word.casefold() not in ("sub", "ses", "seg", "atlas", "relmat", "visit")
    ]
    return kept[-1] if kept else "brain"


def _fresh(word: str, taken: set[str]) -> str:
    """A name from letters, digits and _ that is not taken yet."""
    name = re.sub(r"[^A-Za-z0-9]+", "_", word).strip("_").lower() or "unnamed"
    number = 1
    while (fresh := name if number == 1 else f"{name}_{number}") in taken:
        number += 1
    taken.add(fresh)
    return fresh


def _remark(text: str) -> str:
    """Text on one line."""
    return " ".join("".join(sign if sign.isprintable() else " " for sign in text).split())


def _text(text: str | None) -> str:
    """Text as YAML reads it back."""
    words = ("true", "false", "null", "yes", "no", "on", "off")
    plain = re.fullmatch(r"[A-Za-z_][A-Za-z0-9_./-]*", text or "") and (text or "").casefold() not in words
    return str(text) if plain else json.dumps(text or "", ensure_ascii=False)


def _list(texts: Sequence[str]) -> str:
    return "[" + ", ".join(map(_text, texts)) + "]"
