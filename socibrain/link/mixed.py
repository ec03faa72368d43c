"""One mixed model with a random intercept for site, fitted by REML."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from socibrain.link.profile import Contrasts, Profile

Array = NDArray[np.float64]
Codes = NDArray[np.intp]
VANISHING = 1e-9
"""An eigenvalue of the sites' incidence below this share of the largest site is no contrast."""


@dataclass(frozen=True)
class Fit:
    """A fitted model: y = Xβ + u_site + e with Var(u) = ratio·σ², Var(e) = σ².

    ``coefficients``, ``errors`` (standard errors) and ``df`` (Satterthwaite) are (p,), in the
    order of the columns.  ``ratio`` and ``site_variance`` are exactly 0 on the boundary and NaN
    where the columns span the sites, so that no site variance is left to estimate.
    ``log_likelihood`` is the restricted one with all its constants.
    """

    coefficients: Array
    errors: Array
    df: Array
    residual_variance: float
    site_variance: float
    ratio: float
    log_likelihood: float

    @property
    def statistics(self) -> Array:
        """Wald t of every coefficient."""
        return self.coefficients / self.errors


def site_contrasts(columns: Array, sites: Codes) -> tuple[Array, Array]:
    """Error contrasts that carry the site variance, and how strongly.

    ``columns`` (n, p) of full rank, ``sites`` (n,) codes from 0.  Returns orthonormal directions
    (n, m), orthogonal to the columns, and sizes (m,): direction i has variance σ² + sizes[i]·τ².
    With columns that span the sites (fixed sites, one site) m is 0.

    >>> one = np.ones((4, 1))
    >>> site_contrasts(one, np.array([0, 0, 1, 1]))[1].round(6).tolist()
    [2.0]
    """
    basis = np.linalg.qr(columns)[0]
    incidence = (sites[:, None] == np.arange(sites.max() + 1)).astype(np.float64)
    cleared = incidence - basis @ (basis.T @ incidence)
    sizes, turns = np.linalg.eigh(cleared.T @ cleared)
    kept = sizes > VANISHING * np.bincount(sites).max()
    return cleared @ (turns[:, kept] / np.sqrt(sizes[kept])), sizes[kept]


def fit(outcome: Array, columns: Array, sites: Codes) -> Fit:
    """Fit the model by REML, the variance ratio profiled over [0, ∞).

    ``outcome`` (n,), ``columns`` (n, p) of full rank with more rows than columns and sites can
    use up, ``sites`` (n,) codes from 0.  Degrees of freedom are Satterthwaite's (1946) from the
    expected REML information of both variances (Giesbrecht & Burns 1985); on the boundary the
    information is taken there, with the site variance still counted as estimated.

    Two sites, of (0, 2) and (4, 6): the means 1 and 5 differ with variance 8 = τ² + σ²/2, σ² = 2.

    >>> found = fit(np.array([0.0, 2, 4, 6]), np.ones((4, 1)), np.array([0, 0, 1, 1]))
    >>> round(found.residual_variance, 6), round(found.site_variance, 6), found.df.round(6).tolist()
    (2.0, 7.0, [1.0])
    """
    people, parameters = columns.shape
    freedom = people - parameters
    basis, triangle = np.linalg.qr(columns)
    directions, sizes = site_contrasts(columns, sites)
    cleared = outcome - basis @ (basis.T @ outcome)
    parts = directions.T @ cleared
    rest = cleared - directions @ parts
    within = float(rest @ rest)
    profile = Profile([Contrasts(sizes, parts**2, freedom, within)])
    ratio = profile.best(np.array([[within]]))
    residual_variance = (within + float(profile.between(ratio)[0, 0])) / freedom
    ratio_found = float(ratio[0, 0])

    counts = np.bincount(sites)
    shrink = ratio_found / (1.0 + ratio_found * counts)
    sums = np.stack([np.bincount(sites, column) for column in columns.T], axis=1)
    weighted = columns - (shrink[:, None] * sums)[sites]  # V⁻¹X
    inverse = np.linalg.inv(columns.T @ weighted)
    coefficients = inverse @ (weighted.T @ outcome)
    variances = residual_variance * np.diag(inverse)

    by_residual = ((weighted @ inverse) ** 2).sum(axis=0)
    site_sums = sums / (1.0 + ratio_found * counts)[:, None]  # Z'V⁻¹X
    by_site = ((site_sums @ inverse) ** 2).sum(axis=0)
    gradients = np.stack([by_residual, by_site])
    spread = np.linalg.pinv(_information(sizes, freedom, ratio_found)) * residual_variance**2
    df = 2.0 * variances**2 / (gradients * (spread @ gradients)).sum(axis=0)

    fixed = sizes.size == 0
    determinant = 2.0 * np.log(np.abs(np.diag(triangle))).sum() + np.log1p(ratio_found * sizes).sum()
    log_likelihood = -0.5 * (freedom * (1.0 + np.log(2.0 * np.pi * residual_variance)) + determinant)
    return Fit(
        coefficients=coefficients,
        errors=np.sqrt(variances),
        df=df,
        residual_variance=residual_variance,
        site_variance=np.nan if fixed else ratio_found * residual_variance,
        ratio=np.nan if fixed else ratio_found,
        log_likelihood=float(log_likelihood),
    )


def _information(sizes: Array, freedom: int, ratio: float) -> Array:
    """Expected REML information of (σ², τ²) at σ² = 1, (2, 2); the second row is 0 without contrasts."""
    weight = 1.0 / (1.0 + ratio * sizes)
    residual = (weight**2).sum() + freedom - sizes.size
    both = (sizes * weight**2).sum()
    site = ((sizes * weight) ** 2).sum()
    return 0.5 * np.array([[residual, both], [both, site]])
