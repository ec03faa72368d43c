"""From a study to a measured cohort."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import asdict
from pathlib import Path

import numpy as np
import pandas as pd

from socibrain.cohort.brains import BrainTask, MeasuredBrain, measure_brains
from socibrain.cohort.columns import describe_columns, measure_columns
from socibrain.cohort.gather import Gathered
from socibrain.cohort.ledger import Branch, Leaving, flow_table, ledger_table
from socibrain.cohort.positions import Positions, measure_positions
from socibrain.cohort.standing import brain_branch, lost_scans, single_scans, social_branch
from socibrain.cohort.table import Cohort
from socibrain.errors import Fault, Faults
from socibrain.networks.brain import refuse_odd_sizes

PROBLEM_COLUMNS = ["file", "place", "kind", "found", "mend", "grave"]


def measure_study(
    gathered: Gathered,
    faults: Faults,
    *,
    version: str,
    memory: Path | None,
    workers: int,
    done: Callable[[int, int], None],
) -> Cohort:
    """Read the matrices of a gathered study and measure everything.

    ``faults`` holds what gathering found, ``memory`` is a folder for finished work (None: keep
    nothing), ``done`` is told how many of how many brain networks are measured.  Raises
    `DataRefused` with all grave faults.
    """
    measuring = not faults.any_grave
    brains = read_brains(
        gathered, version=version, memory=memory, workers=workers, measuring=measuring, done=done
    )
    found = all_faults(faults, brains)
    found.refuse_if_grave()
    says = gathered.study.says
    asked = says.questionnaire
    positions = measure_positions(
        gathered.networks,
        seed=says.seed,
        own_answers_missing=asked.own_answers_missing if asked else "undefined",
        version=version,
        memory=memory,
        workers=workers,
    )
    branches, leavings = stand(gathered, brains)
    lost = lost_scans(gathered, brains)
    usable = [brain for brain in brains if brain.key not in lost]
    persons = _persons(gathered, positions, usable)
    return Cohort(
        persons=persons,
        regions=_regions(gathered, usable),
        sites=_sites(gathered, positions, persons),
        partitions=_partitions(usable),
        ledger=ledger_table([*leavings, *positions.leavings]),
        problems=problem_table(found),
        flow=flow_table(branches, leavings),
        columns=describe_columns(gathered, list(persons.columns)),
        social=gathered.networks,
        region_systems=dict(zip(gathered.regions.names, gathered.regions.systems, strict=True))
        if gathered.regions
        else {},
    )


def read_brains(
    gathered: Gathered,
    *,
    version: str,
    memory: Path | None,
    workers: int,
    measuring: bool,
    done: Callable[[int, int], None],
) -> list[MeasuredBrain]:
    """Read every matrix file of the study and, when asked, measure it."""
    tasks = [
        BrainTask(gathered.study, origin, gathered.regions, version, memory, measuring)
        for origin in gathered.matrices
    ]
    return measure_brains(tasks, workers=workers, done=lambda count: done(count, len(tasks)))


def all_faults(gathering: Faults, brains: Sequence[MeasuredBrain]) -> Faults:
    """What gathering found, what is wrong with each matrix, and with their sizes beside each other."""
    sizes: dict[str, list[tuple[str, int]]] = {}
    for brain in brains:
        if brain.region_names:
            sizes.setdefault(brain.origin.source, []).append((brain.origin.file, len(brain.region_names)))
    found = Faults(*gathering, *(fault for brain in brains for fault in brain.faults))
    refuse_odd_sizes(sizes, found)
    return found


def stand(gathered: Gathered, brains: Sequence[MeasuredBrain]) -> tuple[list[Branch], list[Leaving]]:
    """The branches that the study has, and everyone who leaves them."""
    branches: list[Branch] = []
    leavings: list[Leaving] = []
    if gathered.study.says.questionnaire:
        branch, gone = social_branch(gathered)
        branches.append(branch)
        leavings += gone
    if gathered.study.says.brain:
        branch, gone = brain_branch(gathered, brains)
        branches.append(branch)
        leavings += [*gone, *single_scans(gathered, brains)]
    return branches, leavings


def problem_table(faults: Iterable[Fault]) -> pd.DataFrame:
    """All faults, one row each."""
    return pd.DataFrame([asdict(fault) for fault in faults], columns=PROBLEM_COLUMNS)


def _persons(gathered: Gathered, positions: Positions, usable: Sequence[MeasuredBrain]) -> pd.DataFrame:
    """One row per person and visit, in the order of the people table and of the visits."""
    measured: dict[tuple[str, str], dict[str, float]] = {}
    for brain in usable:
        row = measured.setdefault((brain.origin.person, brain.origin.visit), {})
        row |= {f"{brain.origin.source}.{name}": value for name, value in brain.person_values.items()}
    visits = gathered.study.says.visits or ("",)
    keys = []
    for person in gathered.people.ids:
        mine = [(person, visit) for visit in visits if (person, visit) in measured]
        keys += mine or [(person, "")]
    table = pd.DataFrame(keys, columns=["person", "visit"])
    people = gathered.people.table
    for name in ("site", "role", *(n for n in people.columns if n not in ("site", "role"))):
        table[name] = people.loc[table["person"], name].to_numpy()
    for name, values in gathered.scan_values.items():
        table[name] = [values.get(key, values.get((key[0], ""), np.nan)) for key in keys]
    social = positions.persons.reindex(table["person"])
    social.index = table.index
    organised = pd.DataFrame([measured.get(key, {}) for key in keys], index=table.index, dtype=np.float64)
    joined = pd.concat([table, social, organised], axis=1)
    promised = measure_columns(gathered.study.says)
    return joined.reindex(columns=list(dict.fromkeys([*joined.columns, *promised])))


def _regions(gathered: Gathered, usable: Sequence[MeasuredBrain]) -> pd.DataFrame:
    """One row per person, visit and region; columns ``input.measure``."""
    parts: dict[tuple[str, str], pd.DataFrame] = {}
    system = gathered.regions.systems if gathered.regions else None
    for brain in usable:
        key = (brain.origin.person, brain.origin.visit)
        if key not in parts:
            parts[key] = pd.DataFrame({"person": key[0], "visit": key[1], "region": list(brain.region_names)})
            parts[key]["system"] = list(system) if system else ""
        for name, values in brain.region_values.items():
            parts[key][f"{brain.origin.source}.{name}"] = values
    if not parts:
        return pd.DataFrame(columns=["person", "visit", "region", "system"])
    return pd.concat(parts.values(), ignore_index=True)


def _partitions(usable: Sequence[MeasuredBrain]) -> pd.DataFrame:
    """Each region's community in the consensus partition, numbered from 1 within a person."""
    parts = [
        pd.DataFrame(
            {
                "origin": brain.origin.source,
                "person": brain.origin.person,
                "visit": brain.origin.visit,
                "region": list(brain.region_names),
                "community": brain.partition,
            }
        )
        for brain in usable
    ]
    columns = ["origin", "person", "visit", "region", "community"]
    return pd.concat(parts, ignore_index=True) if parts else pd.DataFrame(columns=columns)


def _sites(gathered: Gathered, positions: Positions, persons: pd.DataFrame) -> pd.DataFrame:
    """One row per site: counts, then measures of the site."""
    brain = [name for name in persons.columns if name.split(".")[0] in gathered.study.says.brain]
    in_brain = set(persons.loc[persons[brain].notna().any(axis=1), "person"])
    rows = {}
    for site in gathered.sites:
        people = {person for person in gathered.people.ids if gathered.site(person) == site}
        row = {"people": len(people), "with_brain": len(people & in_brain)}
        mine = [network for network in gathered.networks if network.site == site]
        if mine:
            answered = {p for n in mine for p, spoke in zip(n.people, n.answered, strict=True) if spoke}
            row |= {"on_roster": len(mine[0].people), "answered": len(answered)}
            row["answered_with_brain"] = len(answered & in_brain)
        rows[site] = row
    table = pd.DataFrame.from_dict(rows, orient="index")
    table.index.name = "site"
    return table.join(positions.sites).reset_index()
