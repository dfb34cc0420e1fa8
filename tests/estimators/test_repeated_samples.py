"""Repeated surveys: the right samples, from counts and from units, in little memory."""

from __future__ import annotations

import math
import tracemalloc

import numpy as np
import pytest
from scipy import stats

from estimators.errors import InputError
from estimators.repeated_samples import repeat_samples
from estimators.sampling_distributions import mean_distribution
from estimators.universes import Universe

FEW = Universe(range(5), [40, 25, 10, 15, 30])  # drawn as counts from n = 40 on
MANY = Universe(np.arange(300) ** 2 / 300, np.arange(300) % 3 + 1)  # drawn as units


def drawn(universe, n, replacement, repetitions=4000, seed=3):
    return repeat_samples(universe, n, replacement=replacement, repetitions=repetitions, seed=seed)


@pytest.mark.parametrize("replacement", [False, True])
@pytest.mark.parametrize(("universe", "n"), [(FEW, 50), (FEW, 7), (MANY, 50), (MANY, 300)])
def test_means_follow_the_exact_distribution(universe, n, replacement):
    law = mean_distribution(universe, n, replacement=replacement)
    found = drawn(universe, n, replacement)
    span = universe.values[-1] - universe.values[0]
    means = universe.mean + found.deviations * span
    error = law.standard_deviation / math.sqrt(4000)
    assert means.mean() == pytest.approx(universe.mean, abs=4 * error)
    assert means.std() == pytest.approx(law.standard_deviation, rel=0.05)
    below = np.cumsum(law.probabilities)[np.searchsorted(law.support, universe.mean) - 1]
    assert np.mean(means < universe.mean - 1e-9) == pytest.approx(below, abs=0.04)


@pytest.mark.parametrize("replacement", [False, True])
def test_mean_square_of_the_samples_is_that_of_the_universe(replacement):
    # Cochran (1977), theorem 2.4: s2 is unbiased for S2 (without) and sigma2 (with replacement)
    for universe, n in ((FEW, 50), (MANY, 50)):
        span = universe.values[-1] - universe.values[0]
        variances = (drawn(universe, n, replacement).standard_deviations * span) ** 2
        expected = universe.standard_deviation**2
        if not replacement:
            expected *= universe.size / (universe.size - 1)
        error = variances.std() / math.sqrt(variances.size)
        assert variances.mean() == pytest.approx(expected, abs=4 * error)


def test_both_ways_of_drawing_have_the_same_moments_sample_by_sample():
    """A census is one and the same sample either way."""
    units = np.repeat(FEW.values, FEW.counts) / 4
    found = drawn(FEW, FEW.size, False, repetitions=3)
    assert found.deviations == pytest.approx([0, 0, 0], abs=1e-15)
    assert found.standard_deviations == pytest.approx([units.std(ddof=1)] * 3, rel=1e-13)
    assert found.skewness == pytest.approx([stats.skew(units, bias=False)] * 3, rel=1e-12)
    singles = Universe(np.sqrt(np.arange(200)), np.ones(200))
    scaled = singles.values / singles.values[-1]
    found = drawn(singles, 200, False, repetitions=3)
    assert found.standard_deviations == pytest.approx([scaled.std(ddof=1)] * 3, rel=1e-13)
    assert found.skewness == pytest.approx([stats.skew(scaled, bias=False)] * 3, rel=1e-12)


@pytest.mark.parametrize("n", [10, 60])  # drawn as units, and as counts
@pytest.mark.parametrize("replacement", [False, True])
def test_moments_belong_to_the_sample_that_was_drawn(n, replacement):
    """Of zeros and ones the mean tells the whole sample; scipy.stats.skew for its skewness."""
    found = drawn(Universe([0, 1], [80, 20]), n, replacement, repetitions=300)
    for deviation, spread, skewness in zip(
        found.deviations, found.standard_deviations, found.skewness, strict=True
    ):
        ones = round((deviation + 0.2) * n)
        sample = np.repeat([0.0, 1.0], [n - ones, ones])
        expected = stats.skew(sample, bias=False) if 0 < ones < n else 0.0
        assert deviation + 0.2 == pytest.approx(ones / n, abs=1e-13)
        assert spread == pytest.approx(sample.std(ddof=1), rel=1e-10, abs=1e-15)
        assert skewness == pytest.approx(expected, rel=1e-9, abs=1e-9)


def test_samples_without_variation_have_exactly_none():
    """Rounding errors of a mean that cannot be written exactly are no variation."""
    rare = Universe([0.1, 0.7, 1.9], [300, 7, 5])
    for n in (3, 13, 18, 23, 30, 92, 98):
        found = drawn(rare, n, True, repetitions=400)
        constant = found.standard_deviations == 0
        assert constant.any()
        assert (found.standard_deviations[~constant] > 0.01).all()
        assert (found.skewness[constant] == 0).all()


def test_single_answers_have_no_standard_deviation_and_pairs_no_skewness():
    assert np.isnan(drawn(FEW, 1, True, repetitions=5).standard_deviations).all()
    assert (drawn(FEW, 2, True, repetitions=5).skewness == 0).all()


def test_pieces_do_not_matter_to_the_count_of_samples_and_arrays_are_read_only():
    found = drawn(MANY, 500, True, repetitions=9001)
    assert found.deviations.shape == found.skewness.shape == (9001,)
    with pytest.raises(ValueError, match="read-only"):
        found.deviations[0] = 1.0


@pytest.mark.parametrize("replacement", [False, True])
def test_memory_stays_bounded(replacement):
    universe = Universe(np.arange(20_000.0), np.full(20_000, 3))
    tracemalloc.start()
    drawn(universe, 5000, replacement, repetitions=1200)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert (
        peak < 110e6
    )  # all at once it would be 1,200 x 5,000 x 8 bytes = 48 MB, several times over


def test_universes_the_generator_cannot_count_are_refused():
    huge = Universe([0, 1], [10**9, 5])
    with pytest.raises(InputError, match="replacement must be True"):
        drawn(huge, 10, False)
    assert drawn(huge, 10, True, repetitions=2).deviations.shape == (2,)
    with pytest.raises(InputError, match="n must be at most the 120 units"):
        drawn(FEW, 121, False)
