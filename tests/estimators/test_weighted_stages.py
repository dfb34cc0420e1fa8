"""Sampling fractions and members of clusters that given weights imply."""

from __future__ import annotations

import numpy as np
import pytest

from estimators import InputError
from estimators.design_parts import stratum_codes
from estimators.weighted_stages import universe_of_weights, weighted_stages

ONE = stratum_codes(None, 4)
TWO = stratum_codes(["a", "a", "b", "b"], 4)


def stages_of(weights, strata=ONE, *, clusters=None, size=None, there=None, scaled=True):
    return weighted_stages(np.array(weights), strata, clusters, size, there, scaled=scaled)


def test_without_counts_nothing_is_taken_off():
    assert stages_of([2.0, 3, 4, 5]).fractions.tolist() == [0.0]
    assert stages_of([2.0, 3, 4, 5], clusters=["k", "k", "l", "l"]).fractions.tolist() == [0.0]


def test_the_universe_of_each_stratum_is_taken_as_given():
    found = stages_of([9.0, 9, 1, 1], TWO, size={"a": 20, "b": 8})
    assert found.units_there.tolist() == [20.0, 8.0]
    assert universe_of_weights({"a": 20, "b": 8}, TWO, clustered=False) == 28


def test_one_number_is_split_over_strata_as_the_weights_say():
    found = stages_of([30.0, 20, 6, 4], TWO, size=120)
    assert found.units_there == pytest.approx([100.0, 20.0])


def test_a_split_that_leaves_fewer_units_than_rows_is_not_believed():
    """Stratum b would get 40 x 0.2/20.2 = 0.4 units for 2 rows: the fraction of all, 4 of 40."""
    found = stages_of([10.0, 10, 0.1, 0.1], TWO, size=40)
    assert found.units_there[1] == pytest.approx(20.0)
    assert found.fractions[1] == pytest.approx(0.1)


def test_members_follow_from_weights_and_the_clusters_drawn():
    """2 of 8 clusters, so 4 of each weight is the first stage: weights 12 speak for 3 members."""
    found = stages_of([12.0, 12, 4, 4], clusters=["k", "k", "l", "l"], there=8)
    assert found.rows_there.tolist() == [6.0, 2.0]


def test_members_are_never_fewer_than_the_rows_seen():
    found = stages_of([1.0, 1, 1, 1], clusters=["k", "k", "l", "l"], there=8)
    assert found.rows_there.tolist() == [2.0, 2.0]


def test_relative_weights_say_nothing_about_members():
    found = stages_of([1.9, 1.9, 0.1, 0.1], clusters=list("kkll"), there=4, scaled=False)
    assert found.rows_there.tolist() == [2.0, 2.0]


def test_a_universe_smaller_than_the_sample_is_refused():
    with pytest.raises(InputError, match="population_size must not be smaller than the 4 rows"):
        universe_of_weights(3, ONE, clustered=False)
