"""The brain loader on real connectomes against numbers computed without it; see passport.md."""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
import statsmodels.formula.api as smf
from statsmodels.stats.anova import anova_lm

import socibrain
from socibrain.errors import Faults
from socibrain.networks.brain import BrainNetwork, build_brain
from socibrain.sources.matrices import read_matrix
from socibrain.sources.matrix_files import find_matrices
from socibrain.sources.people import read_people
from socibrain.sources.regions import read_regions
from socibrain.sources.study import read_study
from tests.references.mice.prepare import FETCHED, rows


@pytest.fixture(scope="module")
def mice(mice_study: Path) -> tuple[pd.DataFrame, dict[str, BrainNetwork]]:
    """The people table, and the network of every mouse."""
    study, faults = read_study(mice_study), Faults()
    people, regions = read_people(study, faults), read_regions(study, faults)
    assert people is not None
    assert regions is not None
    networks = {}
    for origin in find_matrices(study, "diffusion", people.ids, faults):
        record = read_matrix(study, origin, len(regions), faults)
        assert record is not None
        network = build_brain(study, record, regions, faults).network
        assert network is not None
        networks[origin.person] = network
    assert not list(faults)
    return people.table, networks


@pytest.fixture(scope="module")
def measured(mice_study: Path, tmp_path_factory: pytest.TempPathFactory) -> pd.DataFrame:
    """persons.csv of a brain-only study: no site, no questionnaire, edge lists."""
    out = tmp_path_factory.mktemp("mice") / "run"
    cohort = socibrain.measure(mice_study, out=out)
    assert cohort.flow["branch"].unique().tolist() == ["brain"]
    assert cohort.flow["people"].tolist() == [32, 32, 32]
    table = pd.read_csv(out / "persons.csv", index_col="person")
    return table.rename(columns={"diffusion.system_modularity": "q"})


def test_every_mouse_is_read(mice: tuple[pd.DataFrame, dict[str, BrainNetwork]]) -> None:
    table, networks = mice
    assert list(networks) == list(table.index)
    assert table["strain"].value_counts().to_dict() == {"B6": 8, "BTBR": 8, "CAST": 8, "DBA2": 8}
    assert all(network.weights.shape == (332, 332) for network in networks.values())
    assert len(set(networks["sub-54776"].regions.systems)) == 14


def test_ties_and_total_weight_of_one_mouse(mice: tuple[pd.DataFrame, dict[str, BrainNetwork]]) -> None:
    network = mice[1]["sub-54776"]
    upper = np.triu(network.weights, 1)
    assert np.count_nonzero(upper) == 36_390
    assert upper.sum() == 37_183_361
    assert network.mean_connectivity == pytest.approx(37_183_361 / (332 * 331 / 2), rel=1e-13)


def test_every_network_is_its_edge_list(mice: tuple[pd.DataFrame, dict[str, BrainNetwork]]) -> None:
    for person, network in mice[1].items():
        first, second, weight = np.loadtxt(FETCHED / f"{person}_ses-1_dti.edgelist").T
        i, j = first.astype(int), second.astype(int)
        assert (network.weights[i, j] == weight).all()
        assert (network.weights[j, i] == weight).all()
        assert np.count_nonzero(network.weights) == 2 * len(weight)


def exact_modularity(person: str) -> Fraction:
    """Q of the 14 blocks as a fraction, straight from the file."""
    blocks = [(int(first), int(end)) for _, _, first, end in rows("blocks.csv")]
    block = {region: number for number, ends in enumerate(blocks) for region in range(*ends)}
    within, strength = [0] * len(blocks), [0] * len(blocks)
    for line in (FETCHED / f"{person}_ses-1_dti.edgelist").read_text(encoding="utf-8").splitlines():
        i, j, weight = (int(float(cell)) for cell in line.split())
        strength[block[i]] += weight
        strength[block[j]] += weight
        within[block[i]] += weight * (block[i] == block[j])
    total = sum(strength) // 2
    return sum(
        (Fraction(w, total) - Fraction(s, 2 * total) ** 2 for w, s in zip(within, strength, strict=True)),
        Fraction(0),
    )


def test_modularity_of_the_blocks_of_one_mouse(measured: pd.DataFrame) -> None:
    exact = exact_modularity("sub-54776")
    assert float(exact) == 0.084206678797511619
    assert measured.loc["sub-54776", "q"] == pytest.approx(float(exact), rel=1e-13)


def test_strain_means(measured: pd.DataFrame) -> None:
    means = measured.groupby("strain")["q"].mean()
    expected = {"B6": 0.091469, "BTBR": 0.140081, "CAST": 0.101089, "DBA2": 0.087822}
    assert means.to_dict() == pytest.approx(expected, abs=1e-6)
    assert means.idxmax() == "BTBR"


def test_strains_differ_given_sex(measured: pd.DataFrame) -> None:
    fit = smf.ols("q ~ C(strain) + C(sex)", measured).fit()
    table = anova_lm(fit, typ=2)
    assert table.loc["C(strain)", "F"] == pytest.approx(143.305, abs=1e-3)
    assert (table.loc["C(strain)", "df"], table.loc["Residual", "df"]) == (3, 27)
