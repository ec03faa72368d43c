"""Communities: modularity, search, consensus, agreement."""

from __future__ import annotations

import random
from collections.abc import Iterator

import igraph
import networkx
import numpy as np
import pytest

from socibrain.measures.algorithms.communities import (
    consensus_of,
    find_communities,
    leiden,
    modularity_of,
)
from socibrain.measures.algorithms.partitions import numbered


def random_weights(seed: int, n: int, *, density: float = 1.0) -> np.ndarray:
    rng = np.random.default_rng(seed)
    weights = np.triu(rng.exponential(size=(n, n)) * (rng.random((n, n)) < density), 1)
    return weights + weights.T


def ring_of_cliques(n_cliques: int, size: int) -> np.ndarray:
    weights = np.kron(np.eye(n_cliques), np.ones((size, size)) - np.eye(size))
    for clique in range(n_cliques):
        last, following = clique * size + size - 1, (clique + 1) % n_cliques * size
        weights[last, following] = weights[following, last] = 1.0
    return weights


def planted(seed: int, *, n_communities: int = 4, size: int = 10) -> tuple[np.ndarray, np.ndarray]:
    truth = np.repeat(np.arange(n_communities), size)
    inside = truth[:, None] == truth
    noise = random_weights(seed, len(truth)) * 0.1
    weights = np.where(inside, 1.0, 0.0) + noise
    np.fill_diagonal(weights, 0.0)
    return weights, numbered(truth[None])[0]


def all_partitions(n: int) -> Iterator[list[int]]:
    def extend(labels: list[int]) -> Iterator[list[int]]:
        if len(labels) == n:
            yield labels
            return
        for label in range(max(labels, default=-1) + 2):
            yield from extend([*labels, label])

    return extend([])


def test_modularity_by_hand() -> None:
    # A path of four cut in the middle: 2 of 3 ties inside, each half has 3 of the 6 tie ends.
    path = np.diag(np.ones(3), 1) + np.diag(np.ones(3), -1)
    halves = np.array([1, 1, 2, 2])
    assert modularity_of(path, halves, resolution=1.0) == pytest.approx(2 / 3 - 1 / 2, rel=1e-14)
    assert modularity_of(path, halves, resolution=0.5) == pytest.approx(2 / 3 - 1 / 4, rel=1e-14)


@pytest.mark.parametrize("resolution", [0.5, 1.0, 2.3])
@pytest.mark.parametrize("seed", range(4))
def test_modularity_agrees_with_networkx(seed: int, resolution: float) -> None:
    weights = random_weights(seed, 25, density=0.4)
    partition = np.random.default_rng(seed).integers(5, size=25)
    groups = [set(np.flatnonzero(partition == label)) for label in np.unique(partition)]
    expected = networkx.community.modularity(networkx.Graph(weights), groups, resolution=resolution)
    assert modularity_of(weights, partition, resolution=resolution) == pytest.approx(expected, abs=1e-13)


@pytest.mark.parametrize("resolution", [0.8, 1.0, 1.5])
@pytest.mark.parametrize("seed", range(3))
def test_best_is_the_best_of_all_partitions(seed: int, resolution: float) -> None:
    weights = random_weights(seed, 7, density=0.7)
    truth = max(
        modularity_of(weights, np.array(labels), resolution=resolution) for labels in all_partitions(7)
    )
    found = find_communities(weights, resolution=resolution, restarts=20, seed=1)
    assert found.best_quality == pytest.approx(truth, abs=1e-12)


def test_ring_of_cliques_is_found() -> None:
    found = find_communities(ring_of_cliques(6, 5), resolution=1.0, restarts=10, seed=1)
    np.testing.assert_array_equal(found.best, np.repeat(np.arange(1, 7), 5))
    # 60 of 66 ties inside; six equal communities.
    assert found.best_quality == pytest.approx(60 / 66 - 1 / 6, rel=1e-13)


def test_unambiguous_communities_are_the_consensus_of_all() -> None:
    weights, truth = planted(1)
    found = find_communities(weights, resolution=1.0, restarts=20, seed=1)
    np.testing.assert_array_equal(found.consensus, truth)
    np.testing.assert_array_equal(found.best, truth)
    assert found.agreement == 1.0
    assert found.consensus_quality == found.best_quality


def test_restarts_agree_less_where_there_are_no_communities() -> None:
    found = find_communities(random_weights(2, 60), resolution=1.0, restarts=20, seed=1)
    assert found.agreement < 0.75
    assert len(np.unique(found.qualities)) > 5
    assert found.best_quality == pytest.approx(found.qualities.max(), abs=1e-12)
    assert found.consensus_quality <= found.best_quality + 1e-12


def test_qualities_are_those_of_the_restarts() -> None:
    weights = random_weights(3, 30, density=0.3)
    partitions = leiden(weights, resolution=1.2, restarts=8, seed=5)
    expected = [modularity_of(weights, one, resolution=1.2) for one in partitions]
    found = find_communities(weights, resolution=1.2, restarts=8, seed=5)
    np.testing.assert_allclose(found.qualities, expected, rtol=1e-13)


