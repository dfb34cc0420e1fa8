"""The stratified mean: enumerated, convolved slowly, simulated, and errors that are honest."""

from __future__ import annotations

import itertools
import math
from collections import Counter
from fractions import Fraction

import numpy as np
import pytest

from estimators.errors import InputError
from estimators.sampling_distributions import mean_distribution
from estimators.stratified_distributions import (
    stratified_mean_distribution,
    stratified_total_distribution,
)
from estimators.universes import Universe
from tests.support import slow_sums

RATINGS = np.array([12, 24, 36, 48, 108, 180, 300, 300, 240, 120, 72])
SHARES = ([402, 130], [331, 95], [268, 201], [183, 40])  # units, units that chose


def slow_law(strata, sample_sizes, *, replacement=False):
    """Stratified mean -> probability, in fractions; a stratum is a list of whole-number units."""
    whole = sum(len(units) for units in strata)
    laws = []
    for units, n in zip(strata, sample_sizes, strict=True):
        sums = slow_sums.every_sample(units, n, replacement=replacement)
        laws.append({Fraction(t * len(units), n * whole): p for t, p in sums.items()})
    found = Counter()
    for combination in itertools.product(*(law.items() for law in laws)):
        found[sum(v for v, _ in combination)] += math.prod(p for _, p in combination)
    return dict(sorted(found.items()))


def universe_of(units, scale=1):
    return Universe(np.array(units) / scale, np.ones(len(units)))


def share_universe(units, chose):
    return Universe([0, 1], [units - chose, chose])


def cumulative(distribution, points):
    return np.concatenate(([0.0], np.cumsum(distribution.probabilities)))[
        np.searchsorted(distribution.support, points, side="right")
    ]


def moments(distribution):
    mean = distribution.support @ distribution.probabilities
    deviations = distribution.support - mean
    spread = math.sqrt(deviations**2 @ distribution.probabilities)
    return mean, spread, deviations**3 @ distribution.probabilities / spread**3


TINY = [
    ([[0, 0, 1, 1], [2, 4, 4]], [2, 1]),
    ([[1, 5, 9, 10], [3, 3, 8], [0, 7]], [2, 2, 1]),
    ([[1, 5, 9, 10], [3, 3, 8], [0, 7]], [3, 3, 2]),  # the last two completely
    ([[-3, 0, 2, 2, 11], [0, 1, 1, 1, 0, 1, 0]], [3, 4]),
    ([[4, 4, 4], [0, 1, 2, 3, 4]], [2, 3]),  # a stratum in which nobody differs
]


@pytest.mark.parametrize("replacement", [False, True])
@pytest.mark.parametrize(("strata", "sizes"), TINY)
@pytest.mark.parametrize("scale", [1, 10])
def test_every_combination_of_samples(strata, sizes, scale, replacement):
    exact = slow_law(strata, sizes, replacement=replacement)
    universes = [universe_of(units, scale) for units in strata]
    found = stratified_mean_distribution(universes, sizes, replacement=replacement)
    assert found.exact
    assert found.error <= 1e-12
    np.testing.assert_allclose(found.support, [float(v) / scale for v in exact], atol=1e-13)
    np.testing.assert_allclose(found.probabilities, [float(p) for p in exact.values()], atol=1e-12)
    mean = sum(v * p for v, p in exact.items())
    variance = sum((v - mean) ** 2 * p for v, p in exact.items())
    third = sum((v - mean) ** 3 * p for v, p in exact.items())
    assert found.mean == pytest.approx(float(mean) / scale, abs=1e-13)
    assert found.standard_deviation == pytest.approx(math.sqrt(variance) / scale, rel=1e-12)
    assert found.skewness == pytest.approx(float(third) / float(variance) ** 1.5, abs=1e-12)


