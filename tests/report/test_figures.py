"""Figures: colours that everyone can tell apart, counts that are not told, drawings that are right."""

from __future__ import annotations

import itertools
from collections import Counter
from dataclasses import replace

import numpy as np
import pandas as pd
import pytest

from socibrain.link.finding import Finding
from socibrain.report.figures.by_site import drawn_sites
from socibrain.report.figures.flow import read_steps
from socibrain.report.figures.look import AT_NIGHT, CLASSES, INK, MAIN, OTHERS, PAPER, SHAPES, SIGN, SOFT
from socibrain.report.figures.person_by_person import person_figure
from socibrain.report.figures.site_network import (
    OTHER,
    DrawnSite,
    choose_site,
    class_styles,
    fold_classes,
    network_figure,
)
from socibrain.report.figures.systems import systems_figure
from socibrain.report.gallery import gallery, split_in_two
from socibrain.report.material import ReportInput
from socibrain.report.notation import breakdown, share
from socibrain.report.page import render_report
from tests.report.made_study import finding, findings, made_flow, made_material

# Machado, Oliveira & Fernandes (2009), full severity, in linear light; from memory.
SIGHT = {
    "full": np.eye(3),
    "no red": np.array(
        [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]]
    ),
    "no green": np.array(
        [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.011820, 0.042940, 0.968881]]
    ),
    "no blue": np.array(
        [[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602], [0.004733, 0.691367, 0.303900]]
    ),
}


def light(colour: str) -> np.ndarray:
    parts = np.array([int(colour[k : k + 2], 16) for k in (1, 3, 5)]) / 255
    return np.where(parts <= 0.04045, parts / 12.92, ((parts + 0.055) / 1.055) ** 2.4)


def contrast(one: str, other: str) -> float:
    """Contrast ratio of WCAG 2: (lighter + .05) / (darker + .05)."""
    weights = np.array([0.2126, 0.7152, 0.0722])
    low, high = sorted([float(light(one) @ weights), float(light(other) @ weights)])
    return (high + 0.05) / (low + 0.05)


def lab(linear: np.ndarray) -> np.ndarray:
    """CIE L*a*b* under D65."""
    to_xyz = np.array(
        [
            [0.4124564, 0.3575761, 0.1804375],
            [0.2126729, 0.7151522, 0.0721750],
            [0.0193339, 0.1191920, 0.9503041],
        ]
    )
    x, y, z = np.cbrt(np.clip(to_xyz @ np.clip(linear, 0, 1) / [0.95047, 1.0, 1.08883], 1e-9, None))
    return np.array([116 * y - 16, 500 * (x - y), 200 * (y - z)])


def test_the_measure_of_contrast_is_right() -> None:
    assert contrast("#000000", "#ffffff") == pytest.approx(21)
    assert contrast("#777777", "#ffffff") == pytest.approx(4.48, abs=0.01)


@pytest.mark.parametrize("night", [False, True])
def test_shapes_stand_out_from_the_page(night: bool) -> None:
    worn = AT_NIGHT if night else {colour: colour for colour in AT_NIGHT}
    for colour in (*CLASSES, OTHERS, MAIN, SIGN):
        assert contrast(worn[colour], worn[PAPER]) >= 3, colour
    for colour in (INK, SOFT):
        assert contrast(worn[colour], worn[PAPER]) >= 4.5, colour


@pytest.mark.parametrize("night", [False, True])
@pytest.mark.parametrize("sight", list(SIGHT))
def test_classes_are_apart_in_everyones_sight(night: bool, sight: str) -> None:
    worn = [AT_NIGHT[colour] if night else colour for colour in CLASSES]
    seen = [lab(SIGHT[sight] @ light(colour)) for colour in worn]
    closest = min(float(np.linalg.norm(one - other)) for one, other in itertools.combinations(seen, 2))
    assert closest >= 25  # a just noticeable difference is about 2.3 (from memory)
    assert len(set(SHAPES)) == len(CLASSES)


def test_small_classes_are_drawn_together() -> None:
    roles = ["deck"] * 8 + ["engine"] * 5 + ["helm"] * 2 + ["shore"] * 3
    assert fold_classes(roles) == ("deck",) * 8 + ("engine",) * 5 + (OTHER,) * 5
    lone = ["deck"] * 8 + ["engine"] * 5 + ["helm"]
    assert fold_classes(lone) == ("deck",) * 8 + (OTHER,) * 6
    assert fold_classes([None] * 6) == (OTHER,) * 6


