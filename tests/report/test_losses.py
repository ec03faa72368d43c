"""What could not be used: counted by hand, each person once, small cells hidden."""

from __future__ import annotations

from dataclasses import replace

import pandas as pd

from socibrain.networks.nominations import FATES
from socibrain.report.fault_words import FAULT_WORDS, fault_in_words
from socibrain.report.losses import (
    analysed,
    exclusion_rows,
    left_out_rows,
    other_losses,
    problem_rows,
    site_loss_rows,
)
from socibrain.report.page import render_report
from tests.report.made_study import COLUMNS, finding, findings, made_cohort, made_material

LEDGER = ["stage", "side", "person", "site", "visit", "reason"]


def test_a_lost_visit_is_told_apart_from_a_lost_person() -> None:
    rows = [("passed quality", "brain", f"p{k}", "x", "", "moved") for k in range(6)]
    rows += [("passed quality", "brain", f"q{k}", "x", "2", "moved") for k in range(5)]
    rows += [("passed quality in rest", "brain", f"q{k}", "x", "3", "moved") for k in range(5)]
    rows += [("all", "link", "p0", "x", "", "no age")]
    assert exclusion_rows(pd.DataFrame(rows, columns=LEDGER)).rows == (
        ("brain", "passed quality", "moved", "6"),
        ("brain", "passed quality, at one of their visits", "moved", "5"),
        ("brain", "passed quality in “rest”, at one of their visits", "moved", "5"),
    )


def test_sites_without_a_value_are_counted_once() -> None:
    rows = [("advice.constraint", "social", "", site, "", "nobody named") for site in ("a", "b", "b")]
    assert site_loss_rows(pd.DataFrame(rows, columns=LEDGER), COLUMNS).rows == (
        ("Constraint (advice)", "nobody named", "2"),
    )


def test_only_measures_that_hypotheses_name_are_listed_and_the_others_counted() -> None:
    losses = [("advice.constraint", "a"), ("friends.constraint", "a"), ("friends.constraint", "b")]
    losses += [("friends.in_degree", "b")]
    ledger = pd.DataFrame([(stage, "social", "", site, "", "why") for stage, site in losses], columns=LEDGER)
    assert site_loss_rows(ledger, COLUMNS, ["advice.constraint"]).rows == (
        ("Constraint (advice)", "why", "1"),
    )
    assert other_losses(ledger, ["advice.constraint"]) == 2
    cohort = made_cohort()
    page = render_report(made_material(cohort=replace(cohort, ledger=pd.concat([cohort.ledger, ledger]))))
    assert "2 further measures, which no hypothesis names, have no value in some sites: sites and" in page
    assert "Constraint (friends)" not in page


def test_people_left_out_are_counted_once_and_add_up_with_those_analysed() -> None:
    both = "did not answer; 'age': missing; 'advice.constraint': undefined (nobody; or nothing)"
    told = [both] * 7 + ["'advice.constraint': undefined (nobody; or nothing); did not answer"] * 6
    left = pd.DataFrame(
        {"family": "all", "person": [f"p{k}" for k in range(13)], "site": "x", "reason": told}
    )
    some = replace(findings([finding(n=168)]), left_out=left)
    rows = left_out_rows(some, COLUMNS).rows
    assert rows == (
        ("did not answer", "7"),
        ("Constraint (advice): undefined (nobody; or nothing)", "6"),
    )
    assert sum(int(people) for _, people in rows) == 13
    assert analysed(some) == ["181 people of the study − 13 who could not be used = 168 analysed."]


def test_few_people_left_out_stay_hidden() -> None:
    told = ["did not answer"] * 6 + ["'age': missing"] * 2
    left = pd.DataFrame({"family": "all", "person": [f"p{k}" for k in range(8)], "site": "x", "reason": told})
    one = finding(n=20)
    hidden = left_out_rows(replace(findings([one]), left_out=left), COLUMNS).rows
    assert hidden == (("did not answer", "≥5"), ("Age: missing", "<5"))
    own = finding("own", family="own", n=24)
    apart = left_out_rows(replace(findings([one, own]), left_out=left), COLUMNS)
    assert apart.headings == ("Family", "Reason", "People")
    assert apart.rows[0] == ("all", "did not answer", "≥5")
    assert analysed(replace(findings([one, own]), left_out=left.assign(family="own").tail(2))) == [
        "Family “all”: 20 people of the study − 0 who could not be used = 20 analysed.",
        "Family “own”: 24 people analysed, fewer than five could not be used.",
    ]


def test_faults_are_told_in_words_each_kind_for_itself() -> None:
    kinds = ["named-off-roster"] * 6 + ["named-unresolved"] * 5 + ["gave-nothing"] * 3 + ["odd-thing"]
    assert problem_rows(pd.DataFrame({"kind": kinds})).rows == (
        ("Names that nobody on the roster has, not counted as ties", "6"),
        ("Names that wait for a decision, not counted as ties until then", "5"),
        ("People who answered and named nobody", "<5"),
        ("Odd thing", "<5"),
    )


def test_every_kind_of_nomination_that_is_not_counted_has_words() -> None:
    kinds = {f"named-{fate.replace(' ', '-')}" for fate in set(FATES) - {"resolved", "left out"}}
    assert kinds <= set(FAULT_WORDS)
    assert all("-" not in fault_in_words(kind) for kind in FAULT_WORDS)
