from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from estimators import SampleDesign, quantile
from tests.support import contracts


def smallest_reaching(values, weights, probability):
    """By definition, one candidate after the other."""
    for candidate in sorted(set(values)):
        below = sum(w for v, w in zip(values, weights, strict=True) if v <= candidate)
        if below >= probability * sum(weights) * (1 - 1e-12):
            return candidate
    raise AssertionError


@pytest.mark.parametrize("probability", [0.1, 0.25, 0.5, 0.75, 0.9])
def test_value_is_the_smallest_that_reaches_the_probability(probability):
    rng = np.random.default_rng(2)
    values, weights = rng.integers(0, 40, 61), rng.integers(1, 6, 61)
    found = quantile(values, probability, SampleDesign.weighted(weights))
    assert found.value == smallest_reaching(values.tolist(), weights.tolist(), probability)


def test_value_is_that_of_the_inverted_distribution_function_of_numpy():
    values = np.random.default_rng(3).normal(size=101)
    for probability in (0.05, 0.2, 0.5, 0.77):
        found = quantile(values, probability, SampleDesign.simple_random(101))
        assert found.value == np.quantile(values, probability, method="inverted_cdf")


@pytest.mark.parametrize("k", [2, 4, 10])
def test_rounding_does_not_step_over_a_value(k):
    """Half of an even number of equal weights is reached exactly."""
    values = np.arange(1.0, k + 1)
    for weight in (0.1, 1 / 3, 7.0):
        found = quantile(values, 0.5, SampleDesign.weighted(np.full(k, weight)))
        assert found.value == k / 2


def test_interval_of_woodruff_written_out():
    """Order statistics 0.5 -/+ t s with s^2 = (1-f) F(1-F) / (n-1), F = 0.51 (n = 100)."""
    values = np.random.default_rng(9).permutation(100) + 1.0
    found = quantile(values, 0.51, SampleDesign.simple_random(100, population_size=400))
    reach = stats.t.ppf(0.975, 99) * math.sqrt(0.75 * 0.51 * 0.49 / 99)
    assert found.value == 51.0
    assert found.interval.low == math.ceil(100 * (0.51 - reach))
    assert found.interval.high == math.ceil(100 * (0.51 + reach))
    assert found.standard_error == pytest.approx(found.half_width / stats.t.ppf(0.975, 99))
    assert found.interval.method == "woodruff"
    assert found.cautions == ()


def test_interval_of_clusters_written_out():
    rng = np.random.default_rng(10)
    clusters = np.arange(200) // 10
    values = np.round(rng.normal(size=200) + rng.normal(size=20)[clusters], 3)
    weights = rng.uniform(1, 3, 200)
    found = quantile(values, 0.5, SampleDesign.weighted(weights, clusters=clusters))
    below = values <= found.value
    share = weights[below].sum() / weights.sum()
    sums = np.bincount(clusters, weights * (below - share)) / weights.sum()
    reach = stats.t.ppf(0.975, 19) * math.sqrt(20 / 19 * (sums**2).sum())
    args = (values.tolist(), weights.tolist())
    assert found.interval.low == smallest_reaching(*args, 0.5 - reach)
    assert found.interval.high == smallest_reaching(*args, 0.5 + reach)


def test_coverage_of_the_median():
    """Nominal 95 percent within three simulation errors and a step of an order statistic."""
    rng = np.random.default_rng(11)
    design = SampleDesign.simple_random(200)
    repeats, hits = 1500, 0
    for _ in range(repeats):
        found = quantile(rng.exponential(size=200), 0.5, design)
        hits += found.interval.low <= math.log(2) <= found.interval.high
    assert hits / repeats == pytest.approx(0.95, abs=0.02)


def test_heavy_ties_carry_a_caution():
    ratings = np.repeat([6.0, 7.0, 8.0, 9.0], [50, 80, 260, 110])
    found = quantile(ratings, 0.5, SampleDesign.simple_random(500, population_size=2000))
    assert found.value == 8.0
    assert [c.code for c in found.cautions] == ["heavy_ties"]


def test_a_small_base_has_no_bound_on_one_side():
    found = quantile([1.0, 2.0, 3.0, 4.0, 5.0], 0.5, SampleDesign.simple_random(5))
    assert (found.interval.low, found.interval.high) == (-math.inf, math.inf)
    assert [c.code for c in found.cautions] == ["beyond_the_answers"]


def test_the_largest_value_as_quantile_is_not_certain():
    found = quantile(np.arange(1.0, 21.0), 0.99, SampleDesign.simple_random(20))
    assert found.value == 20.0
    assert found.interval.high == math.inf
    assert found.interval.low < 20.0


def test_equal_answers_are_tied_heavily():
    found = quantile(np.full(40, 3.0), 0.5, SampleDesign.simple_random(40))
    assert found.value == found.interval.low == found.interval.high == 3.0
    assert [c.code for c in found.cautions] == ["heavy_ties"]


@pytest.mark.parametrize("probability", [0, 1, -0.5, 50, math.nan])
def test_probability_is_checked(probability):
    with pytest.raises(ValueError, match=r"^probability must lie between 0 and 1"):
        quantile([1.0, 2.0], probability, SampleDesign.simple_random(2))


@pytest.mark.parametrize("check", contracts.CHECKS)
def test_contract(check):
    check(contracts.QUANTILE)
