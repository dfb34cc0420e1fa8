"""Universes, and the one that looks like the sample."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from estimators.errors import InputError
from estimators.universes import Universe, plug_in_universe


def test_moments_are_those_of_the_units_one_by_one():
    universe = Universe([3, 1, 7], [2, 5, 1])
    units = np.repeat([3, 1, 7], [2, 5, 1])
    deviations = units - units.mean()
    assert universe.size == 8
    assert universe.mean == pytest.approx(units.mean(), rel=1e-15)
    assert universe.standard_deviation == pytest.approx(units.std(), rel=1e-14)
    expected = (deviations**3).mean() / units.std() ** 3
    assert universe.skewness == pytest.approx(expected, rel=1e-13)


def test_values_are_put_in_order_with_equal_ones_together_and_empty_ones_out():
    universe = Universe([5, 2, 5, 9, -0.0, 0.0], [1, 2, 3, 0, 1, 1])
    assert universe.values.tolist() == [0, 2, 5]
    assert universe.counts.tolist() == [2, 2, 4]


def test_arrays_cannot_be_changed_and_the_callers_are_left_alone():
    values, counts = np.array([1.0, 2.0]), np.array([3, 4])
    universe = Universe(values, counts)
    with pytest.raises(ValueError, match="read-only"):
        universe.counts[0] = 9
    with pytest.raises(ValueError, match="read-only"):
        universe.values[0] = 9
    values[0], counts[0] = 7, 7
    assert universe.values[0] == 1


def test_skewness_of_equal_units_is_undefined():
    assert math.isnan(Universe([4], [10]).skewness)
    assert Universe([4], [10]).standard_deviation == 0


@pytest.mark.parametrize(
    ("values", "counts", "argument"),
    [
        ([], [], "values"),
        ([1, math.nan], [1, 1], "values"),
        ([[1, 2]], [[1, 1]], "values"),
        ([1, 2], [1], "counts"),
        ([1, 2], [1, -1], "counts"),
        ([1, 2], [1, 1.5], "counts"),
        ([1, 2], [0, 0], "counts"),
        ([1, 2], [2**31, 1], "counts"),
    ],
)
def test_wrong_universes_are_refused_by_name(values, counts, argument):
    with pytest.raises(InputError) as refused:
        Universe(values, counts)
    assert refused.value.argument == argument


def test_plug_in_by_hand():
    # 12 units from 2, 1 and 2 answers of 5: 4.8, 2.4, 4.8 -> 4, 2, 4; the two units left go to
    # the largest remainders, 1 and 3
    universe = plug_in_universe([3, 1, 2, 3, 1], 12)
    assert universe.values.tolist() == [1, 2, 3]
    assert universe.counts.tolist() == [5, 2, 5]


def test_equal_remainders_go_to_the_smaller_value():
    assert plug_in_universe([8, 4], 5).counts.tolist() == [3, 2]


def test_without_a_size_the_universe_is_endless():
    universe = plug_in_universe([2, 2, 5])
    assert universe.endless
    assert (universe.values.tolist(), universe.counts.tolist()) == ([2, 5], [2, 1])


@given(answers=st.lists(st.integers(0, 6), min_size=1, max_size=40), more=st.integers(0, 10**6))
def test_plug_in_keeps_the_size_and_what_was_seen(answers, more):
    universe = plug_in_universe(answers, len(answers) + more)
    seen = np.unique(answers, return_counts=True)[1]
    quota = seen * universe.size / len(answers)
    assert universe.size == len(answers) + more
    assert (universe.counts >= seen).all()
    assert (np.abs(universe.counts - quota) < 1 + 1e-9 * universe.size).all()


@pytest.mark.parametrize("population_size", [2, 3.5, math.nan, 2**40])
def test_plug_in_refuses_wrong_sizes(population_size):
    with pytest.raises(InputError, match="population_size"):
        plug_in_universe([1, 2, 3], population_size)


def test_plug_in_refuses_missing_answers():
    with pytest.raises(InputError, match="responses must all be finite numbers, but got nan"):
        plug_in_universe([1, math.nan])
