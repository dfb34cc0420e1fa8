"""Sums of independent parts: three ways that must agree, and a bound that must hold."""

from __future__ import annotations

import itertools
import math
from collections import Counter
from fractions import Fraction

import numpy as np
import pytest

from estimators.independent_sums import Part, sum_of_parts


def part_of(values, weights, step=None, *, exact=True):
    probabilities = np.array(weights, dtype=float) / sum(weights)
    return Part(np.array(values, dtype=float), probabilities, step, exact, 1e-16)


def whole_parts(number, seed, most=9):
    source = np.random.default_rng(seed)
    for _ in range(number):
        values = np.sort(source.choice(40, size=source.integers(2, most), replace=False))
        yield part_of(values, source.integers(1, 20, values.size), Fraction(1))


def enumerated(parts):
    """Sum -> probability over every combination."""
    found = Counter()
    for combination in itertools.product(
        *(zip(p.values.tolist(), p.probabilities.tolist(), strict=True) for p in parts)
    ):
        found[round(math.fsum(v for v, _ in combination), 9)] += math.prod(
            p for _, p in combination
        )
    return dict(sorted(found.items()))


def cumulative(values, probabilities, points):
    below = np.concatenate(([0.0], np.cumsum(probabilities)))
    return below[np.searchsorted(values, points, side="right")]


@pytest.mark.parametrize("seed", range(5))
def test_few_combinations_are_listed(seed):
    parts = list(whole_parts(2, seed, most=5))
    exact = enumerated(parts)
    found = sum_of_parts(parts, most_points=10**6)
    assert found.exact
    assert found.values.tolist() == list(exact)
    np.testing.assert_allclose(found.probabilities, list(exact.values()), rtol=1e-13)


@pytest.mark.parametrize("seed", range(5))
def test_many_combinations_are_added_up_on_the_common_lattice(seed):
    parts = list(whole_parts(5, seed))
    exact = enumerated(parts)
    found = sum_of_parts(parts, most_points=10**6)
    assert found.exact
    reached = dict(zip(found.values.tolist(), found.probabilities.tolist(), strict=True))
    assert set(exact) <= set(reached)
    for value, probability in reached.items():
        assert probability == pytest.approx(exact.get(value, 0.0), abs=found.error)
    assert found.error < 1e-14


def test_steps_of_parts_may_differ():
    # thirds and quarters share twelfths
    parts = [
        part_of(np.arange(60) / 3, np.arange(1, 61), Fraction(1, 3)),
        part_of(np.arange(50) / 4, np.arange(50, 0, -1), Fraction(1, 4)),
    ]
    found = sum_of_parts(parts, most_points=10**6)
    exact = enumerated(parts)
    assert found.exact
    assert found.values.size == 59 * 4 + 49 * 3 + 1
    np.testing.assert_allclose(np.diff(found.values), 1 / 12, rtol=1e-9)
    at = np.array(list(exact))
    np.testing.assert_allclose(
        cumulative(found.values, found.probabilities, at + 1e-6),
        np.cumsum(list(exact.values())),
        atol=1e-13,
    )


@pytest.mark.parametrize("points", [2, 7, 30, 200])
@pytest.mark.parametrize("number", [2, 3, 4])
@pytest.mark.parametrize("seed", range(8))
def test_on_a_grid_no_cumulative_probability_is_further_off_than_stated(seed, number, points):
    parts = [
        Part(p.values * factor, p.probabilities, None, exact=True, error=0.0)
        for p, factor in zip(
            whole_parts(number, seed, most=7), (1, math.sqrt(2), math.pi / 2, math.e), strict=False
        )
    ]
    exact = enumerated(parts)
    found = sum_of_parts(parts, most_points=points)
    if found.exact:  # fewer combinations than points
        assert len(exact) <= points
        return
    at = np.array(list(exact))
    slow = np.array(list(exact.values()))
    where = np.concatenate((at + 1e-7, at - 1e-7, found.values + 1e-7, found.values - 1e-7))
    off = np.abs(cumulative(found.values, found.probabilities, where) - cumulative(at, slow, where))
    assert off.max() <= found.error
    mean = sum(part.values @ part.probabilities for part in parts)
    assert found.values @ found.probabilities == pytest.approx(mean, rel=1e-12)


def test_what_stands_on_the_grid_is_not_counted_as_moved():
    # the grid of 11 points over a range of 10 is the lattice itself
    parts = [part_of([0, 2, 7], [1, 2, 3], exact=False), part_of([0, 1, 3], [4, 1, 1], exact=False)]
    found = sum_of_parts(parts, most_points=11)
    exact = enumerated(parts)
    assert not found.exact
    assert found.error < 1e-12
    np.testing.assert_allclose(
        cumulative(found.values, found.probabilities, np.array(list(exact)) + 1e-6),
        np.cumsum(list(exact.values())),
        atol=1e-12,
    )


def test_a_finer_grid_has_a_smaller_error():
    parts = [
        Part(p.values * factor, p.probabilities, None, exact=True, error=0.0)
        for p, factor in zip(whole_parts(12, 3), np.sqrt(np.arange(2, 14)), strict=True)
    ]
    errors = [sum_of_parts(parts, most_points=points).error for points in (100, 1_000, 10_000)]
    assert errors[0] > 3 * errors[1] > 9 * errors[2]


def test_sixty_parts_keep_their_mean_and_add_up_their_variances():
    parts = [
        Part(p.values * factor, p.probabilities, None, exact=True, error=0.0)
        for p, factor in zip(whole_parts(60, 4), np.sqrt(np.arange(2, 62)), strict=True)
    ]
    found = sum_of_parts(parts, most_points=200_000)
    mean = sum(p.values @ p.probabilities for p in parts)
    variance = sum((p.values - p.values @ p.probabilities) ** 2 @ p.probabilities for p in parts)
    step = found.values[1] - found.values[0]
    assert found.values @ found.probabilities == pytest.approx(mean, rel=1e-11)
    extra = (found.values - mean) ** 2 @ found.probabilities - variance
    assert -1e-9 * variance <= extra <= 60 * step**2 / 4
    assert found.error < 0.01
