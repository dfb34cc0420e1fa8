"""The generating function against enumeration, exact whole numbers and known distributions."""

from __future__ import annotations

import math
from decimal import Decimal, localcontext

import numpy as np
import pytest
from scipy import stats

from estimators.exact_sums import sums_with_replacement, sums_without_replacement
from tests.support import slow_sums

TINY = [
    ([0, 1], [3, 4]),
    ([0, 1, 2], [2, 2, 3]),
    ([0, 1, 3, 6, 7], [1, 1, 2, 3, 1]),
    ([0, 2, 3], [4, 1, 2]),
    ([0, 1, 9, 11], [1, 4, 1, 2]),
    ([0], [5]),
]
MIDDLE = [
    ([0, 1, 2, 3, 200], [300, 500, 250, 129, 1], 20),  # one value far out
    ([0, 1, 3, 7], [500, 5000, 3000, 3500], 30),
    ([0, 1, 2, 3, 4], [100_000, 200_000, 300_000, 300_000, 400_000], 25),
    ([0, 2, 3], [60, 60, 80], 150),  # more than half of the universe
    ([0, 1, 2, 5], [300, 100, 50, 30], 60),
]


def _as_array(exact, found):
    places = np.zeros(found.probabilities.size)
    for total, probability in exact.items():
        places[total - found.lowest] = float(probability)
    return places


@pytest.mark.parametrize(("positions", "counts"), TINY)
def test_every_sample_of_tiny_universes(positions, counts):
    units = np.repeat(positions, counts).tolist()
    for n in range(len(units) + 1):
        found = sums_without_replacement(np.array(positions), np.array(counts), n)
        exact = slow_sums.every_sample(units, n, replacement=False)
        assert found.lowest == min(exact)
        assert found.lowest + found.probabilities.size - 1 == max(exact)
        np.testing.assert_allclose(found.probabilities, _as_array(exact, found), atol=1e-15, rtol=0)
        assert np.abs(found.probabilities - _as_array(exact, found)).max() <= found.error


@pytest.mark.parametrize(("positions", "counts"), TINY)
@pytest.mark.parametrize("n", [1, 2, 4])
def test_every_sample_with_replacement(positions, counts, n):
    units = np.repeat(positions, counts).tolist()
    found = sums_with_replacement(np.array(positions), np.array(counts), n)
    exact = slow_sums.every_sample(units, n, replacement=True)
    np.testing.assert_allclose(found.probabilities, _as_array(exact, found), atol=1e-15, rtol=0)
    assert np.abs(found.probabilities - _as_array(exact, found)).max() <= found.error


@pytest.mark.parametrize(("positions", "counts", "n"), MIDDLE)
def test_multivariate_hypergeometric_in_exact_whole_numbers(positions, counts, n):
    found = sums_without_replacement(np.array(positions), np.array(counts), n)
    exact = _as_array(slow_sums.without_replacement(positions, counts, n), found)
    np.testing.assert_allclose(found.probabilities, exact, atol=1e-16, rtol=0)
    assert np.abs(found.probabilities - exact).max() <= found.error


@pytest.mark.parametrize(("positions", "counts", "n"), MIDDLE)
def test_repeated_draws_in_exact_whole_numbers(positions, counts, n):
    found = sums_with_replacement(np.array(positions), np.array(counts), n)
    exact = _as_array(slow_sums.with_replacement(positions, counts, n), found)
    np.testing.assert_allclose(found.probabilities, exact, atol=1e-16, rtol=0)
    assert np.abs(found.probabilities - exact).max() <= found.error


@pytest.mark.parametrize(
    ("size", "chosen", "n"),
    [(12_000, 3_000, 2_000), (1_184, 300, 395), (1_000, 1, 500), (30, 17, 29), (500, 499, 3)],
)
def test_two_values_are_hypergeometric_and_binomial(size, chosen, n):
    counts = np.array([size - chosen, chosen])
    found = sums_without_replacement(np.array([0, 1]), counts, n)
    known = stats.hypergeom.pmf(np.arange(found.probabilities.size) + found.lowest, size, chosen, n)
    np.testing.assert_allclose(found.probabilities, known, atol=1e-12, rtol=0)  # scipy's digits
    found = sums_with_replacement(np.array([0, 1]), counts, n)
    known = stats.binom.pmf(np.arange(n + 1), n, chosen / size)
    np.testing.assert_allclose(found.probabilities, known, atol=1e-13, rtol=0)


@pytest.mark.parametrize(
    ("chosen", "n"), [(3_000_000, 2_000), (10, 5_000_000), (2_000_000, 100_000)]
)
def test_ten_million_units(chosen, n):
    # second opinion with 60 digits; scipy's logarithms of the gamma function keep about 10 here
    size = 10**7
    found = sums_without_replacement(np.array([0, 1]), np.array([size - chosen, chosen]), n)
    mode = n * chosen // size
    for count in (mode, mode + 3, max(0, mode - 40)):
        exact = _hypergeometric_with_many_digits(size, chosen, n, count)
        assert found.probabilities[count - found.lowest] == pytest.approx(exact, rel=1e-13)
    assert found.probabilities.sum() == pytest.approx(1, abs=1e-12)


def test_complement_is_the_mirrored_sample():
    positions, counts = np.array([0, 1, 4, 9]), np.array([40, 30, 20, 10])
    few = sums_without_replacement(positions, counts, 30)
    many = sums_without_replacement(positions, counts, 70)
    np.testing.assert_array_equal(many.probabilities, few.probabilities[::-1])
    assert many.lowest == positions @ counts - (few.lowest + few.probabilities.size - 1)


def test_nobody_and_everybody_are_points():
    positions, counts = np.array([0, 1, 4]), np.array([4, 3, 2])
    for n, total in ((0, 0), (9, 11)):
        found = sums_without_replacement(positions, counts, n)
        assert (found.lowest, found.probabilities.tolist(), found.error) == (total, [1.0], 0.0)


def test_too_many_sums_are_left_to_the_caller():
    positions, counts = np.array([0, 1, 1000]), np.array([50, 50, 50])
    assert sums_without_replacement(positions, counts, 20, most_points=5_000) is None
    assert sums_with_replacement(positions, counts, 20, most_points=5_000) is None


def _hypergeometric_with_many_digits(size, chosen, n, count):
    logs = [chosen, size - chosen, n, size - n]
    minus = [size, count, chosen - count, n - count, size - chosen - n + count]
    with localcontext() as context:
        context.prec = 60
        log = sum(map(_log_factorial, logs)) - sum(map(_log_factorial, minus))
        return float(log.exp())


def _log_factorial(number):
    """Exact below 2,000, then Stirling's series, whose next term is below 1e-30."""
    if number < 2_000:
        return Decimal(math.factorial(number)).ln()
    x = Decimal(number)
    pi = Decimal("3.14159265358979323846264338327950288419716939937510582097494")
    series = 1 / (12 * x) - 1 / (360 * x**3) + 1 / (1260 * x**5) - 1 / (1680 * x**7)
    return (x + Decimal("0.5")) * x.ln() - x + (2 * pi).ln() / 2 + series