def test_same_seed_same_result_and_another_seed_another() -> None:
    weights = random_weights(4, 60)
    one, again, other = (
        find_communities(weights, resolution=1.0, restarts=6, seed=seed) for seed in (1, 1, 2)
    )
    np.testing.assert_array_equal(one.qualities, again.qualities)
    np.testing.assert_array_equal(one.consensus, again.consensus)
    assert not np.array_equal(one.qualities, other.qualities)


def test_one_more_restart_changes_no_other() -> None:
    weights = random_weights(5, 60)
    few = leiden(weights, resolution=1.0, restarts=4, seed=1)
    more = leiden(weights, resolution=1.0, restarts=7, seed=1)
    np.testing.assert_array_equal(more[:4], few)
    assert len(np.unique(more, axis=0)) > 1


@pytest.mark.parametrize("scale", [2.0**-30, 2.0**20])
def test_scale_of_weights_does_not_matter(scale: float) -> None:
    weights = random_weights(6, 40)
    one = find_communities(weights, resolution=1.0, restarts=20, seed=1)
    scaled = find_communities(weights * scale, resolution=1.0, restarts=20, seed=1)
    np.testing.assert_array_equal(scaled.best, one.best)
    np.testing.assert_allclose(scaled.qualities, one.qualities, rtol=1e-12)
    assert len(np.unique(one.qualities)) > 1


def test_relabelling_carries_the_communities_along() -> None:
    weights, truth = planted(7)
    order = np.random.default_rng(8).permutation(len(truth))
    found = find_communities(weights[np.ix_(order, order)], resolution=1.0, restarts=5, seed=1)
    np.testing.assert_array_equal(found.best, numbered(truth[order][None])[0])
    assert found.best_quality == pytest.approx(modularity_of(weights, truth, resolution=1.0), rel=1e-12)


def test_higher_resolution_finds_more_communities() -> None:
    weights = random_weights(9, 50)
    counts = [
        find_communities(weights, resolution=resolution, restarts=5, seed=1).best.max()
        for resolution in (0.5, 1.0, 2.0)
    ]
    assert counts[0] < counts[1] < counts[2]


def test_consensus_follows_the_majority() -> None:
    partitions = np.array([[1, 1, 1, 2, 2, 2]] * 3 + [[1, 1, 2, 2, 2, 2]] * 2)
    assert consensus_of(partitions, resolution=1.0, seed=1).tolist() == [1, 1, 1, 2, 2, 2]


def test_consensus_does_not_depend_on_the_order_of_restarts() -> None:
    partitions = leiden(random_weights(10, 40), resolution=1.0, restarts=12, seed=1)
    shuffled = np.random.default_rng(11).permutation(partitions)
    np.testing.assert_array_equal(
        consensus_of(partitions, resolution=1.0, seed=1), consensus_of(shuffled, resolution=1.0, seed=1)
    )


def test_a_vertex_without_majority_keeps_its_strongest_tie() -> None:
    # The last vertex is with the first trio in 4 of 10, with the second and third in 3 each.
    trios = [1, 1, 1, 2, 2, 2, 3, 3, 3]
    partitions = np.array([[*trios, 1]] * 4 + [[*trios, 2]] * 3 + [[*trios, 3]] * 3)
    consensus = consensus_of(partitions, resolution=1.0, seed=1)
    assert consensus.tolist() == [1, 1, 1, 2, 2, 2, 3, 3, 3, 1]


def test_a_vertex_that_is_always_alone_stays_alone() -> None:
    partitions = np.array([[1, 1, 2, 2, 3], [1, 1, 1, 1, 2]])
    consensus = consensus_of(partitions, resolution=1.0, seed=1)
    assert (consensus == consensus[4]).sum() == 1


def test_a_network_without_weight_has_no_quality() -> None:
    found = find_communities(np.zeros((4, 4)), resolution=1.0, restarts=3, seed=1)
    assert np.isnan(found.best_quality)
    assert np.isnan(found.consensus_quality)
    assert found.best.tolist() == [1, 2, 3, 4]


def test_results_cannot_be_changed() -> None:
    found = find_communities(ring_of_cliques(3, 4), resolution=1.0, restarts=3, seed=1)
    for array in (found.best, found.qualities, found.consensus):
        assert not array.flags.writeable


def test_a_single_restart_is_refused() -> None:
    with pytest.raises(ValueError, match="at least 2"):
        find_communities(ring_of_cliques(3, 4), resolution=1.0, restarts=1, seed=1)


def test_the_generator_goes_back_to_python_untouched() -> None:
    random.seed(12)
    before = random.getstate()
    find_communities(random_weights(13, 20), resolution=1.0, restarts=3, seed=1)
    assert random.getstate() == before
    drawn = igraph.Graph.Erdos_Renyi(n=30, p=0.3).get_edgelist()
    random.seed(12)
    assert igraph.Graph.Erdos_Renyi(n=30, p=0.3).get_edgelist() == drawn