def test_styles_are_one_to_one() -> None:
    styles = class_styles(("b", "a", OTHER))
    assert list(styles) == ["a", "b", OTHER]
    assert len({colour for colour, _ in styles.values()}) == len({shape for _, shape in styles.values()}) == 3


def test_the_drawn_site_holds_everyone_and_no_name() -> None:
    material = made_material()
    site = choose_site(material, question="advice", column="advice.constraint")
    assert site is not None
    drawing = network_figure(site, size_label="constraint (advice)")
    assert str(len(site.ties)) not in drawing.alternative
    people = [line for line in drawing.figure.axes[0].lines if line.get_marker() != "None"]
    assert len(people) == len(site.ties)
    mutual = np.triu((site.ties * site.ties.T), 1).sum()
    assert len(drawing.figure.axes[0].lines) - len(people) == mutual
    one_way = site.ties.sum() - 2 * mutual
    assert len(drawing.figure.axes[0].patches) == one_way
    hollow = [line for line in people if line.get_markerfacecolor() == PAPER]
    assert len(hollow) == (~site.answered).sum() == 0


def silenced(site: DrawnSite, silent: int) -> DrawnSite:
    """The site as if its first people had not answered."""
    answered = np.arange(len(site.ties)) >= silent
    return replace(site, ties=site.ties * answered[:, None], answered=answered)


@pytest.mark.parametrize("silent", [0, 1, 4, 5, 20, 21, 24])
def test_people_who_did_not_answer_are_marked_only_where_they_and_the_others_are_many(silent: int) -> None:
    site = choose_site(made_material(), question="advice", column="advice.constraint")
    assert site is not None
    assert len(site.ties) == 25
    site = silenced(site, silent)
    drawing = network_figure(site, size_label="")
    axes = drawing.figure.axes[0]
    people = [line for line in axes.lines if line.get_marker() != "None"]
    hollow = [line for line in people if line.get_markerfacecolor() == PAPER]
    legend = [text.get_text() for text in drawing.figure.legends[0].get_texts()]
    marked = silent if silent in (5, 20) else 0
    assert len(people) == 25
    assert len(hollow) == marked
    assert ("did not answer" in legend) == ("hollow" in drawing.alternative) == (marked > 0)
    few = silent not in (0, 5, 20)
    assert site.few_silent == few
    assert ("one named the other" in legend) == bool(axes.patches) == (not few)
    if few:
        pairs = np.triu(np.maximum(site.ties, site.ties.T), 1).sum()
        assert len(axes.lines) - len(people) == pairs


def test_the_drawn_site_is_one_that_gives_nobody_away() -> None:
    material = made_material()
    networks = [
        replace(each, answered=np.arange(len(each.people)) >= (2 if each.site != "Kelp Sound" else 6))
        for each in material.cohort.social
    ]
    material = replace(material, cohort=replace(material.cohort, social=tuple(networks)))
    site = choose_site(material, question="advice", column="")
    assert site is not None
    assert (~site.answered).sum() == 6
    few = replace(material, cohort=replace(material.cohort, social=tuple(networks[:3])))
    shown = choose_site(few, question="advice", column="")
    assert shown is not None
    assert shown.few_silent


@pytest.mark.parametrize(("silent", "marks"), [(0, 0), (2, 0), (6, 6)])
def test_the_caption_tells_what_is_not_marked(silent: int, marks: int) -> None:
    material = made_material(findings=None)
    networks = [
        replace(each, named=each.named * (np.arange(25) >= silent)[:, None], answered=np.arange(25) >= silent)
        for each in material.cohort.social
    ]
    page = render_report(replace(material, cohort=replace(material.cohort, social=tuple(networks))))
    caption = page[page.index("Neither its name nor who is who is told") :].split("</figcaption>")[0]
    assert ("they are not marked" in caption) == (silent == 2)
    assert ("known only from others’ answers" in caption) == (silent > 0)
    assert ("people who did not answer are hollow" in page) == (marks > 0)


def test_who_has_no_position_is_not_told_by_size() -> None:
    site = choose_site(made_material(), question="advice", column="advice.constraint")
    assert site is not None
    position = np.arange(25.0)
    position[:3] = np.nan
    axes = network_figure(replace(site, position=position), size_label="x").figure.axes[0]
    sizes = [line.get_markersize() for line in axes.lines if line.get_marker() != "None"]
    assert sorted(sizes.count(size) for size in set(sizes)) == [7, 7, 11]


def test_no_site_is_drawn_where_none_has_ties() -> None:
    assert choose_site(made_material(), question="unasked", column="") is None


