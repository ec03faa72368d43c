"""What was found, matched and left out, before anything is measured."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import pandas as pd

from socibrain.cohort.assemble import all_faults, problem_table, read_brains, stand
from socibrain.cohort.gather import Gathered
from socibrain.cohort.ledger import Branch, flow_table, ledger_table
from socibrain.errors import Faults


@dataclass(frozen=True)
class Audit:
    """What a study holds so far.

    ``flow`` and ``ledger`` as in a measured cohort; ``problems`` has one row per fault found;
    ``sites`` one row per site: who answered and is still to answer, who was scanned and is still
    to be scanned; ``names`` one row per question: what became of the written names.
    """

    flow: pd.DataFrame
    ledger: pd.DataFrame
    problems: pd.DataFrame
    sites: pd.DataFrame
    names: pd.DataFrame


def audit_study(
    gathered: Gathered, faults: Faults, *, version: str, workers: int, done: Callable[[int, int], None]
) -> Audit:
    """Look at everything a gathered study names, half collected or whole.

    ``faults`` holds what gathering found; grave ones are on record in ``problems``, not raised.
    """
    brains = read_brains(gathered, version=version, memory=None, workers=workers, measuring=False, done=done)
    branches, leavings = stand(gathered, brains)
    return Audit(
        flow=flow_table(branches, leavings),
        ledger=ledger_table(leavings),
        problems=problem_table(all_faults(faults, brains)),
        sites=_sites(gathered, branches),
        names=_names(gathered.tally),
    )


def _sites(gathered: Gathered, branches: list[Branch]) -> pd.DataFrame:
    """Per site: how many are at each step, and how many are still to come."""
    steps = {(branch.side, label): people for branch in branches for label, people in branch.steps}
    rows = []
    for site in gathered.sites:
        here = {person for person in gathered.people.ids if gathered.site(person) == site}
        here |= {entry.person for entry in gathered.roster if entry.site == site}
        row: dict[str, object] = {"site": site}
        for (side, label), people in steps.items():
            row[label] = len(here & people)
            if (side, label) == ("social", "answered"):
                row["still to answer"] = len(here & steps["social", "on the roster"] - people)
            if (side, label) == ("brain", "scanned"):
                row["still to scan"] = len(here & steps["brain", "invited"] - people)
        rows.append(row)
    return pd.DataFrame(rows)


def _names(tally: pd.DataFrame) -> pd.DataFrame:
    """Per question: how people stand, and what became of the names they wrote; one row per count."""
    if tally.empty:
        return pd.DataFrame(columns=["count"])
    people = tally.groupby(["state", "question"], sort=False).size().unstack(fill_value=0)
    people.index = pd.Index([f"people who {state}" for state in people.index])
    counts = tally.groupby("question", sort=False).sum(numeric_only=True).T.astype(int)
    counts.index = pd.Index([f"names {str(fate).replace('_', ' ')}" for fate in counts.index])
    return pd.concat([people, counts]).rename_axis("count").reset_index()
