from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats
from statsmodels.stats.power import TTestIndPower

from estimators import (
    InputError,
    SampleDesign,
    detectable_difference,
    difference,
    difference_of,
    mean,
    proportion,
)


@pytest.fixture
def values(rng):
    return rng.normal(10, 2, 24)


@pytest.mark.parametrize(("power", "confidence"), [(0.8, 0.95), (0.9, 0.9), (0.5, 0.99)])
def test_the_formula_of_cohen_with_many_degrees_of_freedom(power, confidence):
    """Cohen (1988), chapter 2: (z of confidence + z of power) times the standard error."""
    factor = stats.norm.ppf((1 + confidence) / 2) + stats.norm.ppf(power)
    found = detectable_difference(0.3, 0.4, power=power, confidence=confidence)
    assert found == pytest.approx(0.5 * factor, rel=1e-12)


def test_two_surveys_of_a_thousand_tell_six_points_apart():
    """Cohen (1988), formula of chapter 2: 2.8016 sqrt(2 x 0.25/1000) = 6.26 points, worked out."""
    error = math.sqrt(0.25 / 1000)
    assert detectable_difference(error, error) == pytest.approx(0.0626, abs=5e-5)


@pytest.mark.parametrize("n", [3, 8, 40, 400])
def test_few_degrees_of_freedom_as_the_noncentral_t_test_of_statsmodels(n):
    size = TTestIndPower().solve_power(nobs1=n, alpha=0.05, power=0.8, alternative="two-sided")
    found = detectable_difference(math.sqrt(2 / n), degrees_of_freedom=2 * n - 2)
    assert found == pytest.approx(size, rel=2e-4)  # it counts findings of the wrong sign too


def test_the_test_has_the_power_it_was_asked_for(rng):
    """Simulation: t tests of two groups of eight whose means differ by the figure given."""
    shift = detectable_difference(math.sqrt(2 / 8), degrees_of_freedom=14)
    groups = rng.normal(size=(2, 4000, 8)) + np.array([0, shift]).reshape(2, 1, 1)
    found = stats.ttest_ind(groups[0], groups[1], axis=1).pvalue < 0.05
    assert found.mean() == pytest.approx(0.8, abs=3 * math.sqrt(0.16 / 4000))


def test_figures_and_their_difference_say_the_same(values):
    design = SampleDesign.simple_random(12, population_size=40)
    first, second = mean(values[:12], design), mean(values[12:], design)
    found = detectable_difference(first, second)
    assert found == detectable_difference(difference_of(first, second))
    assert found == pytest.approx(
        detectable_difference(
            first.standard_error,
            second.standard_error,
            degrees_of_freedom=difference_of(first, second).degrees_of_freedom,
        ),
        rel=1e-12,
    )


def test_pairs_are_told_apart_more_easily_than_strangers(values, rng):
    design, later = SampleDesign.simple_random(24), values + rng.normal(0, 0.2, 24)
    paired = detectable_difference(difference(values, later, design))
    apart = detectable_difference(mean(values, design), mean(later, design))
    assert paired < apart / 4


def test_more_power_or_confidence_needs_a_larger_difference(values):
    design = SampleDesign.simple_random(24)
    one = mean(values, design)
    by_power = [detectable_difference(one, power=p) for p in (0.05, 0.5, 0.8, 0.99)]
    by_level = [detectable_difference(one, confidence=c) for c in (0.8, 0.9, 0.95, 0.99)]
    assert by_power == sorted(by_power)
    assert by_level == sorted(by_level)


def test_a_share_that_does_not_vary_counts_with_its_interval():
    nobody = proportion(np.zeros(20), SampleDesign.simple_random(20))
    half_width = 0.1611 / 2  # Newcombe (1998), Table I: score interval of 0 in 20
    error = half_width / stats.t.ppf(0.975, 19)
    wanted = detectable_difference(error, degrees_of_freedom=19)
    assert detectable_difference(nobody) == pytest.approx(wanted, rel=1e-3)


def test_what_cannot_be_said():
    census = mean([1.0, 2.0, 4.0], SampleDesign.simple_random(3, population_size=3))
    assert detectable_difference(census) == 0
    assert detectable_difference(mean([1.0], SampleDesign.simple_random(1))) == math.inf
    assert math.isnan(detectable_difference(mean([2.0, 2.0], SampleDesign.simple_random(2))))
    nobody = mean([1.0, 2.0], SampleDesign.simple_random(2), where=np.zeros(2, bool))
    assert math.isnan(detectable_difference(nobody))


@pytest.mark.parametrize(
    ("argument", "call"),
    [
        ("first", {"first": -1.0}),
        ("first", {"first": math.nan}),
        ("first", {"first": "small"}),
        ("second", {"first": 1.0, "second": math.inf}),
        ("power", {"first": 1.0, "power": 80}),
        ("power", {"first": 1.0, "power": 0.02}),
        ("confidence", {"first": 1.0, "confidence": 95}),
        ("degrees_of_freedom", {"first": 1.0, "degrees_of_freedom": -1}),
    ],
)
def test_wrong_calls_are_refused_by_name(argument, call):
    with pytest.raises(InputError, match=f"^{argument} must ") as refusal:
        detectable_difference(**call)
    assert refusal.value.argument == argument
