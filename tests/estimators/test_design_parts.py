"""From what a caller says about a universe to checked counts."""

from __future__ import annotations

import numpy as np
import pytest

from estimators import InputError
from estimators.design_parts import (
    are_relative,
    cluster_codes,
    cluster_members,
    clusters_there,
    drawn_clusters,
    stratum_codes,
    stratum_sizes,
)


@pytest.mark.parametrize(
    ("average", "relative"), [(1.0, True), (1.0009, True), (0.9991, True), (1.0011, False)]
)
def test_weights_about_one_are_relative(average, relative):
    assert are_relative(np.array([0.5, 1.5]) * average) == relative


@pytest.mark.parametrize(
    ("labels", "sizes"),
    [
        (np.array([1, 2, 1]), {np.int64(1): np.int32(9), np.int64(2): 7}),
        (np.array([1, 2, 1]), {1.0: 9.0, 2.0: 7.0}),
        ([1.0, 2.0, 1.0], {1: 9, 2: 7}),
        (np.array(["1", "2", "1"]), {np.str_("1"): 9, "2": 7}),
        ([True, False, True], {np.True_: 9, False: 7}),
        ([7, "b", 7], {7: 9, "b": 7}),
    ],
)
def test_labels_and_keys_need_to_be_equal_not_of_one_class(labels, sizes):
    codes, found = stratum_codes(labels, 3)
    counts = stratum_sizes(sizes, (codes, found), "population_sizes")
    assert counts[codes].tolist() == [9.0, 7.0, 9.0]


def test_a_number_is_no_text():
    with pytest.raises(InputError, match="must say a number for every stratum in the rows"):
        stratum_sizes({"1": 9}, stratum_codes(np.array([1, 1]), 2), "population_sizes")


def test_one_stratum_takes_a_plain_number_of_clusters():
    stratum = stratum_codes(None, 4)
    cluster = cluster_codes([5, 5, 8, 9], stratum[0])
    assert clusters_there(np.int64(11), stratum, cluster[0]).tolist() == [11.0]
    assert clusters_there(None, stratum, cluster[0]).tolist() == [np.inf]


def test_members_default_to_the_rows():
    codes = cluster_codes(["k", "l", "k"], np.zeros(3, np.intp))
    rows, members = cluster_members(None, codes)
    assert rows.tolist() == members.tolist() == [2.0, 1.0]
    larger = cluster_members({"k": 3, "l": 8, "m": 40}, codes)[1]
    assert larger[codes[0]].tolist() == [3.0, 8.0, 3.0]


def test_weights_are_the_product_of_both_stages():
    """3 of 12 clusters; 2 of 6, 1 of 5 and 1 of 1 members: 4 x 3, 4 x 5 and 4 x 1."""
    stages, weights, size = drawn_clusters(["k", "k", "l", "m"], None, 12, {"k": 6, "l": 5, "m": 1})
    assert weights.tolist() == [12.0, 12.0, 20.0, 4.0]
    assert stages.units_there.tolist() == [12.0]
    assert size is None


def test_the_size_of_the_universe_is_known_where_every_cluster_was_drawn():
    assert drawn_clusters(["k", "k", "l"], None, 2, {"k": 6, "l": 5})[2] == 11
