"""Tables: counted by hand, each person once, small cells hidden."""

from __future__ import annotations

from dataclasses import replace

import pandas as pd

from socibrain.report.tables import exclusion_rows, left_out_rows, site_loss_rows
from tests.report.made_study import COLUMNS, finding, findings

LEDGER = ["stage", "side", "person", "site", "visit", "reason"]


def test_a_lost_visit_is_told_apart_from_a_lost_person() -> None:
    rows = [("passed quality", "brain", f"p{k}", "x", "", "moved") for k in range(6)]
    rows += [("passed quality", "brain", f"q{k}", "x", "2", "moved") for k in range(5)]
    rows += [("passed quality", "brain", "q0", "x", "3", "moved")]
    rows += [("all", "link", "p0", "x", "", "no age")]
    assert exclusion_rows(pd.DataFrame(rows, columns=LEDGER)).rows == (
        ("brain", "passed quality", "moved", "6"),
        ("brain", "passed quality, one visit", "moved", "5"),
    )


def test_sites_without_a_value_are_counted_once() -> None:
    rows = [("advice.constraint", "social", "", site, "", "nobody named") for site in ("a", "b", "b")]
    assert site_loss_rows(pd.DataFrame(rows, columns=LEDGER), COLUMNS).rows == (
        ("Constraint (advice)", "nobody named", "2"),
    )


def test_people_are_counted_at_each_reason_that_holds_for_them() -> None:
    both = "did not answer; 'age': missing; 'advice.constraint': undefined (nobody; or nothing)"
    told = [both] * 7 + ["'age': missing"] * 6
    left = pd.DataFrame(
        {"family": "all", "person": [f"p{k}" for k in range(13)], "site": "x", "reason": told}
    )
    left.loc[13] = ["all", "p13", "x", "no site"]
    rows = left_out_rows(replace(findings([finding()]), left_out=left), COLUMNS).rows
    assert rows == (
        ("all", "Age: missing", "13"),
        ("all", "did not answer", "≥5"),
        ("all", "Constraint (advice): undefined (nobody; or nothing)", "7"),
        ("all", "no site", "<5"),
    )
