"""The page: one HTML file that needs nothing else."""

from __future__ import annotations

from dataclasses import dataclass
from importlib.resources import files

from jinja2 import Environment, PackageLoader, StrictUndefined
from markupsafe import Markup, escape

from socibrain.link.finding import Finding, Findings
from socibrain.report import losses, tables
from socibrain.report.figures.by_site import drawn_sites
from socibrain.report.figures.look import as_svg, colour_variables, our_look
from socibrain.report.gallery import (
    Gallery,
    gallery,
    network_position,
    network_site,
    shown_visit,
    split_in_two,
)
from socibrain.report.material import ReportInput
from socibrain.report.methods import columns_used, describe_methods
from socibrain.report.provenance import read_record
from socibrain.report.words import Answer, answer, spoken


@dataclass(frozen=True)
class AnsweredHypothesis:
    """One hypothesis on the page: its answer, its numbers, what its figures need said.

    ``two_values`` is the measure for whose sake sites are not drawn apart, '' where they are.
    """

    answer: Answer
    numbers: tuple[tuple[str, str], ...]
    undrawn_sites: int
    two_values: str
    one_sided: bool
    readings: tuple[tuple[str, str], ...]


def render_report(material: ReportInput) -> str:
    """The page as text; the same material gives the same text.

    Holds no id of any person.  Parts the study does not have are left out.
    """
    figures = gallery(material)
    drawn = _draw(figures)
    cohort, findings = material.cohort, material.findings
    room = Environment(
        loader=PackageLoader("socibrain.report", "."),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    room.filters["breakable"] = _breakable
    named = [each.name for each in columns_used(findings, cohort.columns)] if findings else None
    question = network_position(material)[0] if material.questions else ""
    site = network_site(material)
    return room.get_template("page.html.j2").render(
        material=material,
        style=_style(),
        figures=drawn,
        spreads=[name for name in drawn if name.startswith("spread-")],
        visit=shown_visit(material),
        network_question=question.replace("_", " "),
        few_silent=site is not None and site.few_silent,
        some_silent=site is not None and not site.answered.all(),
        answered=_answered(findings, material),
        glance=tables.glance(material),
        sites=tables.site_rows(material, question),
        exclusions=losses.exclusion_rows(cohort.ledger),
        site_losses=losses.site_loss_rows(cohort.ledger, cohort.columns, named),
        other_losses=losses.other_losses(cohort.ledger, named) if named is not None else 0,
        left_out=losses.left_out_rows(findings, cohort.columns) if findings else None,
        analysed=losses.analysed(findings) if findings else [],
        finding_table=tables.finding_rows(findings, cohort.columns) if findings else None,
        problems=losses.problem_rows(cohort.problems),
        methods=describe_methods(material),
        provenance=read_record(material),
        many_sites=tables.MANY,
    )


def _draw(figures: Gallery) -> dict[str, Markup]:
    with our_look():
        return {name: Markup(as_svg(draw(), name)) for name, draw in figures.items()}


def _breakable(name: str) -> Markup:
    """A name that may be broken behind its underscores, nowhere else."""
    return escape(name).replace("_", Markup("_<wbr>"))


def _style() -> Markup:
    text = files("socibrain.report").joinpath("page.css").read_text(encoding="utf-8")
    day, night = colour_variables(night=False), colour_variables(night=True)
    return Markup(
        f":root {{ {day} }}\n@media screen and (prefers-color-scheme: dark) {{ :root {{ {night} }} }}\n{text}"
    )


def _answered(findings: Findings | None, material: ReportInput) -> list[AnsweredHypothesis]:
    if findings is None:
        return []
    return [
        AnsweredHypothesis(
            answer=answer(finding, findings, material.cohort.columns),
            numbers=tuple(tables.numbers_of(finding, findings)),
            undrawn_sites=finding.n_sites - len(drawn_sites(finding)),
            two_values=_two_values(finding, material),
            one_sided=finding.hypothesis.one_sided,
            readings=tuple(_readings(finding, material)),
        )
        for finding in findings.findings
    ]


def _two_values(finding: Finding, material: ReportInput) -> str:
    name = split_in_two(finding, material) if finding.n_sites > 1 else ""
    return spoken(name, material.cohort.columns) if name else ""


def _readings(finding: Finding, material: ReportInput) -> list[tuple[str, str]]:
    """What higher values of the two measures mean: (measure, reading)."""
    columns = material.cohort.columns
    named = (finding.hypothesis.predictor, finding.hypothesis.outcome)
    return [
        (spoken(name, columns), columns[name].reading)
        for name in named
        if name in columns and columns[name].reading
    ]
