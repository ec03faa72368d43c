"""Hypotheses answered, from a cohort to a table."""

import numpy as np
import pytest
from scipy import stats

from socibrain.errors import DocumentRefused
from socibrain.link import answer
from socibrain.link.answer import link
from socibrain.link.options import LinkOptions
from tests.link.made_cohorts import ask, cohort_of, made_persons

OPTIONS = LinkOptions(seed=11, alpha=0.05, shuffles=999, sites="random", visit="")
SITES = (20, 14, 16, 21, 8, 15)
TABLE = (
    "id scale outcome predictor adjust n n_sites estimate raw_estimate se ci_low ci_high statistic df "
    "contextual contextual_se variance_ratio p_permutation p_family smallest_p shuffles exhaustive status "
    "reason notes role family check_difference"
)


def plain(persons, *hypotheses, **options):
    settings = {name: getattr(OPTIONS, name) for name in ("seed", "alpha", "shuffles", "sites", "visit")}
    return link(cohort_of(persons), hypotheses, LinkOptions(**settings | options))


def test_a_planted_slope_is_found_and_a_null_one_is_not() -> None:
    persons = made_persons(4, slope=0.6, sites=SITES)
    persons["noise"] = np.random.default_rng(0).normal(size=len(persons))
    answers = plain(persons, ask("y", "x", "z"), ask("noise", "x", "z", name="null"))
    found, null = answers.findings
    assert found.p_permutation <= found.p_family < 0.01
    assert found.raw_estimate == pytest.approx(0.6, abs=3 * found.se * found.raw_estimate / found.estimate)
    assert null.p_permutation > 0.05
    assert list(answers.table["id"]) == ["h", "null"]
    assert list(answers.table.columns) == TABLE.split()


def test_the_numbers_of_a_finding_hang_together() -> None:
    persons = made_persons(4, sites=SITES)
    (found,) = plain(persons, ask("y", "x", "z")).findings
    assert found.statistic == pytest.approx(found.estimate / found.se)
    width = stats.t.ppf(0.975, found.df) * found.se
    assert (found.ci_low, found.ci_high) == pytest.approx((found.estimate - width, found.estimate + width))
    y, x = found.outcome_residual, found.predictor_residual
    assert x @ y / (x @ x) == pytest.approx(found.raw_estimate)
    assert np.abs(np.bincount(np.unique(found.sites, return_inverse=True)[1], y)).max() < 1e-9
    assert len(found.people) == len(found.sites) == found.n == y.size == len(persons)
    assert found.null.shape == (999,)
    assert found.smallest_p == 0.001
    beyond = (np.abs(found.null) >= abs(found.statistic) - 1e-9).sum()
    assert found.p_permutation == (beyond + 1) / 1000
    assert found.check is not None
    assert found.check.largest_difference < 1e-2


def test_the_within_effect_is_not_blended_with_the_between_effect() -> None:
    """x acts −1 between sites and not at all within: the estimates say so, each in its place."""
    persons = made_persons(4, slope=0.0, sites=tuple([40] * 10))
    x = persons["x"]
    means = x.groupby(persons["site"]).transform("mean")
    draw = np.random.default_rng(0)
    persons["y"] = -1.0 * means + 0.05 * draw.normal(size=10).repeat(40) + draw.normal(size=400)
    (found,) = plain(persons, ask()).findings
    assert abs(found.estimate) < 3 * found.se
    within_sd_ratio = found.estimate / found.raw_estimate
    assert found.contextual / within_sd_ratio == pytest.approx(-1, abs=4 * found.contextual_se)
    assert found.contextual < -5 * found.contextual_se


def test_standardised_estimates_do_not_depend_on_units() -> None:
    persons = made_persons(6, sites=SITES)
    (one,) = plain(persons, ask("y", "x", "z")).findings
    (other,) = plain(
        persons.assign(y=1000 * persons["y"] - 3, x=0.01 * persons["x"] + 8), ask("y", "x", "z")
    ).findings
    assert other.estimate == pytest.approx(one.estimate)
    assert other.contextual == pytest.approx(one.contextual)
    assert other.raw_estimate == pytest.approx(one.raw_estimate * 1e5)
    assert other.p_permutation == one.p_permutation
    assert other.variance_ratio == pytest.approx(one.variance_ratio)


def test_one_sided_looks_one_way_only() -> None:
    persons = made_persons(4, slope=0.6, sites=SITES)
    up = ask("y", "x", "z", name="up", direction="positive", one_sided=True, family="a")
    down = ask("y", "x", "z", name="down", direction="negative", one_sided=True, family="a")
    both = ask("y", "x", "z", name="both", direction="negative", family="a")
    findings = {finding.hypothesis.id: finding for finding in plain(persons, up, down, both).findings}
    assert findings["up"].p_permutation == 0.001
    assert findings["down"].p_permutation == 1.0
    assert findings["both"].p_permutation == 0.001


