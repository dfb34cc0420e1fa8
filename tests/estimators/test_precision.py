"""From a variance to design effects, effective bases and t intervals."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from estimators import SampleDesign, mean, total
from estimators.linearized_values import answered_base
from estimators.precision import (
    precision_of_mean,
    precision_of_total,
    stand_in_effect,
    t_interval,
    t_quantile,
    weighted_spread,
)


@pytest.mark.parametrize("confidence", [0.8, 0.95, 0.999])
@pytest.mark.parametrize("df", [1, 7, 240.5])
def test_t_quantile_is_that_of_scipy(df, confidence):
    upper = (1 + confidence) / 2
    assert t_quantile(df, confidence) == pytest.approx(stats.t.ppf(upper, df), rel=1e-10)
    assert t_quantile(math.inf, confidence) == pytest.approx(stats.norm.ppf(upper), rel=1e-12)
    assert t_quantile(0, confidence) == math.inf


def test_t_interval_has_no_bounds_where_nothing_is_known():
    for unknown in (t_interval(3.0, 1.0, 0.0, 0.95), t_interval(3.0, math.nan, 9.0, 0.95)):
        assert (unknown.low, unknown.high) == (-math.inf, math.inf)
    census = t_interval(3.0, 0.0, math.inf, 0.95)
    assert (census.low, census.high) == (3.0, 3.0)


def test_bases_of_a_mean_by_hand():
    """s2 = 6 with divisor weights, 9 rows of 90: equivalent 6 x 9/8 / 0.3 = 22.5, f = 0.1."""
    base = answered_base(SampleDesign.simple_random(9, population_size=90), None, None)
    found = precision_of_mean(0.3, 6.0, base)
    assert found.equivalent_base == pytest.approx(22.5)
    assert found.design_effect == pytest.approx(9 / (22.5 * 0.9))
    assert found.effective_base == pytest.approx(22.5 * 0.9)
    assert not found.no_variation


def test_an_unknown_universe_takes_nothing_off():
    base = answered_base(SampleDesign.weighted([4.0, 5.0, 6.0]), None, None)
    found = precision_of_mean(0.5, 2.0, base)
    assert found.equivalent_base == pytest.approx(2.0 * 3 / 2 / 0.5)
    assert found.effective_base == found.equivalent_base


def test_a_census_is_worth_its_base_and_endlessly_many_others():
    base = answered_base(SampleDesign.simple_random(9, population_size=9), None, None)
    for found in (precision_of_mean(0.0, 6.0, base), precision_of_total(0.0, np.arange(9.0), base)):
        assert (found.equivalent_base, found.design_effect) == (math.inf, 1.0)
        assert found.effective_base == 9


@pytest.mark.parametrize("variance", [0.0, 1e-17, math.nan])
def test_variances_of_rounding_noise_get_a_stand_in(variance):
    base = answered_base(SampleDesign.simple_random(9, population_size=90), None, None)
    found = precision_of_mean(variance, 6.0, base)
    assert found.no_variation
    assert (found.equivalent_base, found.design_effect) == (pytest.approx(10.0), pytest.approx(1))


def test_stand_in_effect_by_hand():
    """Weights 1, 1, 4: 3 x 18 / 36 = 1.5; clusters of 2 and 1: 1 + (1.5 - 1) x 0.05 = 1.025."""
    design = SampleDesign.weighted([2.0, 2.0, 8.0], clusters=["k", "k", "l"])
    assert stand_in_effect(answered_base(design, None, None)) == pytest.approx(1.5 * 1.025)


def test_spread_of_equal_answers_is_zero_not_rounding_noise():
    base = answered_base(SampleDesign.simple_random(4), None, None)
    noise = np.array([1e-13, -1e-13, 0, 0])
    assert weighted_spread(noise, 1e3, base) == 0.0
    assert weighted_spread(noise, 1e-3, base) > 0.0
    assert weighted_spread(np.array([1.0, -1.0, 1.0, -1.0]), 5.0, base) == 1.0


def test_totals_and_means_of_everyone_are_worth_the_same_where_the_size_is_known():
    values = np.array([2.0, 5.0, 4.0, 9.0, 1.0, 7.0])
    design = SampleDesign.simple_random(6, population_size=24)
    a, b = mean(values, design), total(values, design)
    assert b.design_effect == pytest.approx(a.design_effect, rel=1e-12)
    assert b.equivalent_base == pytest.approx(a.equivalent_base, rel=1e-12)


@pytest.mark.parametrize("replacement", [False, True])
def test_identities_of_the_bases(replacement):
    """design_effect = base / (equivalent (1 - f)), effective = base / design_effect."""
    values = np.random.default_rng(5).gamma(2.0, 4.0, 40)
    strata = np.arange(40) % 2
    design = SampleDesign.stratified(
        strata, population_sizes={0: 50, 1: 200}, replacement=replacement
    )
    for where in (None, np.arange(40) < 23):
        found = mean(values, design, where=where)
        unseen = 1 - found.base / found.weighted_base
        assert found.design_effect == pytest.approx(found.base / (found.equivalent_base * unseen))
        assert found.effective_base == pytest.approx(found.base / found.design_effect)
        inside = np.ones(40, bool) if where is None else where
        weights, chosen = design.weights[inside], values[inside]
        spread = np.average((chosen - found.value) ** 2, weights=weights)
        wanted = spread * found.base / (found.base - 1) / found.standard_error**2
        assert found.equivalent_base == pytest.approx(wanted, rel=1e-9)
