"""A plan's hypotheses through the engine, in one pass."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from scipy import stats

from socibrain.cohort.table import Cohort
from socibrain.link.crosscheck import cross_check
from socibrain.link.design import Design, Refused, make_designs
from socibrain.link.families import Tail, extremeness, family_p, p_values, smallest_p
from socibrain.link.finding import Check, Finding, Findings
from socibrain.link.hypothesis import Hypothesis
from socibrain.link.mixed import Fit, fit
from socibrain.link.options import LinkOptions
from socibrain.link.permute import Problem, distinct_arrangements, null_distribution, pose
from socibrain.link.sample import LEFT_OUT, draw_sample

Array = NDArray[np.float64]
NUMBERS = (
    "estimate",
    "raw_estimate",
    "se",
    "ci_low",
    "ci_high",
    "statistic",
    "df",
    "contextual",
    "contextual_se",
    "variance_ratio",
    "p_permutation",
    "p_family",
    "smallest_p",
)


@dataclass(frozen=True)
class _Tested:
    """A hypothesis's own share of what the shuffles of its family gave."""

    p: float
    p_family: float
    smallest_p: float
    null: Array
    exhaustive: bool


def link(cohort: Cohort, hypotheses: Sequence[Hypothesis], options: LinkOptions) -> Findings:
    """Answer every hypothesis at person scale, families in the order of their first hypothesis.

    Each family is tested on the people complete in all its columns, under its own shuffles.
    Raises `DocumentRefused` where a column is unknown.  A hypothesis that the sample cannot answer
    comes back refused, with the reason, and has no part in its family's correction.
    """
    answers: dict[str, Finding] = {}
    left_out = [pd.DataFrame(columns=LEFT_OUT)]
    for family in dict.fromkeys(hypothesis.family for hypothesis in hypotheses):
        members = [hypothesis for hypothesis in hypotheses if hypothesis.family == family]
        sample = draw_sample(cohort, members, visit=options.visit, family=family)
        left_out.append(sample.left_out)
        made = make_designs(sample, members, options)
        designs = [design for design in made if isinstance(design, Design)]
        for each in [*(r for r in made if isinstance(r, Refused)), *_test(designs, family, options)]:
            finding = _refused(each) if isinstance(each, Refused) else each
            answers[finding.hypothesis.id] = finding
    findings = tuple(answers[hypothesis.id] for hypothesis in hypotheses)
    return Findings(
        options=options,
        findings=findings,
        left_out=pd.concat(left_out, ignore_index=True),
        table=pd.DataFrame([_row(finding) for finding in findings]),
    )


def _test(designs: Sequence[Design], family: str, options: LinkOptions) -> list[Finding | Refused]:
    """Test all designs of one family under the same shuffles."""
    if not designs:
        return []
    sites = designs[0].sites
    problems = [pose(design.outcome, design.within, design.between, sites) for design in designs]
    arrangements = distinct_arrangements(problems, sites)
    possible = 1 / arrangements if arrangements <= options.shuffles else 1 / (options.shuffles + 1)
    if possible > options.alpha:
        return [_too_few(design, possible, arrangements, options) for design in designs]
    null = null_distribution(problems, sites, shuffles=options.shuffles, seed=options.seed, family=family)
    tails = tuple(_tail(design.hypothesis) for design in designs)
    observed, shuffled = extremeness(null.observed, tails), extremeness(null.shuffled, tails)
    alone = p_values(observed, shuffled, exhaustive=null.exhaustive)
    smallest = smallest_p(observed, shuffled, exhaustive=null.exhaustive)
    able = np.flatnonzero(smallest <= options.alpha)
    together = np.full(len(designs), np.nan)
    if able.size:
        together[able] = family_p(
            observed[able],
            shuffled[:, able],
            tuple(tails[place] for place in able),
            exhaustive=null.exhaustive,
        )
    answers: list[Finding | Refused] = []
    for place, (design, problem) in enumerate(zip(designs, problems, strict=True)):
        if np.isnan(together[place]):
            answers.append(_too_few(design, float(smallest[place]), arrangements, options))
            continue
        own = null.shuffled[:, place].copy()
        own.flags.writeable = False
        tested = _Tested(
            float(alone[place]), float(together[place]), float(smallest[place]), own, null.exhaustive
        )
        try:
            answers.append(_found(design, problem, tested, options))
        except np.linalg.LinAlgError as error:
            reason = f"the fit broke down numerically ({error})"
            n_sites = int(design.sites.max()) + 1
            answers.append(Refused(design.hypothesis, reason, len(design.people), n_sites, "failed"))
    return answers


