"""Tables of the page, as rows of ready text; small cells hidden."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass

import pandas as pd

from socibrain.cohort.table import Column
from socibrain.link.finding import Finding, Findings
from socibrain.measures.catalogue import all_measures
from socibrain.report.material import ReportInput
from socibrain.report.notation import FEW, breakdown, count, decimal, level, p_value, share, short
from socibrain.report.words import BADGES, answer, spoken

MANY = 40
"""Rows after which a table of sites is cut."""


@dataclass(frozen=True)
class Rows:
    """A table ready to be set: headings (the first is for the row's name) and rows of text."""

    headings: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


def glance(material: ReportInput) -> list[tuple[str, str]]:
    """The study in a few numbers: (number, what it counts)."""
    cohort = material.cohort
    tiles = [(count(cohort.persons["person"].nunique()), "people")]
    sites = len(set(cohort.persons["site"]))
    if sites > 1:
        tiles.append((count(sites), "sites"))
    later = cohort.flow[(cohort.flow["step"] > 1) | (cohort.flow["branch"] == "both")]
    for label, people in zip(later["label"], later["people"], strict=True):
        tiles.append((count(people), str(label)))
    if len(material.questions) > 0:
        tiles.append((count(len(material.questions)), "question" + "s" * (len(material.questions) > 1)))
    if len(cohort.regions):
        tiles.append((count(cohort.regions["region"].nunique()), "brain regions"))
        systems = cohort.regions["system"].replace("", None).nunique()
        tiles += [(count(systems), "systems")] if systems else []
    visits = cohort.persons["visit"].replace("", None).nunique()
    return tiles + ([(count(visits), "visits")] if visits > 1 else [])


def site_rows(material: ReportInput, question: str) -> Rows:
    """One row a site: people, share who answered, share with a usable brain, measures of the site."""
    sites = material.cohort.sites.sort_values("site").head(MANY)
    measures = [
        (name, passport.label)
        for name, passport in (
            (name, all_measures().get(str(name).partition(".")[2])) for name in sites.columns
        )
        if passport and str(name).startswith(f"{question}.")
    ]
    with_answers, with_brain = "answered" in sites, "with_brain" in sites and bool(sites["with_brain"].any())
    whole = "on_roster" if with_answers else "people"
    headings = ["Site", "On the roster" if with_answers else "People"]
    headings += ["Answered"] * with_answers + ["Usable brain network"] * with_brain
    sizes = breakdown([_whole(value) for value in sites[whole]])
    rows = []
    for (_, site), size in zip(sites.iterrows(), sizes, strict=True):
        row = [str(site["site"]), size]
        if with_answers:
            row.append(share(_whole(site["answered"]), _whole(site[whole])))
        if with_brain:
            row.append(share(_whole(site["with_brain"]), _whole(site["people"])))
        row += [short(float(site[name])) if size != FEW else "–" for name, _ in measures]
        rows.append(tuple(row))
    return Rows((*headings, *(label for _, label in measures)), tuple(rows))


def exclusion_rows(ledger: pd.DataFrame) -> Rows:
    """People who go no further, by stage and reason; each person counted once in a row."""
    people = ledger[(ledger["person"].fillna("") != "") & ledger["side"].isin(["social", "brain", "both"])]
    rows: list[tuple[str, ...]] = []
    for (side, stage), part in people.groupby(["side", "stage"], sort=False):
        by_reason = (
            part.groupby("reason", sort=False)["person"].nunique().sort_values(ascending=False, kind="stable")
        )
        shown = breakdown([int(people) for people in by_reason])
        rows += [
            (_side(str(side)), str(stage), str(reason), number)
            for reason, number in zip(by_reason.index, shown, strict=True)
        ]
    return Rows(("Side", "Not reached", "Reason", "People"), tuple(rows))


def site_loss_rows(ledger: pd.DataFrame, columns: Mapping[str, Column]) -> Rows:
    """Sites where a measure has no value for anybody."""
    sites = ledger[ledger["person"].fillna("") == ""]
    single = dict.fromkeys(zip(sites["stage"], sites["reason"], sites["site"], strict=True))
    number = Counter((str(stage), str(reason)) for stage, reason, _ in single)
    rows = [
        (_sentence(spoken(stage, columns)), reason, count(times)) for (stage, reason), times in number.items()
    ]
    return Rows(("Measure without a value", "Reason", "Sites"), tuple(rows))


def left_out_rows(findings: Findings) -> Rows:
    """People in both branches whom a family had to leave out, by reason."""
    rows: list[tuple[str, ...]] = []
    for family, part in findings.left_out.groupby("family", sort=False):
        by_reason = (
            part.groupby("reason", sort=False)["person"].nunique().sort_values(ascending=False, kind="stable")
        )
        shown = breakdown([int(people) for people in by_reason])
        rows += [
            (str(family), str(reason), number) for reason, number in zip(by_reason.index, shown, strict=True)
        ]
    return Rows(("Family of hypotheses", "Reason", "People"), tuple(rows))


def problem_rows(problems: pd.DataFrame) -> Rows:
    """Faults found in the inputs, by kind."""
    number = problems.groupby("kind", sort=False).size().sort_values(ascending=False, kind="stable")
    shown = breakdown([int(places) for places in number])
    rows = [(str(kind).replace("-", " "), places) for kind, places in zip(number.index, shown, strict=True)]
    return Rows(("Kind of fault", "Places"), tuple(rows))


def finding_rows(findings: Findings, columns: Mapping[str, Column]) -> Rows:
    """All hypotheses, one row each."""
    alpha = findings.options.alpha
    rows = [
        (
            each.hypothesis.id,
            spoken(each.hypothesis.predictor, columns),
            spoken(each.hypothesis.outcome, columns),
            each.hypothesis.role,
            f"{each.n} / {each.n_sites}",
            decimal(each.estimate),
            _interval(each.ci_low, each.ci_high),
            p_value(each.p_permutation, alpha),
            p_value(each.p_family, alpha),
            BADGES[answer(each, findings, columns).verdict],
        )
        for each in findings.findings
    ]
    headings = (
        "Hypothesis", "Predictor", "Outcome", "Role", "People / sites", "Slope", f"{level(alpha)} interval",
        "p", "p in family", "Answer",
    )  # fmt: skip
    return Rows(headings, tuple(rows))


def numbers_of(finding: Finding, findings: Findings) -> list[tuple[str, str]]:
    """What stands behind one finding: (what, number); nothing when it was not tested."""
    if finding.status not in ("ok", "boundary"):
        return []
    alpha = findings.options.alpha
    rows = [
        ("Standardised slope", f"{decimal(finding.estimate, 3)} (SE {decimal(finding.se, 3)})"),
        (f"{level(alpha)} interval", _interval(finding.ci_low, finding.ci_high, 3)),
        ("Slope in the units of the columns", short(finding.raw_estimate)),
        ("t (degrees of freedom)", f"{decimal(finding.statistic)} ({decimal(finding.df, 1)})"),
        ("p by shuffling", p_value(finding.p_permutation, alpha)),
        ("p in its family", p_value(finding.p_family, alpha)),
        (
            "Arrangements",
            f"{count(finding.shuffles)}{', all there are' if finding.exhaustive else ' shuffles'}",
        ),
        ("Smallest p possible", p_value(finding.smallest_p, alpha)),
        ("People / sites", f"{finding.n} / {finding.n_sites}"),
        ("Site variance / residual variance", short(finding.variance_ratio)),
    ]
    if math.isfinite(finding.contextual):
        rows.append(
            (
                "Slope of the site's mean, apart",
                f"{decimal(finding.contextual, 3)} (SE {decimal(finding.contextual_se, 3)})",
            )
        )
    if finding.check:
        rows.append(("Largest difference from statsmodels", f"{finding.check.largest_difference:.1e}"))
    return [(what, number) for what, number in rows if number != "–"]


def _interval(low: float, high: float, places: int = 2) -> str:
    return "–" if math.isnan(low) else f"{decimal(low, places)} to {decimal(high, places)}"


def _whole(value: object) -> int:
    number = float(str(value))
    return 0 if math.isnan(number) else round(number)


def _side(side: str) -> str:
    return {"social": "questionnaire", "brain": "brain", "both": "both"}[side]


def _sentence(text: str) -> str:
    return text[:1].upper() + text[1:]
