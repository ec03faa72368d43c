"""Tables of the page, as rows of ready text; small cells hidden."""

from __future__ import annotations

import math
import re
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

SITE_MEASURES = ("site_density", "site_reciprocity", "rich_club_p", "rich_club_from_degree")
"""Measures of a site that its row shows; sites.csv has them all."""
SIDES = {"social": "questionnaire", "brain": "brain", "both": "both"}
_NEXT_REASON = re.compile(r"; (?![^()]*\))")
"""Between two reasons; a semicolon inside brackets belongs to its reason."""
_COLUMN = re.compile(r"^'([^']+)'(?=: )")


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
        for name, passport in ((f"{question}.{each}", all_measures()[each]) for each in SITE_MEASURES)
        if name in sites
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
    """People who go no further, by stage and reason; then people who lose one visit only."""
    people = ledger[(ledger["person"].fillna("") != "") & ledger["side"].isin(list(SIDES))]
    one_visit = people["visit"].fillna("") != ""
    rows: list[tuple[str, ...]] = []
    for part, what in ((people[~one_visit], ""), (people[one_visit], ", one visit")):
        for (side, stage), group in part.groupby(["side", "stage"], sort=False):
            rows += [
                (SIDES[str(side)], f"{stage}{what}", reason, shown) for reason, shown in _by_reason(group)
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


def left_out_rows(findings: Findings, columns: Mapping[str, Column]) -> Rows:
    """People whom a family of hypotheses had to leave out, by each reason that holds for them."""
    single = [
        (str(family), _with_label(reason, columns), str(person))
        for family, person, told in findings.left_out[["family", "person", "reason"]].to_numpy().tolist()
        for reason in _NEXT_REASON.split(str(told))
    ]
    table = pd.DataFrame(single, columns=["family", "reason", "person"])
    rows = [
        (str(family), reason, shown)
        for family, group in table.groupby("family", sort=False)
        for reason, shown in _by_reason(group)
    ]
    return Rows(("Family", "Reason", "People"), tuple(rows))


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
            f"{each.n} / {each.n_sites}",
            decimal(each.estimate),
            _interval(each.ci_low, each.ci_high),
            p_value(each.p_permutation, alpha),
            f"{p_value(each.p_family, alpha)}{_sided(each)}",
            BADGES[answer(each, findings, columns).verdict],
        )
        for each in findings.findings
    ]
    headings = (
        "Hypothesis", "Predictor", "Outcome", "People / sites", "Slope", f"{level(alpha)} interval",
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
        (f"p by shuffling{_sided(finding)}", p_value(finding.p_permutation, alpha)),
        (f"p in its family{_sided(finding)}", p_value(finding.p_family, alpha)),
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
                "Slope of the site's mean (not tested)",
                f"{decimal(finding.contextual, 3)} (SE {decimal(finding.contextual_se, 3)})",
            )
        )
    if finding.check:
        rows.append(("Largest difference from statsmodels", f"{finding.check.largest_difference:.1e}"))
    return [(what, number) for what, number in rows if number != "–"]


def _sided(finding: Finding) -> str:
    return ", one-sided" if finding.hypothesis.one_sided and not math.isnan(finding.p_family) else ""


def _interval(low: float, high: float, places: int = 2) -> str:
    return "–" if math.isnan(low) else f"{decimal(low, places)} to {decimal(high, places)}"


def _whole(value: object) -> int:
    number = float(str(value))
    return 0 if math.isnan(number) else round(number)


def _with_label(reason: str, columns: Mapping[str, Column]) -> str:
    """A reason that begins with a quoted column name, with the column's label there."""
    return _COLUMN.sub(lambda found: _sentence(spoken(found[1], columns)), reason)


def _by_reason(people: pd.DataFrame) -> list[tuple[str, str]]:
    """Each reason with its people, most frequent first; a person counts once a reason."""
    number = people.groupby("reason", sort=False)["person"].nunique()
    number = number.sort_values(ascending=False, kind="stable")
    shown = breakdown([int(each) for each in number])
    return [(str(reason), each) for reason, each in zip(number.index, shown, strict=True)]


def _sentence(text: str) -> str:
    return text[:1].upper() + text[1:]
