"""What a hypothesis means in numbers, and when it cannot be answered."""

import numpy as np
import pandas as pd
import pytest

from socibrain.cohort.table import Column
from socibrain.link.design import Design, Refused, make_designs
from socibrain.link.options import LinkOptions
from socibrain.link.sample import draw_sample
from tests.link.made_cohorts import ask, cohort_of, made_persons


def design_of(persons, hypothesis, sites="random"):
    options = LinkOptions(seed=1, alpha=0.05, shuffles=99, sites=sites, visit="")
    sample = draw_sample(cohort_of(persons), [hypothesis], visit="", family="all")
    return make_designs(sample, [hypothesis], options)[0]


def reason_of(persons, hypothesis):
    refused = design_of(persons, hypothesis)
    assert isinstance(refused, Refused)
    return refused.reason


def test_by_hand() -> None:
    persons = pd.DataFrame(
        {
            "person": ["c", "b", "a", "d", "e"],
            "site": ["south", "north", "north", "south", "south"],
            "x": [4.0, 3.0, 1.0, 5.0, 9.0],
            "y": [1.0, 2.0, 0.0, 1.0, 4.0],
        }
    )
    design = design_of(persons, ask(), sites="fixed")
    assert isinstance(design, Design)
    assert design.people == ("a", "b", "c", "d", "e")
    assert design.site_names == ("north", "north", "south", "south", "south")
    # deviations of x: -1 1 | -2 -1 3, squares 16 over 5 people − 2 sites; of y: -1 1 | -1 -1 2, squares 8
    assert design.predictor_sd == pytest.approx(np.sqrt(16 / 3))
    assert design.outcome_sd == pytest.approx(np.sqrt(8 / 3))
    np.testing.assert_allclose(design.within[:, -1] * design.predictor_sd, [-1, 1, -2, -1, 3])
    assert design.between.tolist() == [[1, 0], [1, 0], [0, 1], [0, 1], [0, 1]]
    assert not design.context
    with pytest.raises(ValueError, match="read-only"):
        design.within[0, 0] = 1


def test_the_parts_of_split_columns_are_orthogonal() -> None:
    design = design_of(made_persons(), ask("y", "x", "z", "sex", "other"))
    assert np.abs(design.within.T @ design.between).max() < 1e-10
    assert design.context
    assert design.between.shape[1] == 4  # intercept, x, z, sex; 5 sites leave no room for more
    assert np.linalg.matrix_rank(design.columns) == design.columns.shape[1]
    assert design.notes == (
        "'sex' is coded against 'woman'",
        "site means of 'other' were dropped: 5 sites cannot carry them",
        "5 sites tell little of the variance between sites: fixed sites are advised",
    )


def test_text_is_coded_against_the_most_frequent_value_then_the_alphabet() -> None:
    persons = made_persons(sites=(10, 10, 10))
    persons["hand"] = (["right"] * 5 + ["left"] * 5) * 3
    persons["hand"] = persons["hand"].where(persons.index % 10 != 9, "both")
    design = design_of(persons, ask("y", "x", "hand"))
    assert "'hand' is coded against 'right'" in design.notes
    assert design.within.shape[1] == 3
    persons["hand"] = ["right", "left"] * 15
    assert "'hand' is coded against 'left'" in design_of(persons, ask("y", "x", "hand")).notes


def test_columns_that_add_nothing_are_dropped_and_said() -> None:
    persons = made_persons(sites=(8, 8, 8, 8, 8))
    persons["twice"] = 2 * persons["z"] - 1
    persons["size"] = persons["site"].str[-1].astype(float)
    persons["balanced"] = np.tile(np.arange(8.0), 5)
    design = design_of(persons, ask("y", "x", "z", "twice", "size", "balanced"))
    assert design.within.shape[1] == 3  # z, balanced, x
    assert design.between.shape[1] == 4  # intercept, x, z, size
    assert design.notes == (
        "'twice' follows from the other adjustments within sites and was dropped there",
        "'size' does not vary within sites: only its site means adjust",
        "site means of 'twice' follow from the others and were dropped",
        "site means of 'balanced' are all the same and were dropped",
        "5 sites tell little of the variance between sites: fixed sites are advised",
    )


