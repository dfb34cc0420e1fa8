"""Coverage of the intervals: published, enumerated, and what the default promises."""

from __future__ import annotations

import itertools
import json
import math
from pathlib import Path

import numpy as np
import pytest
from scipy import stats

from estimators.errors import InputError
from estimators.interval_coverage import (
    mean_coverage,
    proportion_coverage,
    proportion_coverages,
    simulation_error,
)
from estimators.mean_intervals import mean_interval
from estimators.proportion_intervals import METHOD_NAMES, proportion_interval
from estimators.universes import Universe, plug_in_universe

PUBLISHED = Path(__file__).parents[1] / "published_values"
ROWS = json.loads((PUBLISHED / "coverage_shares.json").read_text(encoding="utf-8"))
ENDLESS = tuple(name for name in METHOD_NAMES if name != "hypergeometric")
FRACTIONS = (1.05, 1.1, 1.25, 1.5, 2, 3, 5, 10, 20, 50)
CELLS = [(n, round(n * times)) for n in (30, 35, 40, 50, 75, 100, 150, 200) for times in FRACTIONS]
SPENDS = np.round(np.exp(np.random.default_rng(11).normal(4, 1.1, 600)), 1)


@pytest.mark.parametrize("row", ROWS, ids=lambda row: f"{row['n']}-{row['proportion']}")
def test_published_rows(row):
    # Brown, Cai, DasGupta (2001), section 2 and Table 1 (from memory)
    found = proportion_coverage(row["method"], row["n"], row["proportion"])
    assert found == pytest.approx(row["coverage"], abs=row["tolerance"])


@pytest.mark.parametrize("share", [0.003, 0.1, 0.31, 0.5, 0.86])
@pytest.mark.parametrize("method", ENDLESS)
def test_endless_universe_is_the_sum_of_a_second_program_over_counts(method, share):
    for n in (1, 2, 23, 60):
        chances = stats.binom.pmf(np.arange(n + 1), n, share)
        intervals = [proportion_interval(x, n, method=method) for x in range(n + 1)]
        expected = math.fsum(
            chance
            for chance, found in zip(chances, intervals, strict=True)
            if found.low <= share <= found.high
        )
        assert proportion_coverage(method, n, share) == pytest.approx(expected, abs=1e-12)


