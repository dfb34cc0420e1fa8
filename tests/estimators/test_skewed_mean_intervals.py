"""Means of skewed answers: formulas by hand, second programs, and how often they cover."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import optimize, stats

from estimators.cautions import SKEWED_ANSWERS
from estimators.errors import InputError
from estimators.interval_coverage import mean_coverage
from estimators.mean_intervals import mean_interval
from estimators.skewed_mean_intervals import (
    bootstrap_t_interval,
    sample_skewness,
    skewed_mean_interval,
    skewness_caution,
)
from estimators.universes import Universe

SPENDS = np.round(np.exp(np.random.default_rng(5).normal(4, 0.9, 60)), 1)
SUMMARY = (SPENDS.mean(), SPENDS.std(ddof=1), sample_skewness(SPENDS), 60)


def bounds(interval):
    return interval.low, interval.high


def test_johnson_moves_the_t_interval_by_his_term():
    # Johnson (1978): mean + third moment / (6 s2 n) +/- t s / sqrt(n); scipy.stats for both parts
    third = stats.kstat(SPENDS, 3)
    centre = SPENDS.mean() + third / (6 * SPENDS.var(ddof=1) * 60)
    expected = stats.t.interval(0.95, 59, centre, stats.sem(SPENDS))
    found = skewed_mean_interval(*SUMMARY, method="johnson")
    assert bounds(found) == pytest.approx(expected, rel=1e-10)
    assert found.method == "johnson"


@pytest.mark.parametrize("units", [75, 120, 1000])
def test_johnson_moves_by_the_skewness_of_the_mean_in_a_finite_universe(units):
    """A sixth of the skewness of the mean, in its standard errors.

    That skewness is g (N - 2n) / (N - 2) sqrt((N - 1) / (n (N - n))) for a universe of skewness g
    (Sugden, Smith and Jones 2000); with N in place of N - 1 and N - 2 it is used here.
    """
    mean, deviation, skewness, n = SUMMARY
    plain = mean_interval(mean, deviation, n, population_size=units)
    error = deviation * math.sqrt((1 - n / units) / n)
    move = skewness * (units - 2 * n) / units * math.sqrt(units / (n * (units - n))) / 6 * error
    found = skewed_mean_interval(*SUMMARY, method="johnson", population_size=units)
    assert bounds(found) == pytest.approx((plain.low + move, plain.high + move), rel=1e-12)


@pytest.mark.parametrize("units", [None, 75, 120, 1000])
@pytest.mark.parametrize("sign", [1, -1])
def test_hall_inverts_the_corrected_t_of_the_expansion(units, sign):
    """Solve T + c T^2 + c^2 T^3 / 3 + shift = +/- t by a root search.

    The studentised mean has the first cumulant -g sqrt(1-f) / (2 sqrt n) and the third
    -g (2-f) / sqrt(n (1-f)); taking both away leaves c = g (2-f) / (6 sqrt(n (1-f))) and
    shift = g (1-2f) / (6 sqrt(n (1-f))), which are Johnson's g / (3 sqrt n) and g / (6 sqrt n)
    in an endless universe.
    """
    mean, deviation, skewness, n = SUMMARY
    skewness *= sign
    f = 0.0 if units is None else n / units
    error = deviation * math.sqrt((1 - f) / n)
    first = -skewness * math.sqrt(1 - f) / (2 * math.sqrt(n))
    third = -skewness * (2 - f) / math.sqrt(n * (1 - f))
    c, shift = -third / 6, -first + third / 6
    quantile = stats.t.ppf(0.95, n - 1)

    def corrected(truth):
        t = (mean - truth) / error
        return t + c * t**2 + c**2 * t**3 / 3 + shift

    ends = [
        optimize.brentq(
            lambda truth, q=q: corrected(truth) - q, mean - 90 * error, mean + 90 * error
        )
        for q in (quantile, -quantile)
    ]
    found = skewed_mean_interval(
        mean, deviation, skewness, n, confidence=0.9, population_size=units
    )
    assert bounds(found) == pytest.approx(ends, rel=1e-9)
    assert found.method == "hall"


@pytest.mark.parametrize("method", ["johnson", "hall"])
def test_without_skewness_it_is_the_t_interval(method):
    plain = mean_interval(4.0, 1.5, 40, population_size=90)
    found = skewed_mean_interval(4.0, 1.5, 0.0, 40, method=method, population_size=90)
    assert bounds(found) == pytest.approx(bounds(plain), rel=1e-12)
    near = skewed_mean_interval(4.0, 1.5, 1e-7, 40, method=method, population_size=90)
    assert bounds(near) == pytest.approx(bounds(plain), rel=1e-6)
    assert skewed_mean_interval(*SUMMARY, method="t").half_width == pytest.approx(
        mean_interval(*SUMMARY[:2], 60).half_width, rel=1e-15
    )


@pytest.mark.parametrize("method", ["johnson", "hall"])
def test_turning_the_answers_round_turns_the_interval_round(method):
    found = skewed_mean_interval(*SUMMARY, method=method)
    mean, deviation, skewness, n = SUMMARY
    turned = skewed_mean_interval(-mean, deviation, -skewness, n, method=method)
    assert bounds(turned) == pytest.approx((-found.high, -found.low), rel=1e-12)


def test_the_long_arm_of_hall_lies_where_the_few_are():
    found = skewed_mean_interval(*SUMMARY)
    assert found.high - SUMMARY[0] > 1.2 * (SUMMARY[0] - found.low)


@settings(deadline=None)
@given(st.floats(-40, 40), st.integers(3, 3000), st.floats(0.5, 0.99))
def test_hall_always_has_an_interval_that_grows_with_confidence(skewness, n, confidence):
    narrow = skewed_mean_interval(0.0, 1.0, skewness, n, confidence=confidence)
    wide = skewed_mean_interval(0.0, 1.0, skewness, n, confidence=(1 + confidence) / 2)
    assert wide.low <= narrow.low < narrow.high <= wide.high


def test_census_has_no_width_and_few_answers_no_correction():
    census = skewed_mean_interval(5, 1.5, 3.0, 30, population_size=30)
    assert bounds(census) == (5, 5)
    single = skewed_mean_interval(5, math.nan, math.nan, 1)
    assert bounds(single) == (-math.inf, math.inf)
    pair = skewed_mean_interval(5, 1.5, math.nan, 2)
    assert bounds(pair) == bounds(mean_interval(5, 1.5, 2))


@pytest.mark.parametrize(("n", "replacement"), [(60, False), (300, False), (60, True)])
def test_hall_covers_where_the_t_interval_does_not(n, replacement):
    universe = Universe(np.exp(np.random.default_rng(2).normal(4, 0.9, 500)), np.ones(500))
    covered = {
        m: mean_coverage(universe, n, replacement=replacement, method=m)
        for m in ("t", "johnson", "hall")
    }
    assert covered["t"] < 0.94  # skewness 4.1
    assert abs(covered["johnson"] - covered["t"]) < 0.006  # moves by a ninth of what is needed
    assert 0 < 0.95 - covered["hall"] < 0.6 * (0.95 - covered["t"])


def test_bootstrap_t_covers_where_the_t_interval_does_not():
    universe = np.exp(np.random.default_rng(2).normal(4, 0.9, 500))
    chance = np.random.default_rng(8)
    plain = bootstrap = 0
    for _ in range(300):
        answers = chance.choice(universe, 60, replace=False)
        found = mean_interval(answers.mean(), answers.std(ddof=1), 60, population_size=500)
        plain += found.low <= universe.mean() <= found.high
        found = bootstrap_t_interval(answers, population_size=500, repetitions=499)
        bootstrap += found.low <= universe.mean() <= found.high
    assert bootstrap >= plain + 5
    assert bootstrap / 300 > 0.91


# Bootstrap-t.


def test_bootstrap_agrees_with_a_plain_loop():
    """Efron and Tibshirani (1993), section 12.5, one resample at a time, other random numbers."""
    chance = np.random.default_rng(99)
    n, ratios = SPENDS.size, []
    for _ in range(8000):
        again = chance.choice(SPENDS, n)
        ratios.append((again.mean() - SPENDS.mean()) / (again.std(ddof=1) / math.sqrt(n)))
    error = SPENDS.std(ddof=1) / math.sqrt(n)
    upper, lower = np.quantile(ratios, [0.95, 0.05])
    found = bootstrap_t_interval(SPENDS, confidence=0.9)
    assert found.low == pytest.approx(SPENDS.mean() - upper * error, abs=0.06 * error)
    assert found.high == pytest.approx(SPENDS.mean() - lower * error, abs=0.12 * error)
    assert (found.confidence, found.method) == (0.9, "bootstrap_t")


def test_bootstrap_in_a_finite_universe_agrees_with_a_plain_loop():
    """Booth, Butler, Hall (1994): every answer twice, drawn without replacement."""
    chance = np.random.default_rng(98)
    n, ratios = SPENDS.size, []
    there, error = np.repeat(SPENDS, 2), SPENDS.std(ddof=1) * math.sqrt(0.5 / SPENDS.size)
    for _ in range(8000):
        again = chance.choice(there, n, replace=False)
        ratios.append((again.mean() - SPENDS.mean()) / (again.std(ddof=1) * math.sqrt(0.5 / n)))
    upper, lower = np.quantile(ratios, [0.95, 0.05])
    found = bootstrap_t_interval(SPENDS, confidence=0.9, population_size=120)
    assert found.low == pytest.approx(SPENDS.mean() - upper * error, abs=0.06 * error)
    assert found.high == pytest.approx(SPENDS.mean() - lower * error, abs=0.12 * error)


def test_bootstrap_of_normal_answers_is_close_to_the_t_interval():
    values = stats.norm.ppf((np.arange(200) + 0.5) / 200)
    plain = mean_interval(0.0, float(values.std(ddof=1)), 200)
    found = bootstrap_t_interval(values)
    assert bounds(found) == pytest.approx(bounds(plain), abs=0.06 * plain.half_width)


def test_bootstrap_moves_with_the_answers_and_not_with_their_order():
    found = bootstrap_t_interval(SPENDS, seed=3)
    assert bootstrap_t_interval(SPENDS, seed=3) == found
    assert bootstrap_t_interval(SPENDS, seed=4) != found
    shuffled = bootstrap_t_interval(np.sort(SPENDS), seed=3)
    assert bounds(shuffled) == pytest.approx(bounds(found), rel=1e-12)
    moved = bootstrap_t_interval(10 * SPENDS + 7, seed=3)
    assert bounds(moved) == pytest.approx([10 * end + 7 for end in bounds(found)], rel=1e-9)
    assert bootstrap_t_interval(SPENDS, population_size=70, replacement=True, seed=3) == found


def test_bootstrap_at_the_edges():
    assert bounds(bootstrap_t_interval([4.0])) == (-math.inf, math.inf)
    assert bounds(bootstrap_t_interval([4.0], population_size=1)) == (4, 4)
    assert bounds(bootstrap_t_interval([4.0, 6.0], population_size=2)) == (5, 5)
    same = bootstrap_t_interval([0.1] * 9)
    assert same.low == same.high == pytest.approx(0.1, rel=1e-15)
    # one of six differs: a third of the repeats shows six equal answers below the mean
    lonely = bootstrap_t_interval([0, 0, 0, 0, 0, 1])
    assert lonely.high == math.inf
    assert math.isfinite(lonely.low)


# Skewness and its caution.


@settings(deadline=None)
@given(st.lists(st.integers(-100, 100), min_size=3, max_size=40).filter(lambda v: len(set(v)) > 1))
def test_skewness_is_that_of_a_second_program(values):
    # scipy.stats.skew(values, bias=False)
    expected = stats.skew(values, bias=False)
    assert sample_skewness(values) == pytest.approx(expected, rel=1e-9, abs=1e-12)


def test_skewness_needs_three_answers_that_differ():
    for values in ([1, 2], [3.3] * 50):
        assert math.isnan(sample_skewness(values))
        assert skewness_caution(values) is None


def test_caution_below_cochrans_25_squared_skewness():
    # Cochran (1977), section 2.15: n > 25 G1^2. One of n differs: G1 = (n-2)/sqrt(n-1) x
    # sqrt(n(n-1))/(n-2) = sqrt(n), so that no n is enough; two equal groups have G1 = 0.
    lonely = [0] * 399 + [1]
    assert sample_skewness(lonely) == pytest.approx(math.sqrt(400), rel=1e-12)
    assert skewness_caution(lonely) is SKEWED_ANSWERS
    assert skewness_caution([0, 1] * 5) is None
    # quantiles of the exponential distribution: G1 tends to 2, so that 100 answers are enough
    few, enough = (-np.log((np.arange(n) + 0.5) / n) for n in (75, 80))
    assert few.size < 25 * sample_skewness(few) ** 2
    assert skewness_caution(few).code == "skewed_answers"
    assert enough.size > 25 * sample_skewness(enough) ** 2
    assert skewness_caution(enough) is None


@pytest.mark.parametrize(
    ("call", "argument"),
    [
        (lambda: skewed_mean_interval(1, 1, math.nan, 10), "skewness"),
        (lambda: skewed_mean_interval(1, 1, math.inf, 10), "skewness"),
        (lambda: skewed_mean_interval(1, -1, 1, 10), "standard_deviation"),
        (lambda: skewed_mean_interval(1, 1, 1, 10, method="wald"), "method"),
        (lambda: skewed_mean_interval(1, 1, 1, 10, population_size=9), "population_size"),
        (lambda: bootstrap_t_interval([1, math.nan, 2]), "values"),
        (lambda: bootstrap_t_interval([]), "number of values"),
        (lambda: bootstrap_t_interval(["a"]), "values"),
        (lambda: bootstrap_t_interval([1, 2, 3], repetitions=38), "repetitions"),
        (lambda: bootstrap_t_interval([1, 2, 3], population_size=2), "population_size"),
        (lambda: bootstrap_t_interval([1, 2, 3], confidence=0), "confidence"),
        (lambda: bootstrap_t_interval([1, 2, 3], seed=0.5), "seed"),
        (lambda: sample_skewness([[1, 2], [3, 4]]), "values"),
        (lambda: skewness_caution([1, 2, math.inf]), "values"),
    ],
)
def test_wrong_calls_are_refused_by_name(call, argument):
    with pytest.raises(InputError) as refused:
        call()
    assert refused.value.argument == argument