def test_one_site_and_two_sites_have_no_site_means() -> None:
    one = design_of(made_persons(sites=(20,)), ask("y", "x", "z"))
    assert one.between.shape == (20, 1)
    assert not one.context
    two = design_of(made_persons(sites=(20, 9)), ask("y", "x"))
    assert two.between.shape == (29, 1)
    assert two.notes == (
        "site means of 'x' were dropped: 2 sites cannot carry them",
        "2 sites tell little of the variance between sites: fixed sites are advised",
    )
    assert design_of(made_persons(sites=(20, 9)), ask("y", "x"), "fixed").notes == ()
    assert one.notes == design_of(made_persons(sites=(9,) * 6), ask("y", "x")).notes == ()


def test_a_site_with_one_person_is_said() -> None:
    assert "1 of 4 sites have one person only" in design_of(made_persons(sites=(9, 1, 7, 8)), ask()).notes[-1]


def test_true_and_false_are_numbers() -> None:
    persons = made_persons()
    persons["member"] = persons["x"] > 0
    plain = design_of(persons.assign(member=persons["member"].astype(float)), ask("y", "member"))
    asked = design_of(persons, ask("y", "member"))
    assert np.array_equal(asked.within, plain.within)


@pytest.mark.parametrize(
    ("change", "hypothesis", "reason"),
    [
        (
            {"x": lambda p: p["site"].str[-1].astype(float)},
            ask(),
            "predictor 'x' is the same for everyone within",
        ),
        ({"y": 3.5}, ask(), "outcome 'y' is the same for everyone within each site"),
        ({}, ask("y", "sex"), "'sex' holds text; outcome and predictor must be numbers"),
        ({}, ask("sex", "x"), "'sex' holds text; outcome and predictor must be numbers"),
        ({"z": lambda p: 3 - 2 * p["x"]}, ask("y", "x", "z"), "predictor 'x' follows from the adjustments"),
        ({"z": lambda p: 3 - 2 * p["y"]}, ask("y", "x", "z"), "outcome 'y' follows from the adjustments"),
        (
            {"y": lambda p: 3 - 2 * p["x"]},
            ask("y", "x", "z"),
            "outcome 'y' follows from the predictor without",
        ),
        ({}, ask("y", "y"), "outcome and predictor are the same column"),
        (
            {"x": np.nan},
            ask(),
            "nobody has all columns that the family asks for: 'x' has no value for anybody: missing",
        ),
        ({}, ask(one_sided=True), "a one-sided test needs a direction"),
    ],
)
def test_refusals(change, hypothesis, reason: str) -> None:
    assert reason in reason_of(made_persons().assign(**change), hypothesis)


def test_outcome_and_predictor_of_one_network_go_together_by_construction() -> None:
    persons = made_persons().rename(columns={"y": "conn.a", "x": "conn.b", "z": "advice.c"})
    columns = tuple(
        Column(name, name, "", "", "", "", "", name.split(".")[1], name.split(".")[0], None, None)
        for name in ("conn.a", "conn.b", "advice.c")
    )
    options = LinkOptions(seed=1, alpha=0.05, shuffles=99, sites="random", visit="")
    asked = [
        ask("conn.a", "conn.b"), ask("conn.a", "advice.c"), ask("conn.a", "advice.c", "conn.b"),
        ask("other", "conn.b"),
    ]  # fmt: skip
    sample = draw_sample(cohort_of(persons, columns=columns), asked, visit="", family="all")
    together = (
        "outcome and predictor are computed from the same network ('conn'): "
        "they go together by construction, so a small p may say nothing about people"
    )
    told = [together in design.notes for design in make_designs(sample, asked, options)]
    assert told == [True, False, False, False]


def test_constant_predictor_points_to_the_site_scale() -> None:
    persons = made_persons().assign(x=1.0)
    assert reason_of(persons, ask()).endswith("asks about differences within sites")


def test_fewer_people_than_parameters() -> None:
    persons = made_persons(sites=(2, 2, 2))
    assert isinstance(design_of(persons, ask("y", "x", "z")), Design)
    reason = reason_of(persons, ask("y", "x", "z", "other"))
    assert reason == "6 people in 3 sites are too few for 3 within-site effects beside the sites' own levels"
