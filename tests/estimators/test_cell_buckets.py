from __future__ import annotations

import numpy as np
import pytest

from estimators import SampleDesign
from estimators.cell_buckets import buckets_of
from tests.support import contracts

KINDS = {
    "simple random": (1, 1),
    "with replacement": (1, 1),
    "stratified": (3, 1),
    "attempted census": (1, 1),
    "clustered": (12, 1),
    "two stages": (12, 1),
    "weighted": (12, 3),
    "quota": (1, 3),
}


@pytest.mark.parametrize("name", list(KINDS))
def test_buckets_are_strata_of_rows_or_clusters(name):
    buckets = buckets_of(contracts.designs()[name])
    assert (len(buckets.rows), buckets.kinds) == KINDS[name]
    assert buckets.rows.sum() == contracts.N
    assert np.bincount(buckets.of_rows).tolist() == buckets.rows.tolist()


def test_second_stages_of_varying_weights_need_inverse_weights():
    labels, weights = np.arange(12) // 3, 1.0 + np.arange(12)
    design = SampleDesign.weighted(weights, clusters=labels, population_clusters=9)
    assert buckets_of(design).kinds == 5
    assert buckets_of(design.without_correction()).kinds == 3
    alike = SampleDesign.weighted(1.0 + labels, clusters=labels, population_clusters=9)
    assert buckets_of(alike).kinds == 1


def test_numbers_go_up_to_strata_and_down_again():
    strata = np.array([1, 0, 1, 0, 2, 1])
    design = SampleDesign.weighted(np.arange(1.0, 7.0), strata=strata, clusters=np.arange(6))
    gather = buckets_of(design).strata
    numbers = np.arange(12.0).reshape(6, 2)
    wanted = np.array([numbers[strata == h].sum(axis=0) for h in range(3)])
    assert gather.sums(numbers).tolist() == wanted.tolist()
    assert gather.spread(wanted).tolist() == wanted[strata].tolist()
    assert gather.first(strata.astype(float)).tolist() == [0, 1, 2]


def test_flags_are_counted_also_where_every_stratum_has_one_cluster():
    design = SampleDesign.weighted(np.ones(4) * 2, strata=[0, 0, 1, 1], clusters=[0, 0, 1, 1])
    assert buckets_of(design).strata.sums(np.array([True, False])).tolist() == [1.0, 0.0]


def test_rows_of_a_response_group_that_weigh_alike():
    strata = np.arange(8) % 2
    assert buckets_of(SampleDesign.weighted(2.0 + strata, strata=strata)).groups_weigh_alike
    assert not buckets_of(SampleDesign.weighted(2.0 + strata)).groups_weigh_alike
    clustered = SampleDesign.weighted(2.0 + strata, clusters=strata)
    assert not buckets_of(clustered).groups_weigh_alike
