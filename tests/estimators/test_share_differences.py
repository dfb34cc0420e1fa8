from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from statsmodels.stats.proportion import confint_proportions_2indep

from estimators import SampleDesign, proportion, proportion_interval
from estimators.share_differences import difference_of_shares, square_and_add

PUBLISHED = Path(__file__).parents[1] / "published_values"
COUNTS = json.loads((PUBLISHED / "differences_of_counts.json").read_text(encoding="utf-8"))
NEWCOMBE = [case for case in COUNTS if case["method"] == "square_and_add"]


def with_interval(count: int, n: int):
    return count / n, proportion_interval(count, n)


def estimate_of(count: int, n: int, **universe):
    return proportion(np.arange(n) < count, SampleDesign.simple_random(n, **universe))


@pytest.mark.parametrize("case", NEWCOMBE, ids=lambda case: str(case["first"] + case["second"]))
def test_published_intervals(case):
    low, high = square_and_add(with_interval(*case["first"]), with_interval(*case["second"]))
    assert low == pytest.approx(case["low"], abs=case["tolerance"][0])
    assert high == pytest.approx(case["high"], abs=case["tolerance"][1])


@settings(deadline=None)
@given(st.integers(1, 60), st.integers(1, 60), st.data())
def test_second_opinion(n, m, data):
    x, y = data.draw(st.integers(0, n)), data.draw(st.integers(0, m))
    found = square_and_add(with_interval(x, n), with_interval(y, m))
    wanted = confint_proportions_2indep(x, n, y, m, method="newcomb", compare="diff")
    assert found == pytest.approx(wanted, abs=1e-9)
    assert -1 - 1e-12 <= found[0] <= found[1] <= 1 + 1e-12


@settings(deadline=None, max_examples=50)
@given(st.integers(2, 40), st.integers(2, 40), st.data())
def test_the_test_says_what_the_interval_says(n, m, data):
    x, y = data.draw(st.integers(0, n)), data.draw(st.integers(0, m))
    confidence = data.draw(st.sampled_from([0.5, 0.8, 0.95, 0.99]))
    interval, p_value = difference_of_shares(estimate_of(x, n), estimate_of(y, m), confidence)
    leaves_out_zero = interval.low > 0 or interval.high < 0
    assert leaves_out_zero == (p_value < 1 - confidence)
    other, same = difference_of_shares(estimate_of(y, m), estimate_of(x, n), confidence)
    assert (other.low, other.high, same) == pytest.approx((-interval.high, -interval.low, p_value))


def test_intervals_of_a_finite_universe_are_those_of_the_shares():
    first, second = estimate_of(0, 30, population_size=50), estimate_of(9, 40, population_size=70)
    interval, _ = difference_of_shares(first, second, 0.95)
    wanted = square_and_add((first.value, first.interval), (second.value, second.interval))
    assert (interval.low, interval.high) == pytest.approx(wanted, rel=1e-14)


def test_a_census_on_one_side_has_no_arm():
    whole, part = estimate_of(5, 10, population_size=10), estimate_of(0, 12)
    interval, _ = difference_of_shares(whole, part, 0.95)
    assert interval.high == 0.5
    assert interval.low == pytest.approx(0.5 - part.interval.high)


def test_a_difference_beyond_doubt_has_the_smallest_p_value():
    """What is known of both sides leaves no room for equal shares."""
    whole, part = estimate_of(5, 10, population_size=10), estimate_of(0, 10, population_size=12)
    _, p_value = difference_of_shares(whole, part, 0.95)
    assert p_value == 1e-15


def test_correlation_takes_arms_away():
    """At 1 two equal shares keep the difference of their own two arms only."""
    share, interval = with_interval(7, 20)
    below, above = share - interval.low, interval.high - share
    same = (share, interval)
    apart, joined = square_and_add(same, same), square_and_add(same, same, correlation=1.0)
    assert apart == pytest.approx((-math.hypot(below, above), math.hypot(below, above)))
    assert joined == pytest.approx((-abs(above - below), abs(above - below)))
