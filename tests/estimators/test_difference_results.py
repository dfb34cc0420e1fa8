from __future__ import annotations

import math

import pytest
from scipy import stats

from estimators import Difference, cautions
from estimators.difference_results import (
    difference_with_t,
    merged,
    no_difference,
    of_one_side,
)


def found(value: float, variance: float, df: float) -> Difference:
    return difference_with_t(value, variance, df, 0.95, (10, 20.0), 1.0, ())


@pytest.mark.parametrize("df", [1, 7.5, 400, math.inf])
@pytest.mark.parametrize("value", [-3.0, 0.4, 60.0])
def test_the_test_is_that_of_student(value, df):
    result = found(value, 2.25, df)
    assert result.p_value == pytest.approx(2 * stats.t.sf(abs(value) / 1.5, df), rel=1e-9)
    half_width = 1.5 * stats.t.ppf(0.975, df)
    assert result.half_width == pytest.approx(half_width, rel=1e-12)
    assert (result.p_value < 0.05) == (half_width < abs(value))


def test_without_error_a_difference_is_certain():
    assert found(2.0, 0.0, math.inf).p_value == 0
    assert found(0.0, 0.0, 5).p_value == 1
    assert found(0.0, 4.0, 5).p_value == 1


def test_without_degrees_of_freedom_nothing_is_known():
    for variance in (0.0, 4.0, math.nan):
        result = found(2.0, variance, 0)
        assert math.isnan(result.p_value)
        assert math.isinf(result.half_width)
        assert result.cautions == (cautions.NO_DEGREES_OF_FREEDOM,)
    assert math.isnan(found(2.0, 0.0, 0).standard_error)


def test_a_side_without_figure():
    result = no_difference((3, 4.5), 0.9, (cautions.NOBODY_IN_BASE,))
    assert math.isnan(result.value)
    assert math.isnan(result.p_value)
    assert (result.base, result.weighted_base, result.interval.confidence) == (3, 4.5, 0.9)
    assert result.cautions == (cautions.NOBODY_IN_BASE,)


def test_cautions_stand_once_and_in_order():
    first = (cautions.QUOTA_SAMPLE, cautions.answers_missing(9, 3))
    second = (cautions.answers_missing(12, 4), cautions.HEAVY_TIES)
    assert merged(first, second) == (*first, cautions.HEAVY_TIES)
    assert of_one_side((cautions.NO_VARIATION,)) == (cautions.NO_VARIATION_ON_ONE_SIDE,)
    assert of_one_side(first) == first