def test_families_have_their_own_people_and_shuffles() -> None:
    persons = made_persons(4, sites=SITES)
    persons["z"] = persons["z"].where(np.arange(len(persons)) % 10 != 0)
    one, two = ask("y", "x", name="one", family="first"), ask("y", "x", "z", name="two", family="second")
    answers = plain(persons, two, one)
    assert [finding.hypothesis.id for finding in answers.findings] == ["two", "one"]
    assert answers.findings[1].n == 94
    assert answers.findings[0].n == 84
    assert set(answers.left_out["family"]) == {"second"}
    assert set(answers.left_out["reason"]) == {"'z': missing"}
    alone = plain(persons, one).findings[0]
    assert np.array_equal(alone.null, answers.findings[1].null)
    together = plain(persons, one, ask("y", "x", "z", name="two", family="first"))
    assert [finding.n for finding in together.findings] == [84, 84]


def test_a_refused_hypothesis_leaves_the_others_alone() -> None:
    persons = made_persons(4, sites=SITES)
    persons["flat"] = persons["site"].str[-1].astype(float)
    answers = plain(persons, ask(), ask("y", "flat", name="flat"))
    kept, refused = answers.findings
    assert refused.status == "refused"
    assert np.isnan(refused.estimate)
    assert refused.null.size == 0
    assert kept.p_family == kept.p_permutation
    assert answers.table.loc[1, "reason"].startswith("predictor 'flat' is the same")


def test_it_stops_before_running_when_no_p_could_reach_alpha() -> None:
    persons = made_persons(4, sites=(3, 2))
    (few,) = plain(persons, ask()).findings
    assert few.status == "refused"
    assert few.reason == (
        "with 12 different arrangements of people within sites the smallest attainable p is 0.0833, "
        "above alpha 0.05"
    )
    (short,) = plain(made_persons(4, sites=SITES), ask(), shuffles=15).findings
    assert short.reason == "with 15 shuffles the smallest attainable p is 0.0625, above alpha 0.05"


def test_a_symmetric_null_that_doubles_the_smallest_p_is_refused_too() -> None:
    """3 of 6 people in one group: 20 arrangements, each with its mirror image, so p is at least .1."""
    persons = made_persons(4, sites=(6,)).assign(x=[0.0, 1.0, 0.0, 1.0, 1.0, 0.0])
    (found,) = plain(persons, ask()).findings
    assert found.status == "refused"
    assert "20 different arrangements" in found.reason
    assert "0.1," in found.reason
    (wide,) = plain(persons, ask(), alpha=0.1).findings
    assert wide.exhaustive
    assert wide.shuffles == 20
    assert wide.smallest_p == pytest.approx(0.1)


def test_boundary_and_fixed_sites_are_marked() -> None:
    persons = made_persons(3, sites=(10, 10, 10, 10, 10, 10))
    persons["y"] -= persons.groupby("site")["y"].transform("mean")
    (edge,) = plain(persons, ask()).findings
    assert edge.status == "boundary"
    assert edge.variance_ratio == 0
    (fixed,) = plain(persons, ask(), sites="fixed").findings
    assert fixed.status == "ok"
    assert np.isnan(fixed.variance_ratio)
    assert np.isnan(fixed.contextual)
    assert fixed.df == pytest.approx(60 - 6 - 1)


def test_same_seed_same_answers() -> None:
    persons = made_persons(4, sites=SITES)
    one, two, other = (plain(persons, ask(), seed=seed) for seed in (1, 1, 2))
    assert one.table.equals(two.table)
    assert not np.array_equal(one.findings[0].null, other.findings[0].null)


def test_unknown_columns_are_refused() -> None:
    with pytest.raises(DocumentRefused, match="did you mean 'other'"):
        plain(made_persons(), ask("othr"))


def broken(*_: object, **__: object) -> None:
    raise np.linalg.LinAlgError("Singular matrix")


def test_a_fit_that_breaks_down_fails_alone(monkeypatch: pytest.MonkeyPatch) -> None:
    persons = made_persons(4, sites=SITES)
    whole = answer.fit

    def sometimes(outcome, columns, sites):
        return broken() if columns.shape[1] == 3 else whole(outcome, columns, sites)

    monkeypatch.setattr(answer, "fit", sometimes)
    failed, fine = plain(persons, ask("y", "x", name="bare"), ask("y", "x", "z", name="adjusted")).findings
    assert (failed.status, failed.reason) == ("failed", "the fit broke down numerically (Singular matrix)")
    assert np.isnan(failed.p_permutation)
    assert fine.status in ("ok", "boundary")


def test_a_check_that_cannot_be_made_is_told(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(answer, "cross_check", broken)
    (found,) = plain(made_persons(4, sites=SITES), ask("y", "x", "z")).findings
    assert found.check is None
    assert found.status in ("ok", "boundary")
    assert "statsmodels could not fit it again (Singular matrix)" in found.notes
