"""Who is in the sample of a family of hypotheses."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from numbers import Real

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from socibrain.cohort.table import Cohort
from socibrain.documents import nearest
from socibrain.errors import DocumentRefused, Fault
from socibrain.link.hypothesis import Hypothesis

Array = NDArray[np.float64]
LEFT_OUT = ["family", "person", "site", "reason"]


@dataclass(frozen=True)
class Sample:
    """People with everything that a family of hypotheses asks for, and everyone else with a reason.

    ``table`` has one row per person of the sample, sorted by site then person, indexed from 0.
    ``left_out`` has columns family, person, site, reason.  ``networks`` names, for each column
    asked for that is a measure, the question or brain input it is computed from.  ``nobody`` says
    why the sample is empty, '' when it is not.
    """

    table: pd.DataFrame
    left_out: pd.DataFrame
    networks: Mapping[str, str]
    nobody: str


def draw_sample(cohort: Cohort, hypotheses: Sequence[Hypothesis], *, visit: str, family: str) -> Sample:
    """The people complete in all columns of all ``hypotheses`` at one visit.

    People without any scan count at every visit, with no brain measures.  Where no column comes
    from a scan the visit does not matter, and people scanned at another visit count too.
    Raises `DocumentRefused` with every column that the cohort does not have.
    """
    columns = list(dict.fromkeys(name for h in hypotheses for name in (h.outcome, h.predictor, *h.adjust)))
    _refuse_unknown(cohort, columns)
    everyone = cohort.persons.drop_duplicates("person")[["person", "site"]]
    if any(_from_a_scan(cohort, name) for name in columns):
        rows = cohort.persons[cohort.persons["visit"].isin([visit, ""])]
    else:
        rows = cohort.persons.drop_duplicates("person")
    missing = pd.DataFrame({name: _missing(rows[name]) for name in columns}, index=rows.index)
    lost = missing.any(axis=1) | rows["site"].isna()
    reasons = dict.fromkeys(everyone["person"], f"no usable scan at visit '{visit}'")
    for person, lacks in zip(rows["person"], missing.to_numpy(), strict=True):
        lacking = [name for name, lack in zip(columns, lacks, strict=True) if lack]
        told = dict.fromkeys(_why(cohort, name, person, visit) for name in lacking)
        reasons[person] = "; ".join(told or ["no site"])
    table = rows[~lost].sort_values(["site", "person"], ignore_index=True)
    gone = everyone[~everyone["person"].isin(table["person"])]
    left_out = gone.assign(family=family, reason=[reasons[person] for person in gone["person"]])
    networks = {name: cohort.columns[name].origin for name in columns if _is_measure(cohort, name)}
    nobody = _why_nobody(cohort, rows["person"], missing, visit) if table.empty else ""
    return Sample(table, left_out[LEFT_OUT].reset_index(drop=True), networks, nobody)


def numbers(column: pd.Series) -> Array | None:
    """The column as float64, (n,), with NaN for missing and infinite; None where it holds text.

    >>> numbers(pd.Series([True, False, None], dtype=object)).tolist()
    [1.0, 0.0, nan]
    >>> numbers(pd.Series(["a", "b"])) is None
    True
    """
    known = column[column.notna()]
    if not all(isinstance(value, Real | np.bool_) for value in known):
        return None
    values = np.full(len(column), np.nan)
    values[column.notna().to_numpy()] = [float(value) for value in known]
    return np.where(np.isfinite(values), values, np.nan)


def _missing(column: pd.Series) -> NDArray[np.bool_]:
    values = numbers(column)
    return np.isnan(values) if values is not None else column.isna().to_numpy(bool)


def _why(cohort: Cohort, name: str, person: str, visit: str) -> str:
    """Why this person has no value: what the ledger says of that side, or when there is none."""
    about = cohort.columns.get(name)
    if about is None or not about.origin:
        return f"'{name}': missing"
    side = "brain" if _from_a_scan(cohort, name) else "social"
    ledger = cohort.ledger
    others = {column.origin for column in cohort.columns.values()} - {about.origin, ""}
    elsewhere = ledger["stage"].str.endswith(tuple(f" in {other}" for other in others))
    mine = (ledger["person"] == person) & (ledger["side"] == side) & ledger["visit"].isin([visit, ""])
    mine &= ~elsewhere.astype(bool)
    told = list(dict.fromkeys(ledger.loc[mine, "reason"]))
    return ", ".join(told) if told else f"'{name}': undefined ({about.undefined})"


def _why_nobody(cohort: Cohort, people: pd.Series, missing: pd.DataFrame, visit: str) -> str:
    """Which columns keep everyone out: those that nobody has or, when there are none, all of them."""
    if people.empty:
        return f"there is no usable scan at visit '{visit}'"
    told = []
    for name in missing.columns[missing.all().to_numpy()]:
        whys = Counter(_why(cohort, name, person, visit) for person in people)
        why, times = whys.most_common(1)[0]
        why = why.removeprefix(f"'{name}': ")
        often = "" if times == len(people) else f" ({times} of {len(people)} people)"
        told.append(f"'{name}' has no value for anybody: {why}{often}")
    if told:
        return "; ".join(told)
    has = (~missing).sum()
    return "each has values, never all for one person of a site: " + ", ".join(
        f"'{name}' for {has[name]} of {len(people)} people" for name in missing.columns
    )


def _is_measure(cohort: Cohort, name: str) -> bool:
    return name in cohort.columns and cohort.columns[name].measure != ""


def _from_a_scan(cohort: Cohort, name: str) -> bool:
    """Whether the column differs between visits: it comes neither from a question nor with the person."""
    origin = cohort.columns[name].origin if name in cohort.columns else ""
    return origin not in {"", *(network.question for network in cohort.social)}


def _refuse_unknown(cohort: Cohort, columns: Sequence[str]) -> None:
    known = [str(name) for name in cohort.persons.columns]
    unknown = [name for name in columns if name not in known]
    if unknown:
        raise DocumentRefused(
            *(
                Fault(
                    "hypotheses", name, "unknown-column", "is no column of the cohort", nearest(name, known)
                )
                for name in unknown
            )
        )
