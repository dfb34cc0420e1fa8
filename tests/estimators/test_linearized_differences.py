"""Every sample of tiny universes, and the same variance by loops."""

from __future__ import annotations

import math

import numpy as np
import pytest

from estimators import SampleDesign, difference
from estimators.linearized_differences import satterthwaite
from tests.support.every_sample import (
    Moments,
    draws,
    stratified_subsets,
    subsets,
    two_stage_subsets,
)
from tests.support.slow_variance import (
    loop_mean_contributions,
    loop_subgroup_factor,
    loop_variance,
)

FIRST = np.array([3.0, -1.0, 4.0, 10.0, 5.0, 9.0, 2.0, 6.5, 1.5])
SECOND = np.array([2.0, 0.5, 4.0, 7.0, 8.0, 9.5, -2.0, 3.5, 6.0])
STRATUM = np.array(list("aaaabbbcc"))
UNITS = {"a": [0, 1, 2, 3], "b": [4, 5, 6], "c": [7, 8]}
SIZES = {"a": 4, "b": 3, "c": 2}
CLUSTERS = {
    "p": [1.0, 5.0, 2.0],
    "q": [8.0, 0.0, 3.5],
    "r": [4.0, 4.5, 9.0],
    "s": [7.0, 3.0, 6.0],
}


def assert_right_on_average(found: Moments, truth: float) -> None:
    assert found.mean == pytest.approx(truth, rel=1e-9)
    assert found.estimated_variance == pytest.approx(found.variance, rel=1e-9)


@pytest.mark.parametrize("n", [2, 4, 8])
def test_two_answers_of_a_simple_random_sample(n):
    found, design = Moments(), SampleDesign.simple_random(n, population_size=9)
    for rows in subsets(range(9), n):
        found.add(difference(FIRST[rows], SECOND[rows], design))
    assert_right_on_average(found, (FIRST - SECOND).mean())


@pytest.mark.parametrize(
    ("first", "second"), [("a", "b"), ("ab", "bc"), ("a", "abc"), ("abc", "bc"), ("ab", "ab")]
)
@pytest.mark.parametrize("answers", [(FIRST, FIRST), (FIRST, SECOND)], ids=["one", "two"])
def test_groups_of_strata_apart_overlapping_and_nested(first, second, answers):
    if (first, second) == ("ab", "ab") and answers[0] is answers[1]:
        return  # a figure minus itself
    found = Moments()
    for rows in stratified_subsets(UNITS, {"a": 3, "b": 2, "c": 2}):
        strata = STRATUM[rows]
        found.add(
            difference(
                answers[0][rows],
                answers[1][rows],
                SampleDesign.stratified(strata, population_sizes=SIZES),
                first_where=np.isin(strata, list(first)),
                second_where=np.isin(strata, list(second)),
            )
        )
    truth = (
        answers[0][np.isin(STRATUM, list(first))].mean()
        - answers[1][np.isin(STRATUM, list(second))].mean()
    )
    assert_right_on_average(found, truth)


def test_two_groups_of_people_drawn_with_replacement():
    """Given how many of each group were drawn, both are simple samples; factors k(c-1)/((k-1)c)."""
    found, design = Moments(), SampleDesign.simple_random(5, population_size=4, replacement=True)
    group = np.array([True, True, False, False])
    for rows in draws(range(4), 5):
        here = group[rows]
        if 2 <= here.sum() <= 3:
            values = FIRST[rows]
            found.add(difference(values, values, design, first_where=here, second_where=~here))
    assert_right_on_average(found, FIRST[:2].mean() - FIRST[2:4].mean())


@pytest.mark.parametrize("n", [2, 3])
def test_two_answers_in_clusters(n):
    """Clusters of one size: a mean is the mean of cluster means."""
    found = Moments()
    for chosen in subsets(list(CLUSTERS), n):
        values = np.concatenate([CLUSTERS[c] for c in chosen])
        second = np.sqrt(values)
        design = SampleDesign.clustered(np.repeat(chosen, 3), population_clusters=4)
        found.add(difference(values, second, design))
    everyone = np.concatenate(list(CLUSTERS.values()))
    assert_right_on_average(found, (everyone - np.sqrt(everyone)).mean())


