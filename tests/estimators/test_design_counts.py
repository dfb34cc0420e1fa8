"""Degrees of freedom and sampling fractions of a base."""

from __future__ import annotations

import math

import numpy as np
import pytest

from estimators import SampleDesign, mean, total
from estimators.design_counts import count_base

ROWS = np.arange(40)
STRATA = np.array(["a", "b", "c", "d"])[ROWS % 4]
DESIGN = SampleDesign.stratified(STRATA, population_sizes={"a": 10, "b": 30, "c": 50, "d": 70})


def test_strata_without_members_and_strata_drawn_completely_count_in_neither():
    where = np.isin(STRATA, ["a", "b", "c"])  # a is complete, d has no members
    found = mean(ROWS.astype(float), DESIGN, where=where)
    assert found.degrees_of_freedom == (10 + 10) - 2


def test_a_small_base_has_as_many_as_its_members_allow():
    where = ROWS < 6  # members: two each in a (complete) and b, one each in c and d
    values = ROWS.astype(float)
    assert mean(values, DESIGN, where=where).degrees_of_freedom == 2 + 1 + 1 - 1
    assert total(values, DESIGN, where=where).degrees_of_freedom == 30 - 3


def test_subgroup_factor_of_five_in_a_thousand():
    where = np.arange(1000) < 5
    counts = count_base(SampleDesign.simple_random(1000).stages, where, where)
    assert counts.subgroup_factor == pytest.approx(5 * 999 / (4 * 1000), rel=1e-15)
    assert counts.degrees_of_freedom == 4
    assert counts.degrees_of_freedom_of_totals == 999


def test_subgroup_factor_counts_clusters_where_there_are_clusters():
    clusters = ROWS // 4
    where = np.isin(ROWS, [0, 1, 9, 17])  # in clusters 0, 2 and 4 of 10
    counts = count_base(SampleDesign.clustered(clusters).stages, where, where)
    assert counts.subgroup_factor == pytest.approx(3 * 9 / (2 * 10), rel=1e-15)
    assert counts.degrees_of_freedom == 2


def test_whole_sample_has_factor_one():
    for design in (DESIGN, SampleDesign.clustered(ROWS // 4)):
        assert count_base(design.stages, None, None).subgroup_factor == 1.0


def test_response_shrinks_the_fraction_within_the_base():
    """Of the 10 rows of b four are asked about and three of these answer: f = 10/30 x 3/4."""
    where = (STRATA == "b") & (ROWS < 16)
    inside = where & (ROWS != 1)
    counts = count_base(DESIGN.stages, where, inside)
    assert counts.fractions.tolist() == pytest.approx([1.0, 10 / 30 * 3 / 4, 10 / 50, 10 / 70])
    assert counts.units.tolist() == [10, 9, 10, 10]


def test_one_member_leaves_no_factor():
    where = ROWS == 7
    assert math.isnan(count_base(DESIGN.stages, where, where).subgroup_factor)
    complete = ROWS == 0
    assert count_base(DESIGN.stages, complete, complete).subgroup_factor == 1.0
