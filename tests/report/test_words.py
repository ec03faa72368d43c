"""Sentences say what the numbers say, no more: every case written out by hand."""

from __future__ import annotations

import re
from dataclasses import replace

import pytest

from socibrain.cohort.table import Column
from socibrain.link.finding import Finding
from socibrain.measures.catalogue import Measure, all_measures
from socibrain.report.words import Answer, answer, listed, spoken, titled
from tests.report.made_study import COLUMNS, finding, findings


def told(one: Finding, *others: Finding) -> Answer:
    return answer(one, findings([one, *others]), COLUMNS)


def test_a_negative_association_that_was_predicted() -> None:
    said = told(finding(direction="negative", role="confirmatory", adjust=("age",)), finding("other"))
    assert said.verdict == "found"
    assert said.badge == "association found"
    assert said.sentence == (
        "Within sites, people with higher values of “Constraint” (advice) tended to have lower "
        "values of “Mean participation” (rest), allowing for age."
    )
    assert said.numbers == (
        "Standardised slope −0.31 (95 % interval −0.45 to −0.17), p = 0.001 corrected for the 2 hypotheses "
        "of its family; 168 people in 12 sites; as predicted."
    )
    assert said.notes == (
        "The plan predicted a negative association.",
        "An association, not a cause: it may run either way, or come from something not measured.",
    )


def test_a_positive_association_against_the_prediction_is_said_to_be_so() -> None:
    said = told(finding(estimate=0.2, ci=(0.05, 0.35), direction="negative"))
    assert said.sentence == (
        "Within sites, people with higher values of “Constraint” (advice) tended to have higher "
        "values of “Mean participation” (rest)."
    )
    assert said.notes[0] == "The plan predicted a negative association; the one found has the opposite sign."
    assert "Exploratory: it needs to be confirmed in other people." in said.notes
    assert "corrected" not in said.numbers


def test_no_association_is_told_with_its_interval_and_without_a_claim_of_none() -> None:
    said = told(finding(estimate=0.03, ci=(-0.12, 0.18), p=0.71, p_family=0.97, direction="negative"))
    assert said.badge == "no association found"
    assert said.sentence == (
        "No association between “Constraint” (advice) and “Mean participation” (rest) was found within "
        "sites; the interval runs from −0.12 to 0.18."
    )
    assert said.notes[0] == "Not finding an association does not show that there is none."
    assert not any("predicted" in note for note in said.notes)


def test_no_association_in_a_one_sided_test_names_the_direction() -> None:
    said = told(finding(p=0.9, p_family=0.9, ci=(-0.1, 0.3), direction="negative", one_sided=True))
    assert "was found within sites in the predicted direction (negative); the interval" in said.sentence


ONE_SIDE = "The test is one-sided: it looks for a negative association only"
BORDERLINE = "The interval includes zero although p is small: read this as a borderline finding."


def one_sided(estimate: float, ci: tuple[float, float], p: float, p_family: float | None = None) -> Answer:
    family = p if p_family is None else p_family
    return told(finding(estimate=estimate, ci=ci, p=p, p_family=family, direction="negative", one_sided=True))


def test_a_one_sided_test_is_told_to_be_one() -> None:
    said = one_sided(-0.31, (-0.45, -0.17), 0.001)
    assert "(95 % interval −0.45 to −0.17), one-sided p = 0.001;" in said.numbers
    assert f"{ONE_SIDE}. The interval has two sides." in said.notes
    assert len(said.notes) == 4
    both = told(finding(direction="negative"))
    assert "one-sided" not in f"{both.numbers} {both.notes}"


@pytest.mark.parametrize(("p", "borderline"), [(0.049, False), (0.0251, False), (0.025, True), (0.01, True)])
def test_an_interval_with_zero_goes_with_a_plain_one_sided_result(p: float, borderline: bool) -> None:
    said = one_sided(-0.2, (-0.4, 0.01), p)
    assert said.verdict == "found"
    assert (BORDERLINE in said.notes) == borderline


def test_a_slope_on_the_side_where_nobody_looked_is_said_to_be_there() -> None:
    said = one_sided(0.31, (0.17, 0.45), 0.9995)
    assert said.verdict == "not found"
    assert f"{ONE_SIDE}; the slope lies on the other side, of which p says nothing." in said.notes
    assert not any("falls short" in note for note in said.notes)


def test_a_one_sided_result_that_only_the_correction_takes_away_is_told() -> None:
    said = one_sided(-0.2, (-0.39, -0.01), 0.02, 0.06)
    assert any("after correction for the family the evidence falls short" in note for note in said.notes)


@pytest.mark.parametrize(("p_family", "verdict"), [(0.05, "found"), (0.0500001, "not found")])
def test_alpha_itself_still_counts_and_nothing_above_it(p_family: float, verdict: str) -> None:
    said = told(finding(p=0.01, p_family=p_family))
    assert said.verdict == verdict
    if verdict == "not found":
        assert "p = 0.0500001;" in said.numbers


def test_an_interval_without_zero_does_not_outweigh_the_corrected_p() -> None:
    said = told(finding(p=0.03, p_family=0.08))
    assert said.verdict == "not found"
    assert (
        "The interval, made for this hypothesis alone, leaves out zero; after correction for the family the "
        "evidence falls short." in said.notes
    )


