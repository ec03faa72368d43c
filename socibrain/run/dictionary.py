"""What the columns of every table of a run hold: the data dictionaries beside them."""

from __future__ import annotations

import pandas as pd

from socibrain.cohort.table import Column
from socibrain.measures.catalogue import all_measures

Said = dict[str, dict[str, object]]

LEDGER_SAYS = {
    "stage": "step of the flow that is not reached, or the measure or family that has no value",
    "side": "social, brain or link",
    "person": "person's id, empty when a whole site is meant",
    "site": "the person's site",
    "visit": "visit, empty when the person as a whole is meant",
    "reason": "why",
}
PROBLEMS_SAY = {
    "file": "file as the study writes it",
    "place": "line, column or cell inside it, empty for the file as a whole",
    "kind": "the same for all faults of a kind",
    "found": "what was found",
    "mend": "how to mend it",
    "grave": "whether it stops measure and link",
}
FLOW_SAYS = {
    "branch": "social, brain, or both",
    "step": "place of the step in its branch, from 1",
    "label": "what people of this step have reached",
    "people": "people at this step",
    "left_out": "people of the step before who are not",
    "reasons": "why, with counts that add up to left_out",
}
KEYS_SAY = {
    "site": "where people could name each other",
    "people": "people of the site in the people table",
    "with_brain": "of them, people with at least one usable brain network",
    "on_roster": "people of the site who could be named",
    "answered": "of them, people who answered",
    "answered_with_brain": "people who answered with at least one usable brain network",
    "person": "person's id in this study",
    "visit": "visit of the scan, empty in studies without visits",
    "region": "region's name",
    "system": "system of the region, empty where none is declared",
    "origin": "brain input of the study file",
    "community": "community of the region in the consensus partition, numbered from 1 within a person",
}
FINDINGS_SAY = {
    "id": "hypothesis", "scale": "what a unit is", "outcome": "column of persons.csv",
    "predictor": "column of persons.csv", "adjust": "adjustments", "n": "people analysed",
    "n_sites": "sites analysed",
    "estimate": "standardised within-site slope: within-site SDs of outcome per within-site SD of predictor",
    "raw_estimate": "within-site slope in the units of the columns",
    "se": "standard error of estimate", "ci_low": "lower end of the interval of estimate (1 - alpha)",
    "ci_high": "upper end of the same", "statistic": "Wald t of the within-site slope",
    "df": "Satterthwaite degrees of freedom",
    "contextual": "slope of the site mean, standardised by the same SDs",
    "contextual_se": "standard error of contextual",
    "variance_ratio": "site variance over residual variance",
    "p_permutation": "p by shuffles within sites", "p_family": "the same, step-down max-|t| over the family",
    "shuffles": "shuffles run", "exhaustive": "whether every distinct arrangement was enumerated",
    "smallest_p": "smallest p that was attainable",
    "status": "ok, boundary (site variance 0), refused or failed", "reason": "why, where refused or failed",
    "notes": "what was coded, dropped or advised on the way",
    "role": "confirmatory or exploratory", "family": "hypotheses corrected together",
    "check_difference": "largest difference from the same fit by statsmodels",
}  # fmt: skip


def of_columns(columns: dict[str, Column]) -> Said:
    """Dictionary of the person table."""
    return {
        name: _entry(
            column.label, column.description, column.unit, column.reading, column.undefined, column.source,
            column.low, column.high,
        )
        for name, column in columns.items()
    }  # fmt: skip


def of_table(table: pd.DataFrame) -> Said:
    """Dictionary of a table of keys, counts and columns ``origin.measure``."""
    said: Said = {}
    for name in map(str, table.columns):
        if name in KEYS_SAY:
            said[name] = {"Description": KEYS_SAY[name]}
        else:
            each = all_measures()[name.split(".")[-1]]
            said[name] = _entry(
                each.label, each.says, each.unit, each.reading, each.undefined, each.source,
                each.low, each.high,
            )  # fmt: skip
    return said


def in_words(says: dict[str, str], table: pd.DataFrame) -> Said:
    """Dictionary of a table whose columns are described one by one."""
    return {name: {"Description": says[name]} for name in map(str, table.columns)}


def _entry(label: str, says: str, *rest: object) -> dict[str, object]:
    names = ("Units", "Reading", "Undefined", "Source", "Lowest", "Highest")
    told = {name: value for name, value in zip(names, rest, strict=True) if value not in ("", None)}
    return {"LongName": label, "Description": says or label} | told
