"""The observed fit once more, by a library that shares no code with ours."""

from __future__ import annotations

import warnings

import numpy as np
from statsmodels.regression.linear_model import OLS
from statsmodels.regression.mixed_linear_model import MixedLM

from socibrain.link.design import Design
from socibrain.link.finding import Check
from socibrain.link.mixed import Fit


def cross_check(design: Design, ours: Fit) -> Check:
    """Fit a design by statsmodels and compare the standardised slope and its Wald t with ``ours``.

    MixedLM by REML and Powell's method; its t is the generalised least squares one at its own
    variance ratio, computed here from the full n × n covariance: the t it reports itself also
    counts the covariance of slopes with variances.  Ordinary least squares where the columns
    span the sites.
    """
    place = design.within.shape[1] - 1
    if np.isnan(ours.ratio):
        simple = OLS(design.outcome, design.columns).fit()
        return _compared(
            ours, place, estimate=simple.params[place], statistic=simple.tvalues[place], ratio=np.nan, note=""
        )
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # boundary and convergence are judged below, by what came out
        mixed = MixedLM(design.outcome, design.columns, groups=design.sites).fit(reml=True, method="powell")
    residual = float(mixed.scale)
    ratio = float(mixed.cov_re[0, 0]) / residual
    together = design.sites[:, None] == design.sites[None, :]
    covariance = residual * (np.eye(design.sites.size) + ratio * together)
    precision = np.linalg.inv(design.columns.T @ np.linalg.solve(covariance, design.columns))
    slope = float(mixed.fe_params[place])
    note = ""
    if float(mixed.llf) < ours.log_likelihood - 1e-3:
        note = (
            f"statsmodels stopped {ours.log_likelihood - float(mixed.llf):.3g} log-likelihood units "
            "below the maximum found here"
        )
    error = float(np.sqrt(precision[place, place]))
    return _compared(ours, place, estimate=slope, statistic=slope / error, ratio=ratio, note=note)


def _compared(ours: Fit, place: int, *, estimate: float, statistic: float, ratio: float, note: str) -> Check:
    apart = max(abs(estimate - ours.coefficients[place]), abs(statistic - ours.statistics[place]))
    return Check(float(estimate), float(statistic), ratio, float(apart), note)
