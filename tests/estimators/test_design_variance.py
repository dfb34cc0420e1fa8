"""Every sample of tiny universes: estimates are right on average, and so are their variances."""

from __future__ import annotations

import numpy as np
import pytest

from estimators import SampleDesign, mean, total
from tests.support.every_sample import (
    Moments,
    draws,
    stratified_subsets,
    subsets,
    two_stage_subsets,
)
from tests.support.slow_variance import (
    loop_mean,
    loop_mean_contributions,
    loop_subgroup_factor,
    loop_variance,
)

VALUES = np.array([3.0, -1.0, 4.0, 10.0, 5.0, 9.0, 2.0])
IN_GROUP = np.array([True, False, True, True, False, False, True])
STRATUM = np.array(["a", "a", "a", "a", "b", "b", "b"])
SIZES = {"a": 4, "b": 3}

CLUSTERS = {
    "p": [1.0, 5.0, 2.0],
    "q": [8.0, 0.0],
    "r": [4.0, 4.5, 9.0, 1.0],
    "s": [7.0, 3.0, 6.0],
}


def assert_right_on_average(found: Moments, truth: float) -> None:
    assert found.mean == pytest.approx(truth, rel=1e-9)
    assert found.estimated_variance == pytest.approx(found.variance, rel=1e-9)


def rows_in(pairs):
    """Values and group membership of (cluster, unit) pairs; every second unit is in the group."""
    values = np.array([CLUSTERS[c][u] for c, u in pairs])
    return values, np.array([u % 2 == 0 for _, u in pairs])


def totals_of_universe():
    everyone = [(c, u) for c, values in CLUSTERS.items() for u in range(len(values))]
    values, group = rows_in(everyone)
    return float(values.sum()), float(values[group].sum())


@pytest.mark.parametrize("n", [2, 3, 6])
def test_simple_random_without_replacement(n):
    means, totals, group_totals = Moments(), Moments(), Moments()
    design = SampleDesign.simple_random(n, population_size=7)
    for rows in subsets(range(7), n):
        means.add(mean(VALUES[rows], design))
        totals.add(total(VALUES[rows], design))
        if IN_GROUP[rows].any():
            group_totals.add(total(VALUES[rows], design, where=IN_GROUP[rows]))
    assert_right_on_average(means, VALUES.mean())
    assert_right_on_average(totals, VALUES.sum())
    if n > 3:  # with fewer, some samples have nobody in the group and no estimate
        assert_right_on_average(group_totals, VALUES[IN_GROUP].sum())


def test_simple_random_subgroup_total_of_four_of_five():
    values, group = VALUES[:5], np.array([True, True, False, True, True])
    found = Moments()
    design = SampleDesign.simple_random(3, population_size=5)
    for rows in subsets(range(5), 3):
        found.add(total(values[rows], design, where=group[rows]))
    assert_right_on_average(found, values[group].sum())


def test_simple_random_with_replacement():
    values = VALUES[:4]
    means, totals = Moments(), Moments()
    design = SampleDesign.simple_random(3, population_size=4, replacement=True)
    for rows in draws(range(4), 3):
        means.add(mean(values[rows], design))
        totals.add(total(values[rows], design))
    assert_right_on_average(means, values.mean())
    assert_right_on_average(totals, values.sum())


def test_stratified_with_and_without_replacement():
    units = {"a": [0, 1, 2, 3], "b": [4, 5, 6]}
    means, totals, group_totals = Moments(), Moments(), Moments()
    for rows in stratified_subsets(units, {"a": 3, "b": 2}):
        design = SampleDesign.stratified(STRATUM[rows], population_sizes=SIZES)
        means.add(mean(VALUES[rows], design))
        totals.add(total(VALUES[rows], design))
        group_totals.add(total(VALUES[rows], design, where=IN_GROUP[rows]))
    assert_right_on_average(means, VALUES.mean())
    assert_right_on_average(totals, VALUES.sum())
    assert_right_on_average(group_totals, VALUES[IN_GROUP].sum())


def test_a_stratum_as_subgroup_is_right_on_average():
    """With all five rows for c in k(c-1)/((k-1)c) instead of three, it comes out 1.2 times."""
    found = Moments()
    for rows in stratified_subsets({"a": [0, 1, 2, 3], "b": [4, 5, 6]}, {"a": 3, "b": 2}):
        design = SampleDesign.stratified(STRATUM[rows], population_sizes=SIZES)
        found.add(mean(VALUES[rows], design, where=STRATUM[rows] == "a"))
    assert_right_on_average(found, VALUES[:4].mean())


def test_stratified_with_replacement():
    totals = Moments()
    for first in draws([0, 1, 2, 3], 2):
        for second in draws([4, 5, 6], 3):
            rows = first + second
            design = SampleDesign.stratified(
                STRATUM[rows], population_sizes=SIZES, replacement=True
            )
            totals.add(total(VALUES[rows], design))
    assert_right_on_average(totals, VALUES.sum())


