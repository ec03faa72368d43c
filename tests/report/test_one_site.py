"""A study without sites: the page speaks of none."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pytest

from socibrain.link.finding import Finding
from socibrain.report.figures.look import as_svg, our_look
from socibrain.report.figures.null import null_figure
from socibrain.report.figures.person_by_person import person_figure
from socibrain.report.figures.spread import spread_figure
from socibrain.report.material import ReportInput
from socibrain.report.methods import describe_methods
from socibrain.report.page import render_report
from tests.report.made_study import finding, findings, made_cohort, made_material


def alone(name: str = "brokers", **asked: object) -> Finding:
    """A finding of a study without sites: least squares, so nothing on the sites' variance or means."""
    one = finding(name, n=49, n_sites=1, **asked)  # type: ignore[arg-type]
    nothing = float("nan")
    return replace(
        one, sites=("all",) * 49, contextual=nothing, contextual_se=nothing, variance_ratio=nothing
    )


@pytest.fixture(scope="module")
def material() -> ReportInput:
    cohort = made_cohort()
    return made_material(
        cohort=replace(
            cohort,
            persons=cohort.persons.assign(site="all"),
            sites=cohort.sites.head(1).assign(site="all"),
            ledger=cohort.ledger[cohort.ledger["person"] != ""].assign(site="all"),
            problems=cohort.problems.iloc[:0],
            social=tuple(replace(network, site="all") for network in cohort.social[:1]),
        ),
        findings=findings([alone(adjust=("age",)), alone("others", p_family=0.4)]),
    )


@pytest.fixture(scope="module")
def words(material: ReportInput) -> str:
    page = re.sub(r"<style>.*?</style>", "", render_report(material), flags=re.DOTALL)
    return re.sub(r"\s+", " ", re.sub(r"<[^>]+>", " ", page))


def test_nothing_on_the_page_speaks_of_sites(words: str) -> None:
    told = words[: words.index("Measures that hypotheses name")] + words[words.index("Cautions This") :]
    told = re.sub(r"Nominations returned in the site", "", told)  # a measure's own label
    assert re.findall(r".{40}\bsites?\b.{40}", told) == []
    assert "REML" not in words
    assert "restricted maximum" not in words


def test_no_row_is_named_after_the_one_site(material: ReportInput) -> None:
    page = render_report(material)
    assert "The group as a whole" in page
    assert not re.search(r"<t[hd][^>]*>all</t", page)
    named = (
        replace(material.findings, left_out=material.findings.left_out.iloc[:0])
        if material.findings
        else None
    )
    assert ">all<" not in render_report(replace(material, findings=named))


def test_the_model_is_told_as_least_squares(material: ReportInput, words: str) -> None:
    methods = describe_methods(material)
    assert methods.paragraphs[1].startswith(
        "Each hypothesis was fitted by ordinary least squares over all people."
    )
    assert "without the predictor among all people and" in methods.paragraphs[2]
    assert not any(name in " ".join(methods.references) for name in ("Patterson", "Satterthwaite", "Winkler"))
    assert "Positions were computed on the whole network, including" in methods.paragraphs[0]
    assert "Shuffling takes people as exchangeable." in words
    assert "; 49 people; " in words


def test_axes_say_what_was_done_to_the_values() -> None:
    adjusted, plain = alone(adjust=("age",)), alone()
    of_sites = finding(adjust=("age",))
    with our_look():
        assert person_figure(adjusted, "x", "y").figure.axes[0].get_xlabel() == "x\n(adjusted)"
        assert person_figure(plain, "x", "y").figure.axes[0].get_ylabel() == "y\n(less the mean)"
        assert "site" not in person_figure(adjusted, "x", "y").alternative
        label = person_figure(of_sites, "x", "y").figure.axes[0].get_xlabel()
        assert label == "x\n(less the site's mean, adjusted)"
        label = person_figure(finding(), "x", "y").figure.axes[0].get_xlabel()
        assert label == "x\n(less the site's mean)"
        assert null_figure(plain).figure.axes[0].get_xlabel() == "t when all people are shuffled"
        assert null_figure(of_sites).figure.axes[0].get_xlabel() == "t when people are shuffled within sites"


def test_the_only_row_of_a_spread_has_no_name(material: ReportInput) -> None:
    persons = material.cohort.persons
    with our_look():
        drawn = as_svg(spread_figure(persons["rest.modularity"], persons["site"], "Q (rest)"), "x")
    assert ">all<" not in drawn
    assert "one row for each" not in drawn


def test_a_hypothesis_of_one_site_in_a_study_of_many_is_pointed_out() -> None:
    methods = describe_methods(made_material(findings=findings([finding(), alone("few")])))
    assert "a random intercept for site" in methods.paragraphs[1]
    assert methods.paragraphs[1].endswith("“few” had people of one site only, and no part for sites.")
    assert np.isfinite(finding().variance_ratio)
