"""Tables of what could not be used, each person counted once; small cells hidden."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Collection, Mapping

import pandas as pd

from socibrain.cohort.table import Column
from socibrain.link.finding import Findings
from socibrain.report.fault_words import fault_in_words
from socibrain.report.notation import FEW, breakdown, count, is_small
from socibrain.report.tables import Rows
from socibrain.report.words import titled

SIDES = {"social": "questionnaire", "brain": "brain", "both": "both"}
_NEXT_REASON = re.compile(r"; (?![^()]*\))")
"""Between two reasons; a semicolon inside brackets belongs to its reason."""
_COLUMN = re.compile(r"^'([^']+)'(?=: )")
_INPUT = re.compile(r" in (\w+)$")


def exclusion_rows(ledger: pd.DataFrame) -> Rows:
    """People who go no further, by stage and reason; then people who lose one visit only."""
    people = ledger[(ledger["person"].fillna("") != "") & ledger["side"].isin(list(SIDES))]
    one_visit = people["visit"].fillna("") != ""
    rows: list[tuple[str, ...]] = []
    for part, what in ((people[~one_visit], ""), (people[one_visit], ", at one of their visits")):
        for (side, stage), group in part.groupby(["side", "stage"], sort=False):
            step = _INPUT.sub(r" in “\1”", str(stage)) + what
            rows += [(SIDES[str(side)], step, reason, shown) for reason, shown in _by_reason(group)]
    return Rows(("Side", "Step not reached", "Reason", "People"), tuple(rows))


def site_loss_rows(
    ledger: pd.DataFrame, columns: Mapping[str, Column], named: Collection[str] | None = None
) -> Rows:
    """Sites where a measure has no value for anybody; of the measures ``named`` only, when given."""
    number = Counter((stage, reason) for stage, reason, _ in _site_losses(ledger))
    rows = [
        (titled(stage, columns), reason, count(times))
        for (stage, reason), times in number.items()
        if named is None or stage in named
    ]
    return Rows(("Measure without a value", "Reason", "Sites"), tuple(rows))


def other_losses(ledger: pd.DataFrame, named: Collection[str]) -> int:
    """How many measures that are not ``named`` have no value in some site."""
    return len({stage for stage, _, _ in _site_losses(ledger)} - set(named))


def left_out_rows(findings: Findings, columns: Mapping[str, Column]) -> Rows:
    """People whom a family of hypotheses had to leave out, each once, by the first of their reasons.

    The family stands in front where a plan has several.
    """
    left_out = findings.left_out
    first = [_with_label(_NEXT_REASON.split(str(told))[0], columns) for told in left_out["reason"]]
    rows = [
        (str(family), reason, shown)
        for family, group in left_out.assign(reason=first).groupby("family", sort=False)
        for reason, shown in _by_reason(group)
    ]
    headings = ("Family", "Reason", "People")
    if len({each.hypothesis.family for each in findings.findings}) > 1:
        return Rows(headings, tuple(rows))
    return Rows(headings[1:], tuple(row[1:] for row in rows))


def analysed(findings: Findings) -> list[str]:
    """One sentence for each family: how many of the study's people it could use."""
    lost = findings.left_out.groupby("family")["person"].nunique()
    size = {each.hypothesis.family: each.n for each in findings.findings}
    told = []
    for family, used in size.items():
        gone = int(lost.get(family, 0))
        several = f"Family “{family}”: " if len(size) > 1 else ""
        if is_small(gone):
            told.append(f"{several}{count(used)} people analysed, fewer than five could not be used.")
        else:
            told.append(
                f"{several}{count(used + gone)} people of the study − {count(gone)} who could not be used "
                f"= {count(used)} analysed."
            )
    return told


def problem_rows(problems: pd.DataFrame) -> Rows:
    """Faults found in the inputs, by kind."""
    number = problems.groupby("kind", sort=False).size().sort_values(ascending=False, kind="stable")
    rows = [
        (fault_in_words(str(kind)), FEW if is_small(int(places)) else count(places))
        for kind, places in zip(number.index, number, strict=True)
    ]
    return Rows(("What was found", "Places"), tuple(rows))


def _site_losses(ledger: pd.DataFrame) -> list[tuple[str, str, str]]:
    """Measure, reason, site: each once."""
    sites = ledger[ledger["person"].fillna("") == ""]
    single = zip(sites["stage"], sites["reason"], sites["site"], strict=True)
    return list(dict.fromkeys((str(stage), str(reason), str(site)) for stage, reason, site in single))


def _with_label(reason: str, columns: Mapping[str, Column]) -> str:
    """A reason that begins with a quoted column name, with the column's label there."""
    return _COLUMN.sub(lambda found: titled(found[1], columns), reason)


def _by_reason(people: pd.DataFrame) -> list[tuple[str, str]]:
    """Each reason with its people, most frequent first; a person counts once a reason."""
    number = people.groupby("reason", sort=False)["person"].nunique()
    number = number.sort_values(ascending=False, kind="stable")
    shown = breakdown([int(each) for each in number])
    return [(str(reason), each) for reason, each in zip(number.index, shown, strict=True)]