@pytest.mark.parametrize("n", [2, 3])
def test_clusters_of_which_every_member_answers(n):
    totals, group_totals = Moments(), Moments()
    for chosen in subsets(list(CLUSTERS), n):
        pairs = [(c, u) for c in chosen for u in range(len(CLUSTERS[c]))]
        values, group = rows_in(pairs)
        design = SampleDesign.clustered([c for c, _ in pairs], population_clusters=4)
        totals.add(total(values, design))
        group_totals.add(total(values, design, where=group))
    assert_right_on_average(totals, totals_of_universe()[0])
    assert_right_on_average(group_totals, totals_of_universe()[1])


def test_clusters_of_equal_size_have_unbiased_means():
    blocks = {c: values[:2] for c, values in CLUSTERS.items()}
    found = Moments()
    for chosen in subsets(list(blocks), 2):
        values = np.array([v for c in chosen for v in blocks[c]])
        design = SampleDesign.clustered(np.repeat(chosen, 2), population_clusters=4)
        found.add(mean(values, design))
    assert_right_on_average(found, np.mean([v for block in blocks.values() for v in block]))


def test_clusters_within_strata():
    homes = {"p": "north", "q": "north", "r": "south", "s": "south", "t": "south"}
    clusters = {**CLUSTERS, "t": [2.0, 8.0]}
    found = Moments()
    for chosen in stratified_subsets(
        {"north": ["p", "q"], "south": ["r", "s", "t"]}, {"north": 2, "south": 2}
    ):
        labels = [c for c in chosen for _ in clusters[c]]
        design = SampleDesign.clustered(
            labels,
            strata=[homes[c] for c in labels],
            population_clusters={"north": 2, "south": 3},
        )
        found.add(total([v for c in chosen for v in clusters[c]], design))
    assert_right_on_average(found, sum(sum(values) for values in clusters.values()))


TWO_STAGE = {"p": 2, "q": 2, "r": 2, "s": 2}


@pytest.mark.parametrize("n", [2, 3, 4])
def test_two_stages(n):
    totals, group_totals = Moments(), Moments()
    for chance, pairs in two_stage_subsets(CLUSTERS, n, TWO_STAGE):
        values, group = rows_in(pairs)
        design = SampleDesign.two_stage(
            [c for c, _ in pairs],
            cluster_sizes={c: len(v) for c, v in CLUSTERS.items()},
            population_clusters=4,
        )
        totals.add(total(values, design), chance)
        if group.any():
            group_totals.add(total(values, design, where=group), chance)
    assert_right_on_average(totals, totals_of_universe()[0])
    assert_right_on_average(group_totals, totals_of_universe()[1])


@pytest.mark.parametrize("n", [2, 3, 4])
def test_weights_tell_the_second_stage(n):
    """A weight that is the product of both stages gives the variance of both stages."""
    found = Moments()
    for chance, pairs in two_stage_subsets(CLUSTERS, n, TWO_STAGE):
        weights = [4 / n * len(CLUSTERS[c]) / 2 for c, _ in pairs]
        design = SampleDesign.weighted(
            weights, clusters=[c for c, _ in pairs], population_clusters=4
        )
        found.add(total(rows_in(pairs)[0], design), chance)
    assert_right_on_average(found, totals_of_universe()[0])


def test_clusters_with_one_row_take_the_pooled_variance_of_their_stratum():
    """Unbiased where the clusters vary alike inside, whatever their level (so made here)."""
    shifts = {"p": 0.0, "q": 10.0, "r": 3.0}
    clusters = {c: [shift, shift + 1, shift + 5] for c, shift in shifts.items()}
    found = Moments()
    for chance, pairs in two_stage_subsets(clusters, 2, {"p": 1, "q": 2, "r": 2}):
        design = SampleDesign.two_stage(
            [c for c, _ in pairs], cluster_sizes=dict.fromkeys(clusters, 3), population_clusters=3
        )
        found.add(total([clusters[c][u] for c, u in pairs], design), chance)
    assert_right_on_average(found, sum(sum(values) for values in clusters.values()))


def test_not_answering_is_a_further_random_phase_within_strata():
    """Two of three asked in each stratum answer, all ways equally likely."""
    means, totals = Moments(), Moments()
    for rows in stratified_subsets({"a": [0, 1, 2, 3], "b": [4, 5, 6]}, {"a": 3, "b": 3}):
        design = SampleDesign.stratified(STRATUM[rows], population_sizes=SIZES)
        for silent_a in range(3):
            for silent_b in range(3, 6):
                answered = ~np.isin(np.arange(6), [silent_a, silent_b])
                values = np.where(answered, VALUES[rows], np.nan)
                means.add(mean(values, design, answered=answered))
                totals.add(total(values, design, answered=answered))
    assert_right_on_average(means, VALUES.mean())
    assert_right_on_average(totals, VALUES.sum())


