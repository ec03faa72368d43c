"""The page: sound HTML, nothing fetched, nobody recognisable, nothing there that the study lacks."""

from __future__ import annotations

import re
from dataclasses import replace
from functools import partial
from html.parser import HTMLParser

import numpy as np
import pytest

from socibrain.report.figures.by_site import site_panels
from socibrain.report.figures.look import as_svg, our_look
from socibrain.report.figures.person_by_person import person_figure
from socibrain.report.gallery import figure_png
from socibrain.report.methods import describe_methods
from socibrain.report.page import render_report
from socibrain.report.tables import site_rows
from tests.report.made_study import (
    RECORD,
    SITES,
    finding,
    findings,
    made_cohort,
    made_material,
    typical_findings,
)

EMPTY_ELEMENTS = {"meta", "br", "hr", "img", "link", "input", "wbr"}


class Outline(HTMLParser):
    """What a page is built of; fails on elements closed in the wrong order."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.open: list[str] = []
        self.ids: list[str] = []
        self.links: list[str] = []
        self.elements: list[tuple[str, dict[str, str | None]]] = []
        self.words: list[str] = []
        self.feed(text)
        self.close()
        assert not self.open, f"left open: {self.open}"

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        given = dict(attrs)
        assert len(given) == len(attrs), f"an attribute of <{tag}> stands twice"
        self.elements.append((tag, given))
        self.ids += [given["id"] or ""] if "id" in given else []
        self.links += [value for key in ("href", "src", "xlink:href") if (value := given.get(key))]
        if tag not in EMPTY_ELEMENTS:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.handle_starttag(tag, attrs)
        if tag not in EMPTY_ELEMENTS:
            self.open.pop()

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag, f"</{tag}> closes something else"

    def handle_data(self, data: str) -> None:
        if self.open and self.open[-1] != "style":
            self.words.append(data)

    @property
    def text(self) -> str:
        return re.sub(r"\s+", " ", " ".join(self.words))


@pytest.fixture(scope="module")
def page() -> str:
    return render_report(made_material())


@pytest.fixture(scope="module")
def outline(page: str) -> Outline:
    return Outline(page)


def sections(text: str) -> list[str]:
    return re.findall(r'<section id="([a-z]+)"', text)


def test_the_page_is_sound_html(page: str, outline: Outline) -> None:
    assert page.startswith("<!DOCTYPE html>")
    names = [name for name, _ in outline.elements]
    assert names.count("h1") == names.count("main") == names.count("title") - names.count("svg") == 1
    assert len(outline.ids) == len(set(outline.ids))


def test_every_link_and_reference_leads_to_something_on_the_page(page: str, outline: Outline) -> None:
    targets = outline.links + re.findall(r"url\(([^)]+)\)", page)
    labels = [given["aria-labelledby"] for _, given in outline.elements if "aria-labelledby" in given]
    assert {target.removeprefix("#") for target in targets} | set(labels) <= set(outline.ids)


def test_nothing_is_fetched_and_no_script_can_run(page: str, outline: Outline) -> None:
    assert "http" not in re.sub(r'http-equiv|"http://www.w3.org/[^"]*"', "", page)
    assert "@import" not in page
    assert not {name for name, _ in outline.elements} & {"script", "iframe", "object", "embed", "link", "img"}
    policy = [given["content"] for _, given in outline.elements if "http-equiv" in given]
    assert policy == ["default-src 'none'; style-src 'unsafe-inline'; img-src data:"]


def test_every_figure_has_words_in_its_place(outline: Outline) -> None:
    drawings = [given for name, given in outline.elements if name == "svg"]
    assert len(drawings) == 12
    assert all(given["role"] == "img" and given["aria-labelledby"] for given in drawings)


def test_no_person_can_be_found_by_id(page: str) -> None:
    material = made_material()
    ids = set(material.cohort.persons["person"]) | set(typical_findings().findings[0].people)
    ids |= set(material.findings.left_out["person"]) if material.findings else set()
    assert len(ids) > 300
    assert [person for person in ids if person in page] == []
    assert "brains/" not in page
    assert "2 files of single people, together" in page


def test_paths_of_the_machine_stay_away(page: str) -> None:
    assert "/somewhere" not in page


def test_small_cells_are_hidden() -> None:
    cohort = made_cohort()
    sites = cohort.sites.copy()
    sites.loc[0, ["people", "on_roster", "answered", "with_brain"]] = [3, 3, 2, 1]
    sites.loc[1, ["people", "on_roster", "answered", "with_brain"]] = [24, 24, 22, 2]
    text = Outline(render_report(made_material(cohort=replace(cohort, sites=sites), findings=None))).text
    assert "Amber Quay <5 – – –" in text
    assert "Birch Point ≥5 > 79 % < 21 %" in text
    assert "brain passed quality head motion above 0.3 mm ≥5" in text
    assert "brain passed quality a dead region <5" in text
    assert "≥5 did not answer <5 asked to be left out" in text.replace("  ", " ")


def test_people_of_small_sites_are_not_drawn_apart() -> None:
    one = finding(n=24, n_sites=12)
    few = replace(one, sites=(*one.sites[:20], *["Birch Point"] * 4))  # 6 there, 1 or 2 elsewhere
    text = Outline(render_report(made_material(findings=findings([few])))).text
    drawn = re.search(r"The same people, each site apart.*?not drawn apart", text)
    assert drawn
    assert "11 further sites are not drawn apart" in drawn[0]


def test_same_material_same_bytes(page: str) -> None:
    assert render_report(made_material()) == page


def test_the_page_of_300_people_is_small(page: str) -> None:
    assert len(page.encode()) < 2_000_000


def test_hostile_words_stay_words() -> None:
    bad = "<script>alert('x')</script>&\"'"
    cohort = made_cohort()
    columns = cohort.columns | {
        name: replace(each, label=f"{bad} {name}") for name, each in cohort.columns.items() if each.origin
    }
    persons = cohort.persons.replace({"site": {SITES[0]: bad}})
    sites = cohort.sites.replace({"site": {SITES[0]: bad}})
    one = finding()
    one = replace(
        one,
        hypothesis=one.hypothesis.model_copy(update={"says": bad}),
        sites=tuple(bad if site == SITES[0] else site for site in one.sites),
    )
    text = render_report(
        made_material(
            title=bad, question=bad, study_id=bad, plan_text=bad, findings=findings([one]),
            cohort=replace(cohort, columns=columns, persons=persons, sites=sites),
            record={"seconds": {bad: bad}},
        )
    )  # fmt: skip
    assert "<script" not in text
    assert "alert('x')" in Outline(text).text


def test_dollar_signs_in_names_are_not_read_as_formulas() -> None:
    with our_look():
        drawn = as_svg(person_figure(finding(), "Cost $a$ _{", "y"), "x")
    assert "Cost $a$ _{" in Outline(drawn).text


def test_a_full_study_has_all_sections(page: str) -> None:
    assert sections(page) == [
        "glance", "flow", "sites", "network", "brains", "findings", "methods", "cautions", "provenance",
    ]  # fmt: skip


def test_a_brain_only_study_has_no_network() -> None:
    text = render_report(made_material(cohort=made_cohort(social=False), findings=None))
    assert sections(text) == ["glance", "flow", "sites", "brains", "methods", "cautions", "provenance"]
    assert "No hypothesis has been put to this study yet." in text
    assert "Positions were computed" not in text
    assert "Questionnaire" not in text


def test_a_social_only_study_has_no_brains() -> None:
    text = render_report(made_material(cohort=made_cohort(brain=False), findings=None, record={}))
    assert sections(text) == ["glance", "flow", "sites", "network", "methods", "cautions"]
    assert "Usable brain network" not in text


def test_a_plan_whose_hypotheses_were_all_refused_still_makes_a_page() -> None:
    refused = finding(status="refused", reason="the predictor does not vary within any site", n=0, n_sites=0)
    text = render_report(made_material(findings=findings([refused])))
    assert "This hypothesis was not tested: the predictor does not vary within any site." in text
    assert "association found" not in text
    assert "Freedman" not in text


def test_an_empty_study_still_makes_a_page() -> None:
    cohort = made_cohort(social=False, brain=False)
    empty = replace(cohort, sites=cohort.sites.iloc[:0], problems=cohort.problems.iloc[:0])
    assert "glance" in sections(render_report(made_material(cohort=empty, findings=None)))


def test_a_slope_of_exactly_zero_is_drawn_without_a_band() -> None:
    one = replace(finding(estimate=0.0, p=1.0, p_family=1.0), raw_estimate=0.0)
    assert not person_figure(one, "x", "y").figure.axes[0].collections


def test_methods_follow_the_options_and_the_record(outline: Outline) -> None:
    assert (
        "a random intercept for site, its variance estimated by restricted maximum likelihood" in outline.text
    )
    assert "with 9,999 random shuffles (seed 20)" in outline.text
    assert "Each observed fit was made again with statsmodels 0.15.0" in outline.text
    assert "In “rest”, a weight is a correlation after Fisher's z, negative ones dropped" in outline.text
    assert "communities were sought 50 times at resolution 1." in outline.text
    assert "Burt (1992)" in outline.text


def test_methods_quote_what_people_were_asked() -> None:
    says = dict(RECORD["study_says"])  # type: ignore[call-overload]
    says["questionnaire"] = {"questions": {"advice": {"asks": "Whom do you ask?", "cap": 6}}}
    methods = describe_methods(made_material(record={**RECORD, "study_says": says}))
    assert "Question “advice” asked: “Whom do you ask?”, with up to 6 names." in methods.paragraphs[0]


def test_methods_say_that_families_are_corrected_apart() -> None:
    two = findings([finding(), finding("others"), finding("own", family="own")])
    words = "There are 3 tested hypotheses in 2 families: p is corrected within families, not across them."
    assert words in describe_methods(made_material(findings=two)).paragraphs[2]
    assert "families" not in describe_methods(made_material()).paragraphs[2]


def test_references_hold_the_sources_of_the_measures_used() -> None:
    methods = describe_methods(made_material())
    assert {"Burt (1992).", "Guimerà & Amaral (2005)."} <= set(methods.references)
    assert any(work.startswith("Freedman") for work in methods.references)
    assert list(methods.references) == sorted(methods.references, key=str.casefold)


def test_captions_say_how_to_read_the_measures(outline: Outline) -> None:
    assert "“Constraint” (advice): higher = contacts are tied to each other." in outline.text


def test_ids_break_behind_underscores_only(page: str) -> None:
    one = finding("constraint_and_age")
    text = render_report(made_material(findings=findings([one])))
    assert '<th scope="row">constraint_<wbr>and_<wbr>age</th>' in text
    assert "overflow-wrap: anywhere; min-width" not in page


def test_methods_of_fixed_sites_do_not_speak_of_random_ones() -> None:
    fixed = replace(typical_findings(), options=replace(typical_findings().options, sites="fixed"))
    methods = describe_methods(made_material(findings=fixed))
    assert "fitted by ordinary least squares with a level of its own for every site" in methods.paragraphs[1]
    assert not any(
        word in methods.paragraphs[1]
        for word in ("random", "Satterthwaite", "split in the same way", "mean of the site")
    )
    assert not any("Patterson" in work for work in methods.references)


def test_a_one_sided_answer_says_so_wherever_its_p_stands() -> None:
    one = finding(direction="negative", one_sided=True)
    text = Outline(render_report(made_material(findings=findings([one])))).text
    for words in ("one-sided p = 0.001", "0.001, one-sided", "p by shuffling, one-sided 0.0004",
                  "p in its family, one-sided 0.001", "The test is one-sided"):  # fmt: skip
        assert words in text
    assert "dashed" not in text
    assert "dashed: as far on the other side" in Outline(render_report(made_material())).text


def test_cautions_are_always_there(outline: Outline) -> None:
    for words in (
        "may be used to diagnose anybody, or to choose or rank people",
        "Associations are not causes.",
        "for reasons not in the model, p is too small; where the outcome spreads wider at one end of the "
        "predictor, p can be wrong, mostly too small.",
        "People who were named did not all consent to be.",
        "ethics board, local law and licensed practitioners",
    ):
        assert words in outline.text


def test_seeds_and_digests_stand_in_the_provenance(outline: Outline) -> None:
    digest = "01" * 32
    for words in ("Seed of the study 11", "Seed of the plan 20", f"people.tsv {digest}", "version 0.1.0"):
        assert words in outline.text


def test_one_figure_can_be_had_as_a_picture() -> None:
    assert figure_png(made_material(), "flow").startswith(b"\x89PNG")
    with pytest.raises(KeyError, match="there is no figure 'flo'; there are: flow, network"):
        figure_png(made_material(), "flo")


def test_people_are_drawn_in_an_order_that_tells_nothing() -> None:
    one = finding()
    order = np.random.default_rng(1).permutation(one.n)
    other = replace(
        one,
        sites=tuple(str(site) for site in np.array(one.sites)[order]),
        outcome_residual=one.outcome_residual[order],
        predictor_residual=one.predictor_residual[order],
    )
    with our_look():
        for draw in (partial(person_figure, predictor="x", outcome="y"), site_panels):
            assert as_svg(draw(one), "a") == as_svg(draw(other), "a")


def test_missing_values_of_a_site_are_dashes() -> None:
    cohort = made_cohort()
    sites = cohort.sites.assign(**{"advice.rich_club_p": np.nan})
    rows = site_rows(made_material(cohort=replace(cohort, sites=sites)), "advice")
    assert rows.headings[-1] == "Rich-club test (p)"
    assert {row[-1] for row in rows.rows} == {"–"}
