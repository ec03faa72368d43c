"""Who is missing what, and why: the two-branch flow adds up or the run fails."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import asdict, dataclass

import pandas as pd

LEDGER_COLUMNS = ["stage", "side", "person", "site", "visit", "reason"]
FLOW_COLUMNS = ["branch", "step", "label", "people", "left_out", "reasons"]


@dataclass(frozen=True)
class Leaving:
    """One person, one visit of a person, or one site that goes no further, and why.

    ``stage`` is the label of the step that is not reached; ``person`` is '' when a whole site is
    meant, ``visit`` '' when the person as a whole is.
    """

    stage: str
    side: str
    person: str
    site: str
    visit: str
    reason: str


@dataclass(frozen=True)
class Branch:
    """One branch of the flow: who is at each step, from first to last."""

    side: str
    steps: tuple[tuple[str, frozenset[str]], ...]


def ledger_table(leavings: Sequence[Leaving]) -> pd.DataFrame:
    """All leavings, one row each, in the order of the flow."""
    return pd.DataFrame([asdict(each) for each in leavings], columns=LEDGER_COLUMNS, dtype=object)


def flow_table(branches: Sequence[Branch], leavings: Sequence[Leaving]) -> pd.DataFrame:
    """Counts at every step of each branch, with a last row for those who are at the end of all.

    Columns: branch, step (from 1), label, people, left_out, reasons.  Raises `AssertionError` when
    a step's people, counted one by one, are not the step before less those the ledger names.

    >>> start, end = frozenset("abc"), frozenset("ab")
    >>> gone = [Leaving("answered", "social", "c", "north", "", "did not answer")]
    >>> flow = flow_table([Branch("social", (("on the roster", start), ("answered", end)))], gone)
    >>> flow[["label", "people", "left_out", "reasons"]].to_numpy().tolist()
    [['on the roster', 3, 0, ''], ['answered', 2, 1, 'did not answer: 1']]
    """
    rows: list[list[object]] = []
    for branch in branches:
        before: frozenset[str] | None = None
        for number, (label, people) in enumerate(branch.steps, start=1):
            reasons: Counter[str] = Counter()
            if before is not None:
                reasons = _reasons(branch.side, label, before, people, leavings)
            told = "; ".join(f"{reason}: {count}" for reason, count in reasons.most_common())
            rows.append([branch.side, number, label, len(people), reasons.total(), told])
            before = people
    if len(branches) > 1:
        rows.append(_in_all(branches))
    return pd.DataFrame(rows, columns=FLOW_COLUMNS)


def _reasons(
    side: str, label: str, before: frozenset[str], people: frozenset[str], leavings: Sequence[Leaving]
) -> Counter[str]:
    gone = [
        each for each in leavings if (each.side, each.stage, each.visit) == (side, label, "") and each.person
    ]
    named = [each.person for each in gone]
    if not people <= before:
        raise AssertionError(f"{side}: people appear at '{label}' who were not there before")
    if sorted(named) != sorted(before - people):
        raise AssertionError(
            f"{side}: {len(before)} people before '{label}' and {len(people)} after, "
            f"but the ledger names {len(named)}"
        )
    return Counter(each.reason for each in gone)


def _in_all(branches: Sequence[Branch]) -> list[object]:
    ends = [branch.steps[-1][1] for branch in branches]
    shared = frozenset.intersection(*ends)
    anywhere = frozenset.union(*ends)
    only = [
        f"only in the {b.side} branch: {len(end - shared)}" for b, end in zip(branches, ends, strict=True)
    ]
    return ["both", 1, "in both", len(shared), len(anywhere - shared), "; ".join(only)]