def test_not_answering_is_a_further_random_phase_within_clusters():
    """All members are asked, all but one answer in each cluster of the sample."""
    found = Moments()
    clusters = {c: v for c, v in CLUSTERS.items() if len(v) > 2}
    for chance, pairs in two_stage_subsets(
        clusters, 2, {c: len(v) - 1 for c, v in clusters.items()}
    ):
        drawn = sorted({c for c, _ in pairs})
        everyone = [(c, u) for c in drawn for u in range(len(clusters[c]))]
        answered = np.array([row in pairs for row in everyone])
        design = SampleDesign.clustered([c for c, _ in everyone], population_clusters=3)
        values = np.array([clusters[c][u] for c, u in everyone])
        found.add(total(values, design, answered=answered), chance)
    assert_right_on_average(found, sum(sum(v) for v in clusters.values()))


@pytest.fixture
def drawn():
    """A sample with strata, clusters, weights and a subgroup, drawn by a fixed seed."""
    rng = np.random.default_rng(20)
    n = 240
    strata = rng.integers(0, 3, n)
    clusters = strata * 100 + rng.integers(0, 7, n)
    return {
        "values": rng.gamma(2.0, 10.0, n),
        "weights": rng.uniform(0.5, 9.0, n),
        "strata": strata.tolist(),
        "clusters": clusters.tolist(),
        "inside": rng.random(n) < 0.4,
    }


@pytest.mark.parametrize("subgroup", [False, True])
def test_mean_equals_the_loops_for_weights_strata_and_clusters(drawn, subgroup):
    inside = drawn["inside"] if subgroup else np.ones(240, bool)
    design = SampleDesign.weighted(
        drawn["weights"], strata=drawn["strata"], clusters=drawn["clusters"]
    )
    found = mean(drawn["values"], design, where=inside)
    contributions = loop_mean_contributions(drawn["values"], drawn["weights"], inside)
    variance = loop_variance(contributions, drawn["strata"], drawn["clusters"])
    variance *= loop_subgroup_factor(drawn["strata"], drawn["clusters"], inside)
    assert found.value == pytest.approx(
        loop_mean(drawn["values"], drawn["weights"], inside)[0], rel=1e-12
    )
    assert found.standard_error**2 == pytest.approx(variance, rel=1e-11)


def test_total_equals_the_loops_for_two_stages_within_strata(drawn):
    members = {c: drawn["clusters"].count(c) + c % 5 + 1 for c in drawn["clusters"]}
    there = {0: 9, 1: 20, 2: 8}
    design = SampleDesign.two_stage(
        drawn["clusters"],
        cluster_sizes=members,
        population_clusters=there,
        strata=drawn["strata"],
    )
    contributions = design.weights * drawn["values"] * drawn["inside"]
    variance = loop_variance(contributions, drawn["strata"], drawn["clusters"], there, members)
    found = total(drawn["values"], design, where=drawn["inside"])
    assert found.value == pytest.approx(contributions.sum(), rel=1e-12)
    assert found.standard_error**2 == pytest.approx(variance, rel=1e-11)


def test_a_stratum_with_one_cluster_is_centred_at_the_grand_mean():
    """By hand: totals 2, 4 | 9; mean of totals 5; 2/1 x ((2-3)^2 + (4-3)^2) + (9-5)^2 = 20."""
    design = SampleDesign.weighted([2.0, 2.0, 2.0], strata=["a", "a", "b"])
    found = total([1.0, 2.0, 4.5], design)
    assert found.standard_error**2 == pytest.approx(20.0, rel=1e-12)
    assert [c.code for c in found.cautions] == ["single_cluster_stratum"]
    assert "b" in found.cautions[0].sentence


def test_a_stratum_with_one_cluster_that_is_all_there_is_adds_nothing():
    sizes = {"a": 4, "b": 1}
    design = SampleDesign.stratified(["a", "a", "b"], population_sizes=sizes)
    found = total([1.0, 2.0, 50.0], design)
    assert found.value == pytest.approx(4 * 1.5 + 50)
    assert found.standard_error**2 == pytest.approx(4**2 * (1 - 2 / 4) * 0.5 / 2)
    assert found.cautions == ()


def test_one_row_in_every_cluster_is_taken_as_endlessly_many_clusters():
    labels = ["p", "q", "r"]
    design = SampleDesign.two_stage(
        labels, cluster_sizes=dict.fromkeys(labels, 5), population_clusters=10
    )
    found = mean([1.0, 2.0, 6.0], design)
    assert found.standard_error**2 == pytest.approx(np.var([1.0, 2.0, 6.0], ddof=1) / 3)
    assert "second_stage_not_measured" in [c.code for c in found.cautions]