def _found(design: Design, problem: Problem, tested: _Tested, options: LinkOptions) -> Finding:
    fitted = fit(design.outcome, design.columns, design.sites)
    place = design.within.shape[1] - 1
    context = place + 2 if design.context else None
    estimate, error, df = (float(values[place]) for values in (fitted.coefficients, fitted.errors, fitted.df))
    check, no_check = _checked(design, fitted)
    reach = float(stats.t.ppf(1 - options.alpha / 2, df)) * error
    predictor, others = design.within[:, -1], problem.basis[:, :-1]
    outcome_residual = problem.residual * design.outcome_sd
    predictor_residual = (predictor - others @ (others.T @ predictor)) * design.predictor_sd
    for array in (outcome_residual, predictor_residual):
        array.flags.writeable = False
    return Finding(
        hypothesis=design.hypothesis,
        status="boundary" if fitted.ratio == 0 else "ok",
        reason="",
        n=len(design.people),
        n_sites=int(design.sites.max()) + 1,
        estimate=estimate,
        raw_estimate=estimate * design.outcome_sd / design.predictor_sd,
        se=error,
        ci_low=estimate - reach,
        ci_high=estimate + reach,
        statistic=estimate / error,
        df=df,
        contextual=np.nan if context is None else float(fitted.coefficients[context]),
        contextual_se=np.nan if context is None else float(fitted.errors[context]),
        variance_ratio=fitted.ratio,
        p_permutation=tested.p,
        p_family=tested.p_family,
        shuffles=len(tested.null),
        exhaustive=tested.exhaustive,
        smallest_p=tested.smallest_p,
        check=check,
        null=tested.null,
        people=design.people,
        sites=design.site_names,
        outcome_residual=outcome_residual,
        predictor_residual=predictor_residual,
        notes=(*design.notes, *no_check),
    )


def _checked(design: Design, fitted: Fit) -> tuple[Check | None, tuple[str, ...]]:
    """The same fit by statsmodels, or the note that it could not be made."""
    try:
        return cross_check(design, fitted), ()
    except np.linalg.LinAlgError as error:
        return None, (f"statsmodels could not fit it again ({error})",)


def _too_few(design: Design, smallest: float, arrangements: int, options: LinkOptions) -> Refused:
    if arrangements > options.shuffles:
        source = f"{options.shuffles} shuffles"
    else:
        source = f"{arrangements} different arrangements of people within sites"
    reason = f"with {source} the smallest attainable p is {smallest:.3g}, above alpha {options.alpha:g}"
    return Refused(design.hypothesis, reason, len(design.people), int(design.sites.max()) + 1)


def _refused(refused: Refused) -> Finding:
    nothing = np.empty(0)
    nothing.flags.writeable = False
    unknown: dict[str, Any] = dict.fromkeys(NUMBERS, np.nan)
    return Finding(
        hypothesis=refused.hypothesis,
        status=refused.status,
        reason=refused.reason,
        n=refused.n,
        n_sites=refused.n_sites,
        **unknown,
        shuffles=0,
        exhaustive=False,
        check=None,
        null=nothing,
        people=(),
        sites=(),
        outcome_residual=nothing,
        predictor_residual=nothing,
    )


def _tail(hypothesis: Hypothesis) -> Tail:
    if not hypothesis.one_sided:
        return "both"
    return "upper" if hypothesis.direction == "positive" else "lower"


def _row(finding: Finding) -> dict[str, object]:
    """One row of findings.csv."""
    asked = finding.hypothesis
    return {
        "id": asked.id,
        "scale": asked.scale,
        "outcome": asked.outcome,
        "predictor": asked.predictor,
        "adjust": " ".join(asked.adjust),
        "n": finding.n,
        "n_sites": finding.n_sites,
        **{name: getattr(finding, name) for name in NUMBERS},
        "shuffles": finding.shuffles,
        "exhaustive": finding.exhaustive,
        "status": finding.status,
        "reason": finding.reason,
        "notes": "; ".join(finding.notes),
        "role": asked.role,
        "family": asked.family,
        "check_difference": np.nan if finding.check is None else finding.check.largest_difference,
    }