def test_steps_of_the_flow_add_up_and_hide_small_cells() -> None:
    flow = made_flow(social=True, brain=True)
    steps = read_steps(flow[flow["branch"] == "social"])
    assert [step.people for step in steps] == [300, 276, 273]
    assert all(later.people == step.people - later.left_out for step, later in itertools.pairwise(steps))
    assert steps[1].reasons == ("≥5  did not answer", "<5  asked to be left out")
    assert steps[2].reasons == ("no tie under the tie rule in any question",)


def test_reasons_with_colons_and_semicolons_are_read_whole() -> None:
    row = made_flow(social=True, brain=False).head(1).assign(reasons="rest: moved; a lot: 11; other: 7")
    assert read_steps(row)[0].reasons == ("11  rest: moved; a lot", "7  other")


def test_the_line_and_band_are_the_slope_and_its_interval_in_raw_units() -> None:
    one = finding(estimate=-0.3, ci=(-0.5, -0.1))
    axes = person_figure(one, "x", "y").figure.axes[0]
    line = next(each for each in axes.lines if each.get_linewidth() == 2)
    run, rise = np.ptp(line.get_xdata()), line.get_ydata()[-1] - line.get_ydata()[0]
    unit = 0.04 / 0.13
    assert rise / run == pytest.approx(-0.3 * unit)
    corners = axes.collections[0].get_paths()[0].vertices
    slopes = (corners[:, 1] / corners[:, 0])[np.abs(corners[:, 0]) > 1e-6]
    assert (slopes.min(), slopes.max()) == (pytest.approx(-0.5 * unit), pytest.approx(-0.1 * unit))


def test_sites_with_fewer_than_five_people_get_no_panel() -> None:
    assert drawn_sites(finding(n=12 * 5 + 3)) == drawn_sites(finding(n=12 * 5))
    assert drawn_sites(finding(n=12 * 5 - 1))[-1] != "Low Light"


def halved(finding_: Finding, members: int) -> ReportInput:
    """Material where each site has that many members, the rest of each site none."""
    material, seen = made_material(findings=findings([finding_])), Counter[str]()
    persons = material.cohort.persons.copy()
    persons["advice.club"] = np.nan
    for place, site in enumerate(finding_.sites):
        persons.loc[place, ["person", "site", "visit"]] = [finding_.people[place], site, "1"]
        persons.loc[place, "advice.club"] = float(seen[site] < members)
        seen[site] += 1
    return replace(material, cohort=replace(material.cohort, persons=persons))


@pytest.mark.parametrize(("members", "panels"), [(0, True), (3, False), (5, True), (11, False), (14, True)])
@pytest.mark.parametrize("side", ["predictor", "outcome"])
def test_sites_are_not_drawn_apart_where_few_share_one_of_two_values(
    members: int, panels: bool, side: str
) -> None:
    asked = finding(**{side: "advice.club"})  # 14 people a site
    material = halved(asked, members)
    assert ("sites-brokers" in gallery(material)) == panels
    assert split_in_two(asked, material) == ("" if panels else "advice.club")
    assert ("Sites are not drawn apart" in render_report(material)) == (not panels)


def test_sites_are_drawn_apart_where_a_measure_has_many_values() -> None:
    asked = finding(predictor="advice.club")
    material = halved(asked, 3)
    material.cohort.persons.loc[0, "advice.club"] = 2.0
    assert "sites-brokers" in gallery(material)


def test_regions_show_their_mean_over_people() -> None:
    rows = pd.DataFrame(
        [("a", "one", "s", 0.2), ("b", "one", "s", 0.4), ("a", "two", "s", 0.8)],
        columns=["person", "region", "system", "rest.p"],
    )
    axes = systems_figure(rows, "rest.p", "P").figure.axes[0]
    dots = next(line for line in axes.lines if line.get_marker() == "D")
    assert list(dots.get_xdata()) == pytest.approx([0.3, 0.8])


def test_hidden_counts_cannot_be_had_from_the_rest() -> None:
    for counts in ([40, 12, 3], [5, 1], [9, 9, 2]):
        assert sum(not shown.isdecimal() for shown in breakdown(counts)) >= 2
    assert breakdown([0, 0, 8]) == ["0", "0", "8"]


@pytest.mark.parametrize("whole", range(5, 40))
def test_shares_bound_small_parts_truthfully(whole: int) -> None:
    for part in range(whole + 1):
        told, true = share(part, whole), 100 * part / whole
        number = float(told.strip("<> %"))
        if told.startswith("<"):
            assert true < number
        elif told.startswith(">"):
            assert true > number
        else:
            assert number == pytest.approx(true, abs=0.5)
            assert part in (0, whole) or 5 <= part <= whole - 5
