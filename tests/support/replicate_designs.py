"""Small samples of every kind, with the awkward ones: a single unit, a single row, a census."""

from __future__ import annotations

import math
from itertools import product

import numpy as np

from estimators import SampleDesign
from estimators.design_counts import count_base
from estimators.design_variance import variance_of_sum
from tests.support import contracts

ROWS = np.arange(30)
CLUSTERS = ROWS // 3
STRATA = np.where(CLUSTERS < 6, "a", "b")


def designs():
    return contracts.designs() | {
        "several in a stratum, shuffled": SampleDesign.stratified(
            (ROWS * 7) % 5, population_sizes={0: 7, 1: 6, 2: 40, 3: 9, 4: 13}
        ),
        "a stratum drawn completely": SampleDesign.stratified(
            np.where(ROWS < 8, "all", "some"), population_sizes={"all": 8, "some": 100}
        ),
        "two stages, half of all clusters": SampleDesign.two_stage(
            CLUSTERS,
            strata=STRATA,
            cluster_sizes=dict.fromkeys(range(10), 4),
            population_clusters={"a": 8, "b": 6},
        ),
        "two stages, all clusters of one stratum": SampleDesign.two_stage(
            CLUSTERS,
            strata=STRATA,
            cluster_sizes=dict.fromkeys(range(10), 7),
            population_clusters={"a": 6, "b": 8},
        ),
        "two stages, one row in some clusters": SampleDesign.two_stage(
            np.where(ROWS < 4, 100 + ROWS, CLUSTERS),
            cluster_sizes=dict.fromkeys([*range(10), 100, 101, 102, 103], 6),
            population_clusters=20,
        ),
        "one cluster in a stratum": SampleDesign.clustered(
            CLUSTERS,
            strata=np.where(CLUSTERS == 2, "c", STRATA),
            population_clusters={"a": 12, "b": 9, "c": 4},
        ),
        "systematic": SampleDesign.systematic((ROWS * 11) % 31, population_size=90),
    }


def answers(design):
    return np.random.default_rng(5).gamma(2.0, 5.0, design.n)


def variance_of_total(values, design):
    """The linearised variance of the expanded total, by the function every estimator uses."""
    counts = count_base(design.stages, None, None)
    return variance_of_sum(design.weights * values, design.weights, design.stages, counts)


class ListedNumbers:
    """Stands in for a generator: gives the raw numbers of listed draws, one array a call."""

    def __init__(self, *raw):
        self.raw = list(raw)

    def integers(self, *_, **__):
        return self.raw.pop(0).view(np.uint64)


def listed_draws(sampling):
    """Raw numbers of all equally likely draws: every member of its group for every place."""
    sizes = sampling.sizes.astype(int)
    for places in product(*(range(size) for size in sizes)):
        raw = [math.ceil(place * 2**32 / size) for place, size in zip(places, sizes, strict=True)]
        yield np.array(raw + [0] * (len(raw) % 2), np.uint32)
