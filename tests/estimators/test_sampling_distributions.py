"""Distributions of means and totals: published, enumerated, moments, and honest errors."""

from __future__ import annotations

import itertools
import json
import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from estimators.errors import InputError
from estimators.sampling_distributions import mean_distribution, total_distribution
from estimators.universes import Universe, plug_in_universe
from tests.support import slow_sums

PUBLISHED = Path(__file__).parents[1] / "published_values"
SMALL = json.loads((PUBLISHED / "exact_small_universes.json").read_text(encoding="utf-8"))
RATINGS = Universe(range(11), [12, 24, 36, 48, 108, 180, 300, 300, 240, 120, 72])


@pytest.mark.parametrize("case", SMALL, ids=lambda c: f"{c['of']}-{c['replacement']}")
def test_published_small_universes(case):
    universe = Universe(case["population"], np.ones(len(case["population"])))
    of = total_distribution if case["of"] == "total" else mean_distribution
    found = of(universe, case["n"], replacement=case["replacement"])
    assert found.exact
    assert found.mean == pytest.approx(case["mean"], abs=case["mean_tolerance"])
    if "variance" in case:
        found_variance = found.standard_deviation**2
        assert found_variance == pytest.approx(case["variance"], abs=case["variance_tolerance"])
    if "standard_deviation" in case:
        assert found.standard_deviation == pytest.approx(
            case["standard_deviation"], abs=case["standard_deviation_tolerance"]
        )
        expected = case["population_standard_deviation"]
        assert universe.standard_deviation == pytest.approx(expected, abs=0.005)
    if "samples_by_value" in case:
        expected = {float(v): times for v, times in case["samples_by_value"].items()}
        times = found.probabilities * case["samples"]
        assert found.support.tolist() == sorted(expected)
        np.testing.assert_allclose(times, [expected[v] for v in sorted(expected)], rtol=1e-12)


@settings(deadline=None)
@given(
    values=st.lists(st.integers(-300, 300).map(lambda k: k / 10), min_size=2, max_size=6),
    n=st.integers(1, 4),
    replacement=st.booleans(),
)
def test_every_sample_of_decimal_and_negative_values(values, n, replacement):
    n = n if replacement else min(n, len(values))
    universe = Universe(values, np.ones(len(values)))
    tenths = [round(10 * value) for value in values]
    exact = slow_sums.every_sample(tenths, n, replacement=replacement)
    found = mean_distribution(universe, n, replacement=replacement)
    assert found.exact
    np.testing.assert_allclose(found.support, [t / (10 * n) for t in exact], rtol=1e-13, atol=1e-14)
    np.testing.assert_allclose(found.probabilities, [float(p) for p in exact.values()], atol=1e-14)


def test_values_without_any_lattice_are_still_exact_in_small_samples():
    values = [0.0, 1.0, math.sqrt(2), math.pi, math.e, 10.0]
    found = mean_distribution(Universe(values, np.ones(6)), 3)
    means = sorted(math.fsum(sample) / 3 for sample in itertools.combinations(values, 3))
    assert found.exact
    np.testing.assert_allclose(found.support, means, rtol=1e-14)
    np.testing.assert_allclose(found.probabilities, 1 / 20, rtol=1e-13)


def test_support_holds_just_what_samples_reach_where_that_can_be_told():
    # 20 units of 0 and 1 and two far out: no sample of 10 has a sum of 11 to 99
    universe = Universe([0, 1, 100], [9, 9, 2])
    found = mean_distribution(universe, 10)
    exact = slow_sums.without_replacement([0, 1, 100], [9, 9, 2], 10)
    np.testing.assert_allclose(found.support, sorted(t / 10 for t in exact), rtol=1e-14)


@pytest.mark.parametrize("replacement", [False, True])
@pytest.mark.parametrize(
    ("universe", "n"),
    [
        (RATINGS, 395),
        (RATINGS, 1100),
        (Universe([0.1, 0.2, 0.3, 0.7], [300, 200, 100, 400]), 300),
        (Universe([1 / 3, 2 / 3, 1, 5 / 3], [300, 200, 100, 400]), 300),
        (Universe([-1.5, -0.1, 0, 2.2], [30, 20, 10, 40]), 30),
        (Universe([0, 1, 2, 3, 200], [300, 500, 250, 129, 1]), 395),
    ],
)
def test_moments_in_closed_form_are_those_of_the_probabilities(universe, n, replacement):
    found = mean_distribution(universe, n, replacement=replacement)
    deviations = found.support - found.mean
    spread = found.standard_deviation
    assert found.exact
    assert found.error <= 1e-14
    assert found.probabilities.sum() == pytest.approx(1, abs=1e-13)
    assert found.support @ found.probabilities == pytest.approx(found.mean, rel=1e-12)
    assert math.sqrt(deviations**2 @ found.probabilities) == pytest.approx(spread, rel=1e-10)
    skewness = (deviations / spread) ** 3 @ found.probabilities
    assert skewness == pytest.approx(found.skewness, abs=1e-9)


