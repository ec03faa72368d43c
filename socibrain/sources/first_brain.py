"""What a first study file says of matrices and regions."""

from __future__ import annotations

import re

from socibrain.sources.first_words import fresh_name, one_line, yaml_list, yaml_text
from socibrain.sources.found_matrices import FilePattern, Look
from socibrain.sources.found_tables import REGION_WORDS, SYSTEM_WORDS, FoundTables, word_column

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


MORE = """\
    # dead_regions: exclude_person    # leaves people with a dead region out; left as it is, they are refused
    # communities: {resolution: 1, restarts: 50}    # these hold when left as it is
"""


def brain_lines(brains: dict[FilePattern, Look], taken: set[str]) -> str:
    """The brain inputs, one for each pattern of file names; their names are put into ``taken``."""
    if not brains:
        return ""
    lines = ["brain:"]
    with_visits = any(each.visits for each in brains)
    for each, look in brains.items():
        dumb = "" if bool(each.visits) == with_visits else "# "
        if dumb:
            lines.append("  # these names hold no visit, others do: rename the files to use them")
        name = fresh_name(_subject(each.pattern), taken)
        body = [f"  {name}:", f"    files: {yaml_text(each.pattern)}    # {len(each.persons)} people"]
        if look.several:
            body += [f"    # decide: {each.files[0]} {one_line(look.trouble)}", "    # variable: ..."]
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
        body += MORE.splitlines()
        lines += [dumb + line for line in body]
    return "\n".join(lines) + "\n"


def regions_lines(found: FoundTables, sizes: set[int]) -> str:
    """The region table: the first with as many rows as a matrix, or the first of all."""
    fitting = [table for table in found.regions if len(table.rows) in sizes] or list(found.regions)
    if not fitting:
        return ""
    table = fitting[0]
    lines = [
        "regions:",
        f"  file: {yaml_text(table.file)}    # {len(table.rows)} rows, in the order of the matrices",
    ]
    name = word_column(table, REGION_WORDS)
    if name and name != "name":
        lines.append(f"  name: {yaml_text(name)}")
    system = word_column(table, SYSTEM_WORDS)
    lines.append(
        f"  system: {yaml_text(system)}" if system else "  # system: ...            # which system it is in"
    )
    others = ", ".join(other.file for other in fitting[1:])
    return "\n".join([*lines, *([f"  # or one of {others}"] if others else [])]) + "\n"


def visits_line(brains: dict[FilePattern, Look]) -> str:
    """All visits that file names hold, in alphabetical order."""
    visits = sorted({visit for each in brains for visit in each.visits})
    return f"visits: {yaml_list(visits)}\n" if visits else ""


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