def test_two_answers_in_two_stages():
    found = Moments()
    for chance, pairs in two_stage_subsets(CLUSTERS, 2, dict.fromkeys(CLUSTERS, 2)):
        values = np.array([CLUSTERS[c][u] for c, u in pairs])
        design = SampleDesign.two_stage(
            [c for c, _ in pairs],
            cluster_sizes=dict.fromkeys(CLUSTERS, 3),
            population_clusters=4,
        )
        found.add(difference(values, np.sqrt(values), design), chance)
    everyone = np.concatenate(list(CLUSTERS.values()))
    assert_right_on_average(found, (everyone - np.sqrt(everyone)).mean())


@pytest.mark.parametrize("two_stages", [False, True])
@pytest.mark.parametrize("seed", range(4))
def test_overlapping_groups_equal_the_plain_loops(seed, two_stages):
    rng = np.random.default_rng(seed)
    clusters = np.repeat(np.arange(12), rng.integers(2, 6, 12))
    n = len(clusters)
    strata = np.array(["x", "y"])[clusters % 2]
    values, others, weights = rng.gamma(2, 5, n), rng.gamma(2, 4, n), rng.uniform(1, 3, n)
    masks = rng.random(n) < 0.6, rng.random(n) < 0.5
    there, members = None, None
    if two_stages:
        there, members = {"x": 9, "y": 30}, dict.fromkeys(range(12), 8)
        design = SampleDesign.two_stage(
            clusters, cluster_sizes=members, population_clusters=there, strata=strata
        )
        weights = design.weights
    else:
        design = SampleDesign.weighted(weights, strata=strata, clusters=clusters)
    found = difference(values, others, design, first_where=masks[0], second_where=masks[1])
    columns = [
        np.array(loop_mean_contributions(v, weights, mask))
        * math.sqrt(loop_subgroup_factor(strata, clusters, mask))
        for v, mask in zip((values, others), masks, strict=True)
    ]
    wanted = loop_variance(columns[0] - columns[1], strata, clusters, there, members)
    assert found.standard_error**2 == pytest.approx(wanted, rel=1e-10)


@pytest.mark.parametrize("universe", [600, 900, None])
@pytest.mark.parametrize("second", [None, 1, 3])
def test_missing_answers_leave_a_smaller_sample_whatever_the_overlap(universe, second, rng):
    """Where every group answers alike: 400 answers of 600 asked are a sample of 400."""
    rows = np.arange(600)
    group, answered = rows % 4 == 0, rows // 4 % 3 > 0
    other = None if second is None else (rows % 4 <= second) & (rows % 4 >= second - 2)
    values = rng.gamma(2, 5, 600)
    later = values + rng.normal(0, 3, 600)
    found = difference(
        values,
        later,
        SampleDesign.simple_random(600, population_size=universe),
        first_where=group,
        second_where=other,
        answered=answered,
    )
    smaller = difference(
        values[answered],
        later[answered],
        SampleDesign.simple_random(400, population_size=universe),
        first_where=group[answered],
        second_where=None if other is None else other[answered],
    )
    assert found.value == pytest.approx(smaller.value, rel=1e-12)
    assert found.standard_error == pytest.approx(smaller.standard_error, rel=1e-12)
    assert found.degrees_of_freedom == pytest.approx(smaller.degrees_of_freedom, rel=1e-4)
    assert found.design_effect == 1


def test_satterthwaite():
    """Equal variances add up their degrees of freedom; one that is zero adds nothing."""
    assert satterthwaite([2.0, 2.0], [7, 7]) == pytest.approx(14)
    assert satterthwaite([2.0, 0.0], [7, 3]) == pytest.approx(7)
    assert satterthwaite([0.0, 0.0], [7, 3]) == 3
    assert satterthwaite([2.0, 1.0], [math.inf, math.inf]) == math.inf
    assert satterthwaite([2.0, 1.0], [math.inf, 0]) == 0
    assert satterthwaite([math.inf, 1.0], [5, 4]) == 4
    assert satterthwaite([1e-200, 1e-200], [4, 4]) == pytest.approx(8)
