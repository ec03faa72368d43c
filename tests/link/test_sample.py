"""Who is in a family's sample, and why the others are not."""

from dataclasses import replace

import numpy as np
import pandas as pd
import pytest

from socibrain.cohort.table import Column
from socibrain.errors import DocumentRefused
from socibrain.link.sample import draw_sample
from socibrain.networks.social import SocialNetwork
from tests.link.made_cohorts import LEDGER, ask, cohort_of

PERSONS = pd.DataFrame(
    {
        "person": ["a", "b", "c", "d", "e", "f"],
        "visit": ["1", "1", "", "2", "1", "1"],
        "site": ["s", "s", "s", "s", "t", "t"],
        "rest.strength": [1.0, 2.0, np.nan, 4.0, np.inf, 6.0],
        "age": [30.0, np.nan, 32.0, 33.0, 34.0, 35.0],
        "sex": ["w", "m", "w", "m", "w", None],
        "advice.constraint": [0.5, 0.4, 0.3, 0.2, 0.1, 0.9],
    }
)


def column(name: str, undefined: str) -> Column:
    origin, measure = name.split(".")
    return Column(name, name, "", "", "", undefined, "", measure, origin, None, None)


def sample_of(*hypotheses, visit="1"):
    ledger = pd.DataFrame([["scanned", "brain", "c", "s", "", "not scanned"]], columns=LEDGER)
    columns = (column("rest.strength", "never"), column("advice.constraint", "no contacts"))
    cohort = cohort_of(PERSONS, ledger=ledger, columns=columns)
    return draw_sample(cohort, hypotheses, visit=visit, family="first")


def empty_site() -> SocialNetwork:
    nobody = np.zeros((0, 0), dtype=bool)
    return SocialNetwork("s", "advice", (), nobody, np.zeros(0, dtype=bool), (), "either")


def test_everyone_is_in_or_has_a_reason() -> None:
    sample = sample_of(
        ask("rest.strength", "advice.constraint", "age"), ask("rest.strength", "advice.constraint", "sex")
    )
    assert list(sample.table["person"]) == ["a"]
    assert sample.left_out.to_numpy().tolist() == [
        ["first", "b", "s", "'age': missing"],
        ["first", "c", "s", "not scanned"],
        ["first", "d", "s", "no usable scan at visit '1'"],
        ["first", "e", "t", "'rest.strength': undefined (never)"],
        ["first", "f", "t", "'sex': missing"],
    ]


def test_people_without_a_scan_count_where_no_brain_is_asked_for() -> None:
    assert list(sample_of(ask("age", "advice.constraint")).table["person"]) == ["a", "c", "e", "f"]


def test_the_visit_does_not_matter_where_nothing_comes_from_a_scan() -> None:
    columns = (column("rest.strength", "never"), column("advice.constraint", "no contacts"))
    cohort = replace(cohort_of(PERSONS, columns=columns), social=(empty_site(),))
    for asked, people in (("advice.constraint", "acdef"), ("rest.strength", "af")):
        sample = draw_sample(cohort, [ask("age", asked)], visit="1", family="first")
        assert "".join(sample.table["person"]) == people


def test_an_empty_sample_says_which_column_nobody_has() -> None:
    persons = PERSONS.assign(**{"advice.constraint": np.nan})
    columns = (column("rest.strength", "never"), column("advice.constraint", "no contacts"))
    cohort = cohort_of(persons, columns=columns)
    sample = draw_sample(cohort, [ask("rest.strength", "advice.constraint")], visit="1", family="first")
    assert sample.nobody == "'advice.constraint' has no value for anybody: undefined (no contacts)"
    ledger = pd.DataFrame(
        [["answered", "social", person, "s", "", "did not answer"] for person in "abc"], columns=LEDGER
    )
    cohort = replace(cohort, ledger=ledger, social=(empty_site(),))
    sample = draw_sample(cohort, [ask("age", "advice.constraint")], visit="1", family="first")
    assert sample.nobody == ("'advice.constraint' has no value for anybody: did not answer (3 of 6 people)")


def test_columns_that_nobody_has_together_are_counted() -> None:
    persons = PERSONS.assign(age=[1.0, *[np.nan] * 5], sex=[None, *"mmm", "w", "w"])
    sample = draw_sample(cohort_of(persons), [ask("age", "sex")], visit="1", family="first")
    assert sample.nobody == (
        "each has values, never all for one person of a site: "
        "'age' for 1 of 6 people, 'sex' for 5 of 6 people"
    )
    assert sample_of(ask("rest.strength", "age")).nobody == ""


def test_nobody_at_a_visit() -> None:
    persons = PERSONS[PERSONS["visit"] == "1"]
    columns = (column("rest.strength", "never"),)
    cohort = cohort_of(persons, columns=columns)
    sample = draw_sample(cohort, [ask("rest.strength", "age")], visit="2", family="first")
    assert sample.nobody == "there is no usable scan at visit '2'"


def test_another_visit_has_other_people() -> None:
    assert list(sample_of(ask("rest.strength", "age"), visit="2").table["person"]) == ["d"]


def test_unknown_columns_are_refused_together_with_the_nearest_names() -> None:
    with pytest.raises(DocumentRefused) as refused:
        sample_of(ask("rest.strenght", "agee"))
    told = str(refused.value)
    assert "did you mean 'rest.strength'?" in told
    assert "did you mean 'age'?" in told