def test_a_small_p_with_zero_inside_the_interval_is_called_borderline() -> None:
    said = told(finding(ci=(-0.4, 0.01), p=0.04, p_family=0.04))
    assert "The interval includes zero although p is small: read this as a borderline finding." in said.notes


def test_boundary_and_smallest_p_are_told() -> None:
    said = told(finding(status="boundary", p=1e-4, p_family=1e-4))
    assert "The variance between sites was estimated as zero, the lowest value it can take." in said.notes
    assert "The p is the smallest that 9,999 shuffles can give." in said.notes
    few = told(finding(exhaustive=True, p=1 / 720, p_family=1 / 720))
    assert "The p is the smallest that all 720 distinct arrangements can give." in few.notes


@pytest.mark.parametrize(
    ("status", "reason", "sentence"),
    [
        ("refused", "too few people.", "This hypothesis was not tested: too few people."),
        ("failed", "no optimum was found", "This hypothesis could not be fitted: no optimum was found."),
        ("refused", "", "This hypothesis was not tested: no reason is on record."),
    ],
)
def test_refused_and_failed_say_why_and_claim_nothing(status: str, reason: str, sentence: str) -> None:
    said = told(finding(status=status, reason=reason))
    assert (said.badge, said.sentence, said.numbers, said.notes) == ("not answered", sentence, "", ())


def test_refused_hypotheses_do_not_count_in_the_family() -> None:
    said = told(finding(), finding("no", status="refused", reason="x"), finding("apart", family="own"))
    assert "corrected" not in said.numbers


def test_a_study_of_one_site_is_not_said_to_compare_within_sites() -> None:
    said = told(finding(n_sites=1))
    assert said.sentence == (
        "People with higher values of “Constraint” (advice) tended to have lower values of "
        "“Mean participation” (rest)."
    )
    assert "; 168 people; " in said.numbers
    none = told(finding(n_sites=1, p_family=0.4))
    assert "(rest) was found; the interval runs" in none.sentence
    for one in (said, none):
        assert "site" not in f"{one.sentence} {one.numbers} {one.notes}"


@pytest.mark.parametrize(
    ("asked", "p_family", "prediction"),
    [
        ({"direction": "negative"}, 0.001, "as predicted"),
        ({"direction": "positive"}, 0.001, "against the prediction"),
        ({"direction": "positive"}, 0.4, "a positive association was predicted"),
        ({}, 0.001, "no direction was predicted"),
        ({}, 0.4, "no direction was predicted"),
    ],
)
def test_the_numbers_say_what_was_predicted(asked: dict[str, str], p_family: float, prediction: str) -> None:
    assert told(finding(p_family=p_family, **asked)).numbers.endswith(f"; {prediction}.")


@pytest.mark.parametrize("passport", all_measures().values(), ids=lambda passport: passport.name)
def test_every_measure_makes_a_readable_sentence(passport: Measure) -> None:
    name = f"friends.{passport.name}"
    mine = Column(
        name, f"{passport.label} (friends)", passport.says, passport.unit, passport.reading,
        passport.undefined, passport.source, passport.name, "friends", passport.low, passport.high,
    )  # fmt: skip
    asked = [finding(predictor=name), finding(outcome=name, p_family=0.4), finding(adjust=(name,))]
    for one in asked:
        sentence = answer(one, findings([one]), COLUMNS | {name: mine}).sentence
        assert f"“{passport.label}” (friends)" in sentence
        assert not re.search(r"\)\s*\(", sentence)
        assert sentence.count("“") == sentence.count("”") == 2 + (one is asked[2])
    by_group = "people who count as “" in answer(asked[0], findings(asked), COLUMNS | {name: mine}).sentence
    assert by_group == (passport.unit == "1 = member, 0 = not")


def test_a_predictor_of_yes_or_no_is_told_as_a_group() -> None:
    club = Column(
        "advice.club",
        "Rich-club member (advice)",
        "",
        "1 = member, 0 = not",
        "",
        "",
        "",
        "club",
        "advice",
        0,
        1,
    )
    one = finding(predictor="advice.club")
    said = answer(one, findings([one]), COLUMNS | {"advice.club": club})
    assert said.sentence == (
        "Within sites, people who count as “Rich-club member” (advice) tended to have lower "
        "values of “Mean participation” (rest) than people who do not."
    )


def test_no_sentence_speaks_of_causes() -> None:
    cases = [
        finding(),
        finding(p_family=0.4),
        finding(status="boundary"),
        finding(estimate=0.2, ci=(0.1, 0.3)),
    ]
    for one in cases:
        said = told(one)
        for word in ("effect", "leads to", "because", "predicts", "increases", "reduces", "influence"):
            assert word not in f"{said.sentence} {said.numbers}"


def test_names_inside_sentences() -> None:
    assert spoken("rest.modularity", COLUMNS) == "“Q” (rest)"
    assert titled("rest.modularity", COLUMNS) == "Q (rest)"
    assert titled("scans.head_motion", {}) == "Head motion (scans)"
    assert spoken("age", COLUMNS) == "age"
    assert spoken("scans.motion (mm)", {}) == "“motion (mm)” (scans)"
    assert spoken("years_of_service", COLUMNS) == "years of service"
    assert listed([]) == ""
    assert listed(["a", "b"]) == "a and b"


def test_what_was_coded_or_dropped_on_the_way_is_told() -> None:
    said = told(replace(finding(), notes=("2 of 12 sites have one person only",)))
    assert "2 of 12 sites have one person only." in said.notes
