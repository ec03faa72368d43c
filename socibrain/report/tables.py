"""Tables of the page, as rows of ready text; small cells hidden."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from socibrain.cohort.table import Column
from socibrain.link.finding import Finding, Findings
from socibrain.measures.catalogue import all_measures
from socibrain.report.material import ReportInput
from socibrain.report.notation import FEW, breakdown, count, decimal, evenly, level, p_value, share, short
from socibrain.report.words import BADGES, answer, titled

MANY = 40
"""Rows after which a table of sites is cut."""

SITE_MEASURES = ("site_density", "site_reciprocity", "rich_club_p", "rich_club_from_degree")
"""Measures of a site that its row shows; sites.csv has them all."""


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
        (name, f"{passport.label} (p)" if passport.unit == "p" else passport.label)
        for name, passport in ((f"{question}.{each}", all_measures()[each]) for each in SITE_MEASURES)
        if name in sites
    ]
    with_answers, with_brain = "answered" in sites, "with_brain" in sites and bool(sites["with_brain"].any())
    whole = "on_roster" if with_answers else "people"
    headings = ["Site", "On the roster" if with_answers else "People"]
    headings += ["Answered"] * with_answers + ["Usable brain network"] * with_brain
    sizes = breakdown([_whole(value) for value in sites[whole]])
    values = [
        evenly(
            [
                float(value) if size != FEW else math.nan
                for value, size in zip(sites[name], sizes, strict=True)
            ]
        )
        for name, _ in measures
    ]
    rows = []
    for number, ((_, site), size) in enumerate(zip(sites.iterrows(), sizes, strict=True)):
        row = [str(site["site"]), size]
        if with_answers:
            row.append(share(_whole(site["answered"]), _whole(site[whole])))
        if with_brain:
            row.append(share(_whole(site["with_brain"]), _whole(site["people"])))
        row += [column[number] for column in values]
        rows.append(tuple(row))
    return Rows((*headings, *(label for _, label in measures)), tuple(rows))


def finding_rows(findings: Findings, columns: Mapping[str, Column]) -> Rows:
    """All hypotheses, one row each."""
    alpha = findings.options.alpha
    several = any(each.n_sites > 1 for each in findings.findings)
    rows = [
        (
            each.hypothesis.id,
            titled(each.hypothesis.predictor, columns),
            titled(each.hypothesis.outcome, columns),
            f"{each.n} / {each.n_sites}" if several else str(each.n),
            decimal(each.estimate),
            _interval(each.ci_low, each.ci_high),
            p_value(each.p_permutation, alpha),
            f"{p_value(each.p_family, alpha)}{_sided(each)}",
            BADGES[answer(each, findings, columns).verdict],
        )
        for each in findings.findings
    ]
    headings = (
        "Hypothesis", "Predictor", "Outcome", "People / sites" if several else "People", "Slope",
        f"{level(alpha)} interval", "p", "p in family", "Answer",
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
        (f"p by shuffling{_sided(finding)}", p_value(finding.p_permutation, alpha)),
        (f"p in its family{_sided(finding)}", p_value(finding.p_family, alpha)),
        (
            "Arrangements",
            f"{count(finding.shuffles)}{', all there are' if finding.exhaustive else ' shuffles'}",
        ),
        ("Smallest p possible", p_value(finding.smallest_p, alpha)),
        ("People / sites", f"{finding.n} / {finding.n_sites}")
        if finding.n_sites > 1
        else ("People", count(finding.n)),
        ("Site variance / residual variance", short(finding.variance_ratio)),
    ]
    if math.isfinite(finding.contextual):
        rows.append(
            (
                "Slope of the site's mean (not tested)",
                f"{decimal(finding.contextual, 3)} (SE {decimal(finding.contextual_se, 3)})",
            )
        )
    if finding.check:
        rows.append(
            ("Largest difference from the same fit by statsmodels", f"{finding.check.largest_difference:.1e}")
        )
    return [(what, number) for what, number in rows if number != "–"]


def _sided(finding: Finding) -> str:
    return ", one-sided" if finding.hypothesis.one_sided and not math.isnan(finding.p_family) else ""


def _interval(low: float, high: float, places: int = 2) -> str:
    return "–" if math.isnan(low) else f"{decimal(low, places)} to {decimal(high, places)}"


def _whole(value: object) -> int:
    number = float(str(value))
    return 0 if math.isnan(number) else round(number)
