"""Frozen answers: a result carries its own defence."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from socibrain.link.hypothesis import Hypothesis
from socibrain.link.options import LinkOptions

Array = NDArray[np.float64]
Status = Literal["ok", "boundary", "refused", "failed"]


@dataclass(frozen=True)
class Check:
    """The observed fit again, by statsmodels MixedLM (or OLS with sites fixed).

    ``estimate`` and ``statistic`` are its standardised slope and the Wald t at *its* variance
    ratio; ``largest_difference`` the larger of the two absolute differences from ours;
    ``note`` says what to know when they differ.
    """

    estimate: float
    statistic: float
    variance_ratio: float
    largest_difference: float
    note: str


@dataclass(frozen=True)
class Finding:
    """The answer to one hypothesis.

    ``estimate`` is the standardised within-site slope: within-site SDs of outcome per within-site
    SD of predictor; ``raw_estimate`` the same in the units of the columns.  ``statistic`` is the
    Wald t with ``df`` (Satterthwaite).  ``contextual`` is the slope of the site mean (standardised
    by the same SDs), apart.  ``variance_ratio`` is site variance over residual variance, 0 at the
    boundary.  ``null`` holds the shuffled statistics of this hypothesis alone, (shuffles,).
    ``people``, ``sites``, ``outcome_residual`` and ``predictor_residual`` (both (n,), in the units
    of the columns, within-site and adjusted) are for drawing.  ``notes`` say what was coded or
    dropped on the way (reference levels, site means that could not be kept).  The interval covers
    1 − alpha.  When ``status`` is refused or failed, numbers are NaN, arrays empty, and ``reason``
    says why.
    """

    hypothesis: Hypothesis
    status: Status
    reason: str
    n: int
    n_sites: int
    estimate: float
    raw_estimate: float
    se: float
    ci_low: float
    ci_high: float
    statistic: float
    df: float
    contextual: float
    contextual_se: float
    variance_ratio: float
    p_permutation: float
    p_family: float
    shuffles: int
    exhaustive: bool
    smallest_p: float
    check: Check | None
    null: Array
    people: tuple[str, ...]
    sites: tuple[str, ...]
    outcome_residual: Array
    predictor_residual: Array
    notes: tuple[str, ...] = ()


@dataclass(frozen=True)
class Findings:
    """All answers of one plan, in the plan's order.

    ``left_out`` has one row per person and family: columns family, person, site, reason.
    ``table`` is findings.csv: one row per hypothesis.
    """

    options: LinkOptions
    findings: tuple[Finding, ...]
    left_out: pd.DataFrame
    table: pd.DataFrame
