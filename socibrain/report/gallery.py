"""Every figure that a page can have, by name."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable
from functools import partial

import pandas as pd

from socibrain.cohort.table import Column
from socibrain.link.finding import Finding
from socibrain.report.figures.by_site import drawn_sites, site_panels
from socibrain.report.figures.flow import flow_figure
from socibrain.report.figures.look import Drawing, as_png, our_look
from socibrain.report.figures.null import null_figure
from socibrain.report.figures.person_by_person import person_figure
from socibrain.report.figures.site_network import DrawnSite, choose_site, network_figure
from socibrain.report.figures.spread import sites_with_enough, spread_figure
from socibrain.report.figures.systems import systems_figure
from socibrain.report.material import ReportInput
from socibrain.report.notation import is_small
from socibrain.report.words import spoken

Gallery = dict[str, Callable[[], Drawing]]
SHOWN_MEASURES = 4


def gallery(material: ReportInput) -> Gallery:
    """Figures of this study in page order; those it has nothing for are not there.

    Names: ``flow``, ``network``, ``spread-1`` and on, ``systems``, and ``people-ID``, ``null-ID``,
    ``sites-ID`` for each answered hypothesis.
    """
    found: Gallery = {}
    if len(material.cohort.flow):
        found["flow"] = partial(flow_figure, material.cohort.flow)
    found |= _network(material) | _spreads(material) | _systems(material)
    for finding in material.findings.findings if material.findings else ():
        if finding.n and finding.status in ("ok", "boundary"):
            found |= _finding(finding, material)
    return found


def figure_png(material: ReportInput, which: str, *, dots_per_inch: int = 160) -> bytes:
    """One figure of the page as PNG.

    Raises `KeyError` that lists the figures there are when ``which`` is not one of them.
    """
    figures = gallery(material)
    if which not in figures:
        raise KeyError(f"there is no figure '{which}'; there are: {', '.join(figures)}")
    with our_look():
        drawing = figures[which]()
    return as_png(drawing, dots_per_inch)


def network_position(material: ReportInput) -> tuple[str, str]:
    """Question whose network is drawn, and the column that gives the sizes ('' for none).

    The first social position that a hypothesis names; without one the study's first question.
    """
    columns = material.cohort.columns
    for finding in material.findings.findings if material.findings else ():
        for name in (finding.hypothesis.predictor, finding.hypothesis.outcome):
            if name in columns and material.side(columns[name]) == "social":
                return columns[name].origin, name
    return material.questions[0], ""


def shown_measures(material: ReportInput) -> list[Column]:
    """Brain measures whose spread is shown: those that hypotheses name, without any the first two."""
    brain = material.brain_columns()
    named = [
        name
        for finding in (material.findings.findings if material.findings else ())
        for name in (finding.hypothesis.outcome, finding.hypothesis.predictor)
    ]
    asked = [column for name in dict.fromkeys(named) for column in brain if column.name == name]
    return (asked or brain[:2])[:SHOWN_MEASURES]


def shown_visit(material: ReportInput) -> str:
    """The visit that is linked; without findings the first that has a brain."""
    if material.findings:
        return material.findings.options.visit
    persons = material.cohort.persons
    names = [column.name for column in material.brain_columns()]
    with_brain = persons.loc[persons[names].notna().any(axis=1), "visit"]
    return str(with_brain.iloc[0]) if len(with_brain) else ""


def region_column(material: ReportInput) -> str:
    """The region measure shown by system: participation where there is one, else the first."""
    names = [str(name) for name in material.cohort.regions.columns if "." in str(name)]
    return next((name for name in names if name.endswith(".participation")), names[0] if names else "")


def network_site(material: ReportInput) -> DrawnSite | None:
    """The site whose network is drawn; None where there is none to draw."""
    if not material.questions:
        return None
    question, column = network_position(material)
    return choose_site(material, question=question, column=column)


def split_in_two(finding: Finding, material: ReportInput) -> str:
    """Predictor or outcome of at most two values, one of which one to four people of a site share.

    Panels by site would tell who they are.  The column's name, '' where there is none.
    """
    persons = material.cohort.persons
    linked = persons["visit"].isin([shown_visit(material), ""])
    rows = pd.concat([persons[linked], persons[~linked]])
    for name in (finding.hypothesis.predictor, finding.hypothesis.outcome):
        if name in rows and rows[name].nunique() <= 2:
            known = rows[rows[name].notna()].drop_duplicates("person").set_index("person")[name]
            people = Counter(zip(finding.sites, known.reindex(list(finding.people)), strict=True))
            if any(map(is_small, people.values())):
                return name
    return ""


def _network(material: ReportInput) -> Gallery:
    site = network_site(material)
    if site is None:
        return {}
    _, column = network_position(material)
    label = spoken(column, material.cohort.columns) if column else ""
    return {"network": partial(network_figure, site, size_label=label)}


def _spreads(material: ReportInput) -> Gallery:
    persons = material.cohort.persons
    rows = persons[persons["visit"] == shown_visit(material)]
    return {
        f"spread-{number}": partial(spread_figure, rows[column.name], rows["site"], column.label)
        for number, column in enumerate(shown_measures(material), start=1)
        if sites_with_enough(rows[column.name], rows["site"])
    }


def _systems(material: ReportInput) -> Gallery:
    regions, column = material.cohort.regions, region_column(material)
    if not column or not (regions["system"] != "").any():
        return {}
    rows = regions[(regions["visit"] == shown_visit(material)) & (regions["system"] != "")]
    if not rows[column].notna().any():
        return {}
    origin, _, measure = column.partition(".")
    label = f"{measure.replace('_', ' ').capitalize()} of a region ({origin})"
    return {"systems": partial(systems_figure, rows, column, label)}


def _finding(finding: Finding, material: ReportInput) -> Gallery:
    columns, asked = material.cohort.columns, finding.hypothesis
    predictor, outcome = (
        columns[name].label if name in columns else name for name in (asked.predictor, asked.outcome)
    )
    found: Gallery = {
        f"people-{asked.id}": partial(person_figure, finding, predictor, outcome),
    }
    if finding.null.size:
        found[f"null-{asked.id}"] = partial(null_figure, finding)
    if finding.n_sites > 1 and drawn_sites(finding) and not split_in_two(finding, material):
        found[f"sites-{asked.id}"] = partial(site_panels, finding)
    return found
