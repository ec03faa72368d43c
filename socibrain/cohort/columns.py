"""What every column of the person table holds."""

from __future__ import annotations

from collections.abc import Iterable

from socibrain.cohort.gather import Gathered
from socibrain.cohort.table import Column
from socibrain.measures.catalogue import all_measures
from socibrain.sources.study import StudyFile

KEYS = {
    "person": "person's id in this study",
    "visit": "visit of the scan, empty for people without one",
    "site": "where people could name each other",
    "role": "class by which brokerage roles are counted",
}


def measure_columns(says: StudyFile) -> dict[str, tuple[str, str]]:
    """Origin and measure of every person-scale measure column that the study will have."""
    questions = list(says.questionnaire.questions) if says.questionnaire else []
    found = {}
    for each in all_measures().values():
        if each.scale == "person":
            for origin in questions if each.side == "social" else says.brain:
                found[f"{origin}.{each.name}"] = (origin, each.name)
    return found


def describe_columns(gathered: Gathered, names: Iterable[str]) -> dict[str, Column]:
    """What each of these columns of the person table holds."""
    known = measure_columns(gathered.study.says)
    described = {}
    for name in names:
        if name in known:
            described[name] = _measured(name, *known[name])
        elif name in gathered.scan_values:
            described[name] = _of_scans(name)
        else:
            described[name] = _attribute(gathered, name)
    return described


def _attribute(gathered: Gathered, name: str) -> Column:
    """A column of the people table, in the words of its sidecar."""
    said = gathered.people.labels.get(name, {})
    text = KEYS.get(name) or str(said.get("Description", ""))
    label = str(said.get("LongName", name.replace("_", " ")))
    return Column(name, label, text, str(said.get("Units", "")), "", "not given", "", "", "", None, None)


def _of_scans(name: str) -> Column:
    """A number that an exclusion rule looks at, scan by scan."""
    table, column = name.split(".", 1)
    label = f"{column.replace('_', ' ')} ({table})"
    text = f"column '{column}' of the table of scans '{table}'"
    return Column(name, label, text, "", "", "not given", "", "", table, None, None)


def _measured(name: str, origin: str, measure: str) -> Column:
    passport = all_measures()[measure]
    label = f"{passport.label} ({origin.replace('_', ' ')})"
    return Column(
        name, label, passport.says, passport.unit, passport.reading,
        passport.undefined, passport.source, measure, origin, passport.low, passport.high,
    )  # fmt: skip


def numeric_columns(gathered: Gathered) -> dict[str, bool]:
    """Every column a plan may name, and whether it holds numbers."""
    table = gathered.people.table
    attributes = {str(name): table[name].dtype.kind == "f" for name in table.columns}
    scans = dict.fromkeys(gathered.scan_values, True)
    return attributes | scans | dict.fromkeys(measure_columns(gathered.study.says), True)