@pytest.mark.parametrize("method", METHOD_NAMES)
@pytest.mark.parametrize(("n", "units"), [(1, 3), (5, 6), (12, 40), (30, 31), (40, 130), (9, 9)])
def test_finite_universe_is_the_sum_of_a_second_program_over_counts(method, n, units):
    found = [
        proportion_interval(x, n, method=method, population_size=units, confidence=0.9)
        for x in range(n + 1)
    ]
    for yes in {0, 1, units // 3, units // 2, units}:
        chances = stats.hypergeom.pmf(np.arange(n + 1), units, yes, n)
        expected = math.fsum(
            chance
            for chance, interval in zip(chances, found, strict=True)
            if interval.low - 1e-12 <= yes / units <= interval.high + 1e-12
        )
        got = proportion_coverage(method, n, yes / units, population_size=units, confidence=0.9)
        assert got == pytest.approx(expected, abs=1e-12)


def test_every_possible_sample_of_a_tiny_universe_is_counted():
    units = [1, 1, 0, 0, 0, 0, 1, 0]
    samples = list(itertools.combinations(units, 4))
    for method in METHOD_NAMES:
        covered = 0
        for sample in samples:
            found = proportion_interval(sum(sample), 4, method=method, population_size=8)
            covered += found.low <= 3 / 8 <= found.high
        got = proportion_coverage(method, 4, 3 / 8, population_size=8)
        assert got == pytest.approx(covered / len(samples), abs=1e-14)


def test_the_truth_is_a_whole_number_of_units():
    at = [proportion_coverage("wilson", 30, p, population_size=100) for p in (0.096, 0.1, 0.104)]
    assert at[0] == at[1] == at[2]
    with_replacement = proportion_coverage(
        "wilson", 30, 0.104, population_size=100, replacement=True
    )
    assert with_replacement == proportion_coverage("wilson", 30, 0.1)


def test_exact_method_keeps_its_level_and_a_census_always_covers():
    for yes in range(0, 81, 7):
        share = yes / 80
        assert proportion_coverage("hypergeometric", 25, share, population_size=80) >= 0.95
        assert proportion_coverage("wald", 80, share, population_size=80) == 1
    assert proportion_coverage("clopper_pearson", 25, 0.0) == 1
    assert proportion_coverage("wilson", 25, 1.0) == 1


def test_yes_and_no_are_alike_and_huge_universes_are_endless():
    for share in (0.02, 0.137, 0.4):
        there = proportion_coverage("wilson", 70, share)
        assert proportion_coverage("wilson", 70, 1 - share) == pytest.approx(there, abs=1e-12)
    near = proportion_coverage("jeffreys", 40, 0.137, population_size=10**9)
    assert near == pytest.approx(proportion_coverage("jeffreys", 40, 0.137), abs=1e-7)


def test_large_samples_keep_their_digits():
    # scipy.stats.binom and hypergeom between the counts whose Wilson interval reaches the truth
    n, share, units = 100_000, 0.3, 10_000_000
    covered = [
        x for x in range(29_000, 31_000) if (i := proportion_interval(x, n)).low <= share <= i.high
    ]
    law = stats.binom(n, share)
    expected = law.cdf(covered[-1]) - law.cdf(covered[0] - 1)
    assert proportion_coverage("wilson", n, share) == pytest.approx(expected, abs=1e-11)
    finite = proportion_coverage("wilson", n, share, population_size=units)
    assert finite == pytest.approx(0.95, abs=0.003)


def test_many_shares_at_once_are_the_same_as_one_by_one():
    shares = np.linspace(0, 1, 23)
    for units in (None, 64):
        found = proportion_coverages("mid_p", 37, shares, population_size=units)
        for share, one in zip(shares, found, strict=True):
            single = proportion_coverage("mid_p", 37, share, population_size=units)
            assert one == pytest.approx(single, abs=1e-15)


# What the default promises, exactly: nominal 95 percent, 30 answers or more.


@pytest.fixture(scope="module")
def table():
    """{(n, N): coverage of the default at every share from 1 percent to one half}."""
    found = {}
    for n, units in CELLS:
        yes = np.arange(math.ceil(units / 100), units // 2 + 1)
        found[n, units] = proportion_coverages("wilson", n, yes / units, population_size=units)
    return found


def test_default_in_a_known_universe_is_never_far_below_its_level(table):
    assert len(table) == 80
    assert sum(coverage.size for coverage in table.values()) > 30_000
    assert min(coverage.min() for coverage in table.values()) >= 0.899


def test_default_in_a_known_universe_holds_its_level_on_average(table):
    for (n, units), coverage in table.items():
        assert coverage.mean() >= 0.945, (n, units)
        if units >= 5 * n:
            assert coverage.mean() <= 0.965, (n, units)


@pytest.mark.parametrize("n", [30, 31, 33, 37, 42, 50, 62, 80, 100, 150, 250, 400, 700])
def test_default_in_an_endless_universe_at_its_worst(n):
    """Coverage jumps where a bound is crossed, and has no other minimum in between.

    A sum of neighbouring binomial probabilities rises and then falls with the share, so that the
    worst share lies next to a bound.
    """
    intervals = [proportion_interval(x, n) for x in range(n + 1)]
    bounds = np.array([end for i in intervals for end in (i.low, i.high)])
    shares = np.concatenate([bounds - 1e-9, bounds + 1e-9])
    shares = np.sort(shares[(shares > 0) & (shares <= 0.5)])
    coverage = proportion_coverages("wilson", n, shares)
    assert coverage[shares >= 0.01].min() >= 0.89
    assert coverage[shares < 0.01].min(initial=1.0) >= 0.83
    assert coverage[shares < 0.01].min(initial=1.0) < 0.945


def test_default_beats_the_textbook_interval_where_universes_are_small():
    """50 of 1,000 at shares of 1 to 50 percent.

    At 1 percent Wald covers with 1 to 4 yes: none gives no width, and 5 (10 percent) reaches down
    to 0.1 - 1.96 sqrt(0.1 x 0.9 x 0.95 / 50) = 1.9 percent only.
    """
    shares = np.arange(10, 501) / 1000
    wald = proportion_coverages("wald", 50, shares, population_size=1000)
    wilson = proportion_coverages("wilson", 50, shares, population_size=1000)
    ways = sum(math.comb(10, x) * math.comb(990, 50 - x) for x in range(1, 5))
    lowest = ways / math.comb(1000, 50)
    assert wald.min() == pytest.approx(lowest, rel=1e-12)
    assert wald.mean() < 0.92 < 0.95 < wilson.mean()
    assert wilson.min() > wald.min() + 0.4


# Means.


@pytest.mark.parametrize(("n", "replacement"), [(4, False), (4, True), (6, False), (2, True)])
def test_means_agree_with_every_possible_sample_of_a_tiny_universe(n, replacement):
    units = [0, 0, 1, 1, 2, 5, 9, 9]
    universe = Universe(units, np.ones(8))
    draws = itertools.product(units, repeat=n) if replacement else itertools.combinations(units, n)
    covered = total = 0
    for sample in draws:
        found = mean_interval(
            np.mean(sample), np.std(sample, ddof=1), n, population_size=8, replacement=replacement
        )
        covered += found.low - 1e-12 <= universe.mean <= found.high + 1e-12
        total += 1
    got = mean_coverage(universe, n, replacement=replacement, repetitions=40_000)
    assert got == pytest.approx(covered / total, abs=4 * simulation_error(got, 40_000))


@pytest.mark.parametrize(("n", "units"), [(25, 60), (90, 200), (60, None)])
def test_means_of_zeros_and_ones_agree_with_the_exact_sum_over_counts(n, units):
    """A t interval of zeros and ones depends on the count alone."""
    yes = 12
    if units is None:
        universe = plug_in_universe([0] * 33 + [1] * 12)
        chances = stats.binom.pmf(np.arange(n + 1), n, yes / 45)
    else:
        universe = Universe([0, 1], [units - yes, yes])
        chances = stats.hypergeom.pmf(np.arange(n + 1), units, yes, n)
    expected = 0.0
    for count, chance in enumerate(chances):
        spread = math.sqrt(count * (n - count) / (n * (n - 1)))
        found = mean_interval(count / n, spread, n, population_size=units)
        expected += chance * (found.low <= universe.mean <= found.high)
    got = mean_coverage(universe, n, replacement=units is None, repetitions=40_000)
    assert got == pytest.approx(expected, abs=4 * simulation_error(got, 40_000))


def test_normal_answers_are_covered_as_promised_and_skewed_ones_are_not():
    quantiles = stats.norm.ppf((np.arange(4000) + 0.5) / 4000)
    normal = mean_coverage(Universe(quantiles, np.ones(4000)), 12, confidence=0.9)
    assert normal == pytest.approx(0.9, abs=4 * simulation_error(normal))
    spends = Universe(SPENDS, np.ones(600))
    covered = {m: mean_coverage(spends, 40, method=m) for m in ("t", "johnson", "hall")}
    assert covered["t"] < 0.93
    assert covered["t"] <= covered["johnson"] + 0.003 < covered["hall"]
    assert abs(covered["hall"] - 0.95) < abs(covered["t"] - 0.95) / 2


def test_coverage_does_not_depend_on_the_unit_or_the_zero_of_the_answers():
    counts = np.ones(600)
    there = mean_coverage(Universe(SPENDS, counts), 40, repetitions=2000)
    assert mean_coverage(Universe(SPENDS * 1e12 - 7e14, counts), 40, repetitions=2000) == there


def test_same_seed_same_result_other_seed_another():
    universe = Universe(range(11), [5, 3, 9, 20, 33, 41, 60, 75, 70, 50, 31])
    first = mean_coverage(universe, 25, repetitions=3000, seed=4)
    assert type(first) is float
    assert mean_coverage(universe, 25, repetitions=3000, seed=4) == first
    others = {mean_coverage(universe, 25, repetitions=3000, seed=seed) for seed in range(5, 12)}
    assert others != {first}


def test_census_single_answers_and_universes_without_variation_always_cover():
    universe = Universe([0.1, 0.7], [3, 4])
    assert mean_coverage(universe, 7, repetitions=50) == 1
    assert mean_coverage(universe, 1, repetitions=50) == 1
    assert mean_coverage(Universe([0.3], [1000]), 30, repetitions=50) == 1


def test_samples_that_do_not_vary_miss_the_truth():
    """One of 10,000 differs: nearly every sample of 3 shows no variation, beside the truth."""
    found = mean_coverage(Universe([0.1, 1000.1], [9_999, 1]), 3, repetitions=2000)
    assert found < 0.01


def test_error_of_the_simulation_is_that_of_a_share_and_never_nothing():
    assert simulation_error(0.95) == pytest.approx(math.sqrt(0.95 * 0.05 / 10_000), rel=0.01)
    assert 0 < simulation_error(1.0, 400) < 0.005
    assert simulation_error(0.2, 500) == pytest.approx(simulation_error(0.8, 500), rel=1e-12)


@pytest.mark.parametrize(
    ("call", "argument"),
    [
        (lambda: proportion_coverage("wilsn", 30, 0.1), "method"),
        (lambda: proportion_coverage("wilson", 0, 0.1), "n"),
        (lambda: proportion_coverage("wilson", 30, 10), "proportion"),
        (lambda: proportion_coverage("wilson", 30, math.nan), "proportion"),
        (lambda: proportion_coverage("wilson", 30, 0.1, population_size=20), "population_size"),
        (lambda: proportion_coverage("wilson", 30, 0.1, confidence=95), "confidence"),
        (lambda: proportion_coverage("hypergeometric", 30, 0.1), "method"),
        (lambda: proportion_coverages("wilson", 30, []), "proportion"),
        (lambda: mean_coverage(Universe([0, 1], [2, 2]), 5), "n"),
        (lambda: mean_coverage(Universe([0, 1], [2, 2]), 2.5), "n"),
        (lambda: mean_coverage(Universe([0, 1], [2, 2]), 2, repetitions=0), "repetitions"),
        (lambda: mean_coverage(Universe([0, 1], [2, 2]), 2, seed=-1), "seed"),
        (lambda: mean_coverage(Universe([0, 1], [2, 2]), 2, confidence=1), "confidence"),
        (lambda: mean_coverage(Universe([0, 1], [2, 2]), 2, method="wald"), "method"),
        (lambda: mean_coverage(plug_in_universe([1, 2, 3]), 2), "replacement"),
        (lambda: simulation_error(95), "coverage"),
        (lambda: simulation_error(0.5, 0.5), "repetitions"),
    ],
)
def test_wrong_calls_are_refused_by_name(call, argument):
    with pytest.raises(InputError) as refused:
        call()
    assert refused.value.argument == argument
