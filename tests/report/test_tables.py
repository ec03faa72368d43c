"""Tables of numbers: what their columns hold, as a reader sees them."""

from __future__ import annotations

from dataclasses import replace

from socibrain.report.tables import finding_rows, numbers_of, site_rows
from tests.report.made_study import COLUMNS, SITES, finding, findings, made_cohort, made_material


def test_numbers_of_a_site_column_have_the_same_decimals() -> None:
    cohort = made_cohort()
    p = [0.5, 0.0123, 0.0002, *[0.25] * (len(SITES) - 3)]
    material = made_material(cohort=replace(cohort, sites=cohort.sites.assign(**{"advice.rich_club_p": p})))
    table = site_rows(material, "advice")
    assert table.headings[-1] == "Rich-club test (p)"
    assert [row[-1] for row in table.rows][:4] == ["0.500", "0.012", "<0.001", "0.250"]


def test_the_table_of_findings_names_measures_by_their_labels() -> None:
    row = finding_rows(findings([finding()]), COLUMNS)
    assert row.headings[:4] == ("Hypothesis", "Predictor", "Outcome", "People / sites")
    assert row.rows[0][:4] == ("brokers", "Constraint (advice)", "Mean participation (rest)", "168 / 12")


def test_the_difference_from_statsmodels_says_of_what_it_is() -> None:
    one = finding()
    assert ("Largest difference from the same fit by statsmodels", "3.1e-07") in numbers_of(
        one, findings([one])
    )
