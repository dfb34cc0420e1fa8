"""The t interval of a mean from its summary."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from estimators.errors import InputError
from estimators.mean_intervals import mean_interval


def test_second_program_agrees_in_an_endless_universe():
    # scipy.stats.t.interval(0.9, 24, loc=7.4, scale=2.0 / 5)
    found = mean_interval(7.4, 2.0, 25, confidence=0.9)
    assert (found.low, found.high) == pytest.approx(stats.t.interval(0.9, 24, 7.4, 0.4), rel=1e-12)
    assert (found.confidence, found.method) == (0.9, "t")


def test_published_summary():
    # Gosset's sleep data (Student 1908, additional hours, drug 1 against 2): mean 1.58, s 1.2300,
    # n 10; the printed 95 percent interval of the paired difference is 0.70 to 2.46 (from memory)
    found = mean_interval(1.58, 1.22999548, 10)
    assert (found.low, found.high) == pytest.approx((0.70, 2.46), abs=0.005)


def test_finite_universe_shrinks_by_the_root_of_what_is_unseen():
    wide, narrow = mean_interval(5, 1.5, 300), mean_interval(5, 1.5, 300, population_size=400)
    assert narrow.half_width / wide.half_width == pytest.approx(0.5, rel=1e-12)
    assert mean_interval(5, 1.5, 300, population_size=400, replacement=True) == wide


def test_census_has_no_width_and_a_single_answer_no_bounds():
    assert mean_interval(5, 1.5, 300, population_size=300).half_width == 0
    single = mean_interval(5, math.nan, 1)
    assert (single.low, single.high) == (-math.inf, math.inf)
    assert mean_interval(5, math.nan, 1, population_size=1).half_width == 0


@pytest.mark.parametrize(
    ("call", "argument"),
    [
        ((math.nan, 1, 10, {}), "mean"),
        ((1, -1, 10, {}), "standard_deviation"),
        ((1, math.nan, 10, {}), "standard_deviation"),
        ((1, 1, 0, {}), "n"),
        ((1, 1, 1.5, {}), "n"),
        ((1, 1, 10, {"confidence": 0}), "confidence"),
        ((1, 1, 10, {"population_size": 9}), "population_size"),
    ],
)
def test_wrong_calls_are_refused_by_name(call, argument):
    with pytest.raises(InputError) as refused:
        mean_interval(*call[:3], **call[3])
    assert refused.value.argument == argument


def test_bounds_are_plain_numbers_whatever_was_given():
    interval = mean_interval(np.float32(3), np.float64(1), np.int64(10))
    assert type(interval.low) is type(interval.high) is float