@pytest.mark.parametrize(("strata", "sizes"), TINY[1:])
@pytest.mark.parametrize("points", [2, 5, 9, 12])
def test_on_a_coarse_grid_cumulative_probabilities_are_within_the_stated_error(
    strata, sizes, points
):
    exact = slow_law(strata, sizes)
    law = stratified_mean_distribution([universe_of(u) for u in strata], sizes, most_points=10**6)
    found = stratified_mean_distribution(
        [universe_of(u) for u in strata], sizes, most_points=points
    )
    if found.exact:
        assert law.support.size <= points
        return
    where = np.linspace(law.support[0] - 1, law.support[-1] + 1, 2001)
    off = np.abs(cumulative(found, where) - cumulative(law, where)).max()
    assert off <= found.error
    assert found.error <= 1
    assert found.probabilities @ found.support == pytest.approx(
        float(sum(v * p for v, p in exact.items())), abs=1e-12
    )


def test_a_common_lattice_gives_the_convolution_of_hypergeometric_laws():
    # 1 of 3 in every stratum: every person weighs the same, so sums of people are a lattice
    strata = [(300, 90), (240, 100), (360, 30), (150, 75)]
    sizes = [units // 3 for units, _ in strata]
    law = {0: Fraction(1)}
    for (units, chose), n in zip(strata, sizes, strict=True):
        ways = {
            k: Fraction(math.comb(chose, k) * math.comb(units - chose, n - k), math.comb(units, n))
            for k in range(min(n, chose) + 1)
        }
        following = Counter()
        for (a, p), (b, q) in itertools.product(law.items(), ways.items()):
            following[a + b] += float(p) * float(q)
        law = following
    found = stratified_mean_distribution([share_universe(*one) for one in strata], sizes)
    assert found.exact
    assert found.error <= 1e-12
    np.testing.assert_allclose(found.support, np.arange(len(law)) / sum(sizes), atol=1e-15)
    np.testing.assert_allclose(found.probabilities, [law[k] for k in sorted(law)], atol=1e-13)


def test_two_shares_are_listed_exactly_although_they_share_no_coarse_lattice():
    found = stratified_mean_distribution([share_universe(*one) for one in SHARES[:2]], [97, 101])
    whole = 402 + 331
    law = Counter()
    for a, b in itertools.product(range(98), range(102)):
        p = math.comb(130, a) * math.comb(272, 97 - a) / math.comb(402, 97)
        q = math.comb(95, b) * math.comb(236, 101 - b) / math.comb(331, 101) if b <= 95 else 0.0
        law[round((402 * a / 97 + 331 * b / 101) / whole, 12)] += p * q
    assert found.exact
    points = np.array(sorted(law))
    slow = np.cumsum([law[v] for v in points])
    np.testing.assert_allclose(cumulative(found, points + 1e-9), slow, atol=1e-12)


def test_shares_on_the_grid_lie_within_the_stated_error_of_the_slow_convolution():
    sizes = [50, 41, 33, 23]
    universes = [share_universe(*one) for one in SHARES]
    found = stratified_mean_distribution(universes, sizes)
    assert not found.exact
    assert 0 < found.error < 0.02
    whole = sum(units for units, _ in SHARES)
    values, mass = np.zeros(1), np.ones(1)
    for (units, chose), n in zip(SHARES, sizes, strict=True):
        ways = [
            math.comb(chose, k) * math.comb(units - chose, n - k) / math.comb(units, n)
            for k in range(n + 1)
        ]
        more = units / whole * np.arange(n + 1) / n
        values, mass = (values[:, None] + more).ravel(), (mass[:, None] * ways).ravel()
    order = np.argsort(values)
    slow = np.cumsum(mass[order])
    where = np.linspace(found.mean - 5 * found.standard_deviation, found.mean + 0.2, 5001)
    expected = np.concatenate(([0.0], slow))[np.searchsorted(values[order], where, side="right")]
    assert np.abs(cumulative(found, where) - expected).max() <= found.error


@pytest.mark.parametrize("replacement", [False, True])
def test_one_stratum_is_the_simple_random_sample(replacement):
    universe = Universe(range(11), RATINGS)
    one = stratified_mean_distribution([universe], [95], replacement=replacement)
    simple = mean_distribution(universe, 95, replacement=replacement)
    np.testing.assert_array_equal(one.support, simple.support)
    np.testing.assert_array_equal(one.probabilities, simple.probabilities)
    assert (one.mean, one.standard_deviation, one.skewness, one.exact, one.error) == (
        simple.mean,
        simple.standard_deviation,
        simple.skewness,
        simple.exact,
        simple.error,
    )


def test_a_stratum_taken_completely_only_shifts_the_rest():
    first, second = Universe([0, 1, 4], [5, 10, 5]), Universe(range(11), RATINGS)
    both = stratified_mean_distribution([first, second], [20, 80])
    alone = mean_distribution(second, 80)
    weight = second.size / (second.size + 20)
    np.testing.assert_allclose(
        both.support, weight * alone.support + (1 - weight) * first.mean, rtol=1e-13
    )
    np.testing.assert_allclose(both.probabilities, alone.probabilities, atol=1e-15)
    assert both.standard_deviation == pytest.approx(weight * alone.standard_deviation, rel=1e-13)
    assert both.skewness == pytest.approx(alone.skewness, rel=1e-12)


def test_a_census_of_every_stratum_is_a_point():
    found = stratified_mean_distribution([Universe([1, 2], [3, 1]), Universe([5], [4])], [4, 2])
    assert found.support.tolist() == [found.mean] == [(3 + 2 + 20) / 8]
    assert found.probabilities.tolist() == [1]
    assert found.standard_deviation == 0
    assert math.isnan(found.skewness)
    assert found.exact
    assert found.error == 0


def rating_universes():
    for shift, size in ((0, 402), (2, 331), (4, 268), (7, 183)):
        counts = np.roll(RATINGS, shift) * size // RATINGS.sum()
        yield Universe(range(11), counts)


def fifty_strata():
    return [share_universe(100 + 7 * h, 20 + 3 * h) for h in range(50)]


@pytest.mark.parametrize("replacement", [False, True])
@pytest.mark.parametrize(
    ("universes", "sizes"),
    [
        (list(rating_universes()), [134, 110, 90, 61]),
        ([share_universe(*one) for one in SHARES], [134, 110, 90, 61]),
        (fifty_strata(), [20 + h for h in range(50)]),
        (
            [Universe(range(6), [5000, 0, 300, 20, 1, 0]), Universe([0, 2], [9, 40_000])],
            [900, 20_000],
        ),
    ],
    ids=["ratings", "shares", "fifty", "large"],
)
def test_moments_of_the_grid_are_those_in_closed_form(universes, sizes, replacement):
    found = stratified_mean_distribution(universes, sizes, replacement=replacement)
    mean, spread, skewness = moments(found)
    assert found.probabilities.sum() == pytest.approx(1, abs=1e-10)
    assert mean == pytest.approx(found.mean, rel=1e-10)
    assert skewness == pytest.approx(found.skewness, abs=1e-5)
    gap = found.support[1] - found.support[0]
    extra = spread**2 - found.standard_deviation**2
    rounding = 1e-9 * spread**2
    if found.exact:
        assert abs(extra) <= rounding
    else:
        assert -rounding <= extra <= len(universes) * gap**2 / 4 + rounding
        assert extra <= 1e-4 * spread**2
    assert found.error < 0.05


def test_closed_moments_are_the_textbook_formula():
    universes, sizes = list(rating_universes()), [134, 110, 90, 61]
    found = stratified_mean_distribution(universes, sizes)
    units = [np.repeat(u.values, u.counts) for u in universes]
    whole = sum(len(u) for u in units)
    # Cochran, W. G. (1977), Sampling Techniques, 3rd ed., theorem 5.3
    variance = sum(
        (len(u) / whole) ** 2 * (1 - n / len(u)) * u.var(ddof=1) / n
        for u, n in zip(units, sizes, strict=True)
    )
    assert found.mean == pytest.approx(np.concatenate(units).mean(), rel=1e-13)
    assert found.standard_deviation == pytest.approx(math.sqrt(variance), rel=1e-12)


def test_a_second_opinion_by_simulation():
    # skewed spends to the cent, unequal fractions; 20,000 surveys drawn with a fixed seed
    source = np.random.default_rng(11)
    units = [np.round(source.lognormal(4, 1.2, size), 2) for size in (120, 90, 200)]
    sizes = [12, 30, 15]
    found = stratified_mean_distribution([universe_of(u) for u in units], sizes)
    whole = sum(len(u) for u in units)
    surveys = 20_000
    means = np.zeros(surveys)
    for u, n in zip(units, sizes, strict=True):
        drawn = source.permuted(np.tile(u, (surveys, 1)), axis=1)[:, :n]
        means += len(u) / whole * drawn.mean(axis=1)
    four_errors = 4 * found.standard_deviation / math.sqrt(surveys)
    assert means.mean() == pytest.approx(found.mean, abs=four_errors)
    where = np.quantile(means, np.arange(1, 20) / 20)
    # a simulated share is off by at most 4 of its standard errors, at most 4 x 0.5 / sqrt(20,000)
    allowed = 2 / math.sqrt(surveys) + found.error
    assert np.abs(cumulative(found, where) - np.arange(1, 20) / 20).max() < allowed
    assert allowed < 0.06


def test_equal_strata_in_any_order_give_the_same_law():
    universes, sizes = list(rating_universes()), [30, 25, 20, 18]
    one = stratified_mean_distribution(universes, sizes)
    other = stratified_mean_distribution(universes[::-1], sizes[::-1])
    where = np.linspace(one.support[0], one.support[-1], 999)
    assert np.abs(cumulative(one, where) - cumulative(other, where)).max() <= (
        one.error + other.error
    )
    assert one.mean == pytest.approx(other.mean, rel=1e-13)


def test_values_without_a_common_decimal_go_through():
    universes = [Universe([0, 1 / 3, math.pi], [40, 30, 50]), Universe([1 / 7, 2], [50, 60])]
    found = stratified_mean_distribution(universes, [30, 25])
    mean, spread, _ = moments(found)
    assert mean == pytest.approx(found.mean, rel=1e-10)
    assert spread == pytest.approx(found.standard_deviation, rel=1e-3)


def test_total_is_the_size_of_the_universe_times_the_mean():
    universes, sizes = list(rating_universes()), [30, 25, 20, 18]
    size = sum(universe.size for universe in universes)
    means = stratified_mean_distribution(universes, sizes)
    totals = stratified_total_distribution(universes, sizes)
    np.testing.assert_allclose(totals.support, size * means.support, rtol=1e-15)
    np.testing.assert_array_equal(totals.probabilities, means.probabilities)
    assert totals.mean == pytest.approx(size * means.mean, rel=1e-15)
    assert totals.standard_deviation == pytest.approx(size * means.standard_deviation, rel=1e-15)
    assert totals.skewness == means.skewness
    assert (totals.exact, totals.error) == (means.exact, means.error)
    interval = totals.interval(0.9)
    assert interval.low < totals.mean < interval.high


TWO = [Universe([0, 1], [5, 5]), Universe([0, 1], [4, 4])]


@pytest.mark.parametrize(
    ("universes", "sizes", "replacement", "argument"),
    [
        (TWO, [3, 0], False, "sample_sizes[1]"),
        (TWO, [2.5, 3], False, "sample_sizes[0]"),
        (TWO, [3, 9], False, "sample_sizes[1]"),
        (TWO, [3], False, "sample_sizes"),
        ([], [], False, "universes"),
        ([TWO[0], Universe([0, 1], [4, 4], endless=True)], [3, 3], True, "universes[1]"),
    ],
)
def test_wrong_calls_are_refused_by_name(universes, sizes, replacement, argument):
    for function in (stratified_mean_distribution, stratified_total_distribution):
        with pytest.raises(InputError) as refusal:
            function(universes, sizes, replacement=replacement)
        assert refusal.value.argument == argument