def test_spread_differs_from_the_standard_error_by_a_known_factor():
    answers = np.repeat([2, 5, 6, 9], [10, 20, 15, 5])
    n, size = answers.size, 200
    found = mean_distribution(plug_in_universe(answers, size), n)
    standard_error = answers.std(ddof=1) * math.sqrt((1 - n / size) / n)
    factor = math.sqrt((n - 1) * size / (n * (size - 1)))
    assert found.standard_deviation == pytest.approx(factor * standard_error, rel=1e-12)


def test_total_is_the_size_of_the_universe_times_the_mean():
    for replacement in (False, True):
        means = mean_distribution(RATINGS, 40, replacement=replacement)
        totals = total_distribution(RATINGS, 40, replacement=replacement)
        np.testing.assert_allclose(totals.support, RATINGS.size * means.support, rtol=1e-15)
        assert totals.probabilities.tolist() == means.probabilities.tolist()
        assert totals.standard_deviation == pytest.approx(RATINGS.size * means.standard_deviation)
        assert totals.skewness == means.skewness


def test_census_and_equal_units_are_points():
    for found in (
        mean_distribution(RATINGS, RATINGS.size),
        mean_distribution(Universe([RATINGS.mean], [50]), 7, replacement=True),
    ):
        assert found.support.tolist() == [RATINGS.mean]
        assert found.probabilities.tolist() == [1.0]
        assert (found.standard_deviation, found.exact, found.error) == (0.0, True, 0.0)
        assert math.isnan(found.skewness)
        assert found.interval(0.95).low == found.interval(0.95).high == RATINGS.mean


def test_one_of_two_units_is_not_skewed():
    assert mean_distribution(Universe([1, 5], [1, 1]), 1).skewness == 0


@pytest.mark.parametrize("confidence", [0.5, 0.9, 0.95, 0.999])
def test_interval_is_the_innermost_that_leaves_half_of_the_rest_on_each_side(confidence):
    found = mean_distribution(RATINGS, 395)
    interval, tail = found.interval(confidence), (1 - confidence) / 2
    below, above = found.support < interval.low, found.support > interval.high
    assert found.probabilities[below].sum() <= tail
    assert found.probabilities[above].sum() <= tail
    assert found.probabilities[found.support <= interval.low].sum() > tail
    assert found.probabilities[found.support >= interval.high].sum() > tail


def test_interval_takes_a_tail_of_just_its_size():
    # 1, 2, 3, 4 with probability 1/4 each: leaving out 1 and 4 keeps exactly half
    interval = mean_distribution(Universe([1, 2, 3, 4], [1, 1, 1, 1]), 1).interval(0.5)
    assert (interval.low, interval.high) == (2, 3)


def test_a_grid_is_used_where_sums_are_too_many_and_says_so():
    rng = np.random.default_rng(20)
    spends = np.unique(np.round(rng.lognormal(3, 1, 150), 2))
    universe = plug_in_universe(spends, 1500)
    exact = mean_distribution(universe, 60)
    coarse = mean_distribution(universe, 60, most_points=60_000)
    assert exact.exact
    assert not coarse.exact
    assert 1e-4 < coarse.error < 0.02
    assert (coarse.mean, coarse.standard_deviation) == (exact.mean, exact.standard_deviation)
    step = coarse.support[1] - coarse.support[0]
    cumulative = np.cumsum(exact.probabilities)
    between = coarse.support + step / 2
    reached = cumulative[np.searchsorted(exact.support, between, side="right") - 1]
    assert np.abs(np.cumsum(coarse.probabilities) - reached).max() < coarse.error


def test_irregular_values_in_a_large_sample_go_to_a_grid():
    rng = np.random.default_rng(21)
    universe = Universe(rng.normal(size=60), rng.integers(1, 40, 60))
    found = mean_distribution(universe, 400)
    assert not found.exact
    assert found.error < 0.002
    assert found.probabilities.sum() == pytest.approx(1, abs=1e-10)
    spread = math.sqrt((found.support - found.mean) ** 2 @ found.probabilities)
    assert spread == pytest.approx(found.standard_deviation, rel=1e-3)


def test_arrays_cannot_be_changed():
    found = mean_distribution(RATINGS, 20)
    for array in (found.support, found.probabilities):
        with pytest.raises(ValueError, match="read-only"):
            array[0] = 1


@pytest.mark.parametrize("n", [0, -1, 2.5, RATINGS.size + 1])
def test_wrong_numbers_of_draws_are_refused(n):
    with pytest.raises(InputError) as refused:
        mean_distribution(RATINGS, n)
    assert refused.value.argument == "n"


def test_an_endless_universe_is_drawn_from_with_replacement_only():
    endless = plug_in_universe([1, 2, 2, 3])
    assert mean_distribution(endless, 4, replacement=True).exact
    with pytest.raises(InputError, match="endless universe"):
        mean_distribution(endless, 4)
    with pytest.raises(InputError, match="an endless one"):
        total_distribution(endless, 4, replacement=True)
