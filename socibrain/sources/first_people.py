"""What a first study file says of people and of whom they name."""

from __future__ import annotations

from pathlib import Path

from socibrain.sources.first_words import fresh_name, one_line, yaml_list, yaml_text
from socibrain.sources.found_tables import (
    ROLE_WORDS,
    SITE_WORDS,
    FoundTables,
    Nominations,
    is_numeric,
    values,
    word_column,
    yes_or_no,
    yes_values,
)
from socibrain.sources.tables import TextTable

WHEN_LEFT_OUT = {
    "invited": "who was to be scanned; everyone when left out",
    "scanned": "who was scanned; whoever has a matrix when left out",
}
SHOWN = 8
"""How many entries of a column a remark lists."""
ANSWERED = """\
  # decide: who answered?  No column was found that says it.  Left as it is, whoever has a row for a
  # question answered it, and an empty row means: named nobody.
"""
TIES = """\
      # decide: when is there a tie?
      # ties: directed         # as named: from the one who names to the one who is named
      # ties: either           # when one of the two names the other
      # ties: both             # when both name each other
"""


def people_lines(found: FoundTables, brains: bool) -> str:
    """The people table; with ``brains``, who was to be scanned and who was."""
    table = found.people
    if table is None:
        return (
            "# decide: there must be a table with one row per person\n"
            "# people:\n#   file: participants.tsv     # with a column participant_id\n"
        )
    lines = ["people:", f"  file: {yaml_text(table.file)}"]
    if found.people_id != "participant_id":
        lines.append(f"  id: {yaml_text(found.people_id)}")
    used = {found.people_id, found.roster[2] if found.roster else ""}
    for entry, words, why in (
        ("site", SITE_WORDS, "the column that says where people could name each other"),
        ("role", ROLE_WORDS, "the column by which brokerage roles are counted"),
    ):
        column = word_column(table, words)
        lines.append(f"  {entry}: {yaml_text(column)}" if column else f"  # {entry}: ...           # {why}")
        used.add(column or "")
    for entry, why in WHEN_LEFT_OUT.items() if brains else ():
        column = word_column(table, (entry,))
        if column:
            used.add(column)
            lines += _chosen(f"  {entry}", table, column)
        else:
            lines += _offered(entry, why, table, used | ({found.answered[2]} if found.answered else set()))
    numbers = [column for column in table.columns if column not in used and is_numeric(table, column)]
    if numbers:
        lines.append(f"  numbers: {yaml_list(numbers)}    # take out codes that only look like numbers")
    return "\n".join(lines) + "\n"


def _offered(entry: str, why: str, table: TextTable, used: set[str]) -> list[str]:
    """A commented entry; for who was scanned, one for each column of yes and no that may say it."""
    fits = [c for c in table.columns if entry == "scanned" and c not in used and yes_or_no(table, c)]
    inside = [f"column: {yaml_text(c)}, values: {yaml_list(yes_values(table, c))}" for c in fits]
    lines = [f"  # {entry}: {{{each}}}" for each in inside or ["column: ..., values: [...]"]]
    return [f"  # {why}", *lines]


def _chosen(entry: str, table: TextTable, column: str, more: str = "") -> list[str]:
    """An entry for the people whose cell says yes; a commented one when no cell does."""
    said = yes_values(table, column)
    inside = f"{{{more}column: {yaml_text(column)}, values: {yaml_list(said)}}}"
    seen = one_line("the column holds " + ", ".join(values(table, column)[:SHOWN]))
    if said:
        return [f"{entry}: {inside}    # {seen}"]
    indent = entry[: len(entry) - len(entry.lstrip())]
    return [f"{indent}# decide which entries mean it; {seen}", f"{indent}# {entry.strip()}: {inside}"]


def roster_lines(found: FoundTables) -> str:
    """The roster, where people name each other."""
    if found.roster is None or not found.nominations:
        return ""
    table, person, name = found.roster
    lines = ["roster:", f"  file: {yaml_text(table.file)}"]
    if person != "participant_id":
        lines.append(f"  person: {yaml_text(person)}")
    lines.append(f"  name: {yaml_text(name)}")
    site = word_column(table, SITE_WORDS)
    if site and found.people and word_column(found.people, SITE_WORDS):
        lines.append(f"  site: {yaml_text(site)}")
    return "\n".join(lines) + "\n"


def questionnaire_lines(found: FoundTables, taken: set[str]) -> str:
    """Who answered, and the questions; their names are put into ``taken``."""
    if not found.nominations:
        return ""
    lines = ["questionnaire:"]
    if found.answered is None:
        first = found.nominations[0]
        where = f"file: {yaml_text(first.table.file)}, person: {yaml_text(first.chooser)}"
        lines += [*ANSWERED.splitlines(), f"  # answered: {{{where}, column: ..., values: [...]}}"]
    else:
        table, person, column = found.answered
        more = f"file: {yaml_text(table.file)}, "
        more += f"person: {yaml_text(person)}, " if person != "participant_id" else ""
        lines += _chosen("  answered", table, column, more)
    lines.append("  # own_answers_missing: from_others    # gives people who did not answer the position "
                 "that others' answers give")  # fmt: skip
    if found.aliases:
        lines.append(f"  aliases: {yaml_text(found.aliases.file)}")
    lines.append("  questions:")
    for each in found.nominations:
        lines += _question(each, fresh_name(Path(each.table.file).stem, taken))
    return "\n".join(lines) + "\n"


def _question(each: Nominations, name: str) -> list[str]:
    columns = "there are so many columns" if each.layout == "wide" else "the most names that one person gave"
    return [
        f"    {name}:",
        "      # decide: the question, word for word",
        "      # asks: ...",
        f"      file: {yaml_text(each.table.file)}",
        f"      layout: {each.layout}",
        f"      chooser: {yaml_text(each.chooser)}",
        f"      chosen: {yaml_text(each.chosen)}",
        *TIES.splitlines(),
        f"      # cap: {each.most}                 # how many names could be given at most; {columns}",
    ]
