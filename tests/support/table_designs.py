"""Samples of every kind, drawn at random and small, to compare tables with single figures."""

from __future__ import annotations

import numpy as np

from estimators import SampleDesign


def random_design(draw, n):
    """A design of a random kind for n rows: (name, design)."""
    strata = draw.integers(0, draw.integers(1, 4), n)
    clusters = draw.integers(0, draw.integers(1, max(2, n)), n)
    homes = draw.integers(0, 3, n)[clusters]  # the stratum of each cluster
    weights = _weights(draw, n, strata)
    kind = KINDS[draw.integers(len(KINDS))]
    design = kind(draw, n, (strata, clusters, homes), weights)
    if draw.random() < 0.15:
        design = design.without_correction()
    return kind.__name__, design


def _weights(draw, n, strata):
    """Weights that all differ, differ a little, are equal, equal by stratum, or zero for some."""
    choices = (
        draw.gamma(2.0, 1.0, n) + 0.01,
        1.0 + draw.integers(0, 3, n),
        np.full(n, 3.0),
        2.5 * (1.0 + strata),
        draw.integers(0, 3, n).astype(float),
    )
    found = choices[draw.integers(len(choices))]
    return found if found.any() else np.ones(n)


def _sizes(draw, labels, more):
    kinds, rows = np.unique(labels, return_counts=True)
    return {int(k): int(m + draw.choice(more)) for k, m in zip(kinds, rows, strict=True)}


def _clusters_there(draw, clusters, homes):
    """Clusters of the universe in each stratum; now and then all are drawn, or nothing is known."""
    if draw.random() < 0.2:
        return None
    drawn = {int(h): len(np.unique(clusters[homes == h])) for h in np.unique(homes)}
    return {h: int(c + draw.choice([0, 0, 1, 9])) for h, c in drawn.items()}


def simple_random(draw, n, _labels, _weights):
    return SampleDesign.simple_random(n, population_size=int(n + draw.choice([0, 1, 10, 999])))


def with_replacement(_draw, n, _labels, _weights):
    return SampleDesign.simple_random(n, population_size=2 * n, replacement=True)


def stratified(draw, _n, labels, _weights):
    return SampleDesign.stratified(labels[0], population_sizes=_sizes(draw, labels[0], [0, 1, 50]))


def attempted_census(draw, n, labels, _weights):
    if draw.random() < 0.5:
        return SampleDesign.attempted_census(n, population_size=int(n + draw.integers(0, 9)))
    sizes = _sizes(draw, labels[0], [0, 1, 5])
    return SampleDesign.attempted_census(n, strata=labels[0], population_sizes=sizes)


def clustered(draw, _n, labels, _weights):
    there = _clusters_there(draw, labels[1], labels[2])
    return SampleDesign.clustered(labels[1], strata=labels[2], population_clusters=there)


def two_stage(draw, _n, labels, _weights):
    return SampleDesign.two_stage(
        labels[1],
        cluster_sizes=_sizes(draw, labels[1], [0, 1, 5]),
        strata=labels[2],
        population_clusters=_clusters_there(draw, labels[1], labels[2]),
    )


def weighted(draw, n, labels, weights):
    choices = (None, n, 10 * n, _sizes(draw, labels[0], [0, 1, 50]))
    size = choices[draw.integers(len(choices))]
    return SampleDesign.weighted(weights, strata=labels[0], population_size=size)


def weighted_clusters(draw, n, labels, weights):
    return SampleDesign.weighted(
        weights if draw.random() < 0.5 else weights / weights.mean(),
        strata=labels[2],
        clusters=labels[1],
        population_clusters=_clusters_there(draw, labels[1], labels[2]),
        population_size=None if draw.random() < 0.5 else 4 * n,
    )


def quota(draw, n, _labels, weights):
    return SampleDesign.quota(n, weights=None if draw.random() < 0.5 else weights)


KINDS = (
    simple_random,
    with_replacement,
    stratified,
    attempted_census,
    clustered,
    two_stage,
    weighted,
    weighted_clusters,
    quota,
)


def figures_of(estimate):
    """The numbers of an estimate that tables hold, in the order of their columns."""
    return np.array(
        [
            estimate.base,
            estimate.value,
            estimate.standard_error,
            estimate.interval.low,
            estimate.interval.high,
            estimate.effective_base,
            estimate.degrees_of_freedom,
        ]
    )


NUMBERS = (
    "base",
    "value",
    "standard_error",
    "low",
    "high",
    "effective_base",
    "degrees_of_freedom",
)


def rows_of(table):
    """(m, 7) the numbers of a table, in the order of their columns."""
    return np.column_stack([table.columns[name] for name in NUMBERS])


def assert_same_figures(found, wanted):
    """Equal to 1e-12; no standard error of nothing but rounding where nothing can be known."""
    wanted = wanted.copy()
    noise = (wanted[:, 6] <= 0) & (wanted[:, 2] < 1e-13)
    wanted[noise, 2] = np.nan
    np.testing.assert_allclose(found, wanted, rtol=1e-11, atol=1e-12)
