"""The distribution of a sum by listing every sample that differs: for few draws or few units."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from estimators.lattices import decimal_numerators

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

_MOST_STATES = 100_000
_MOST_WORK = 40_000_000  # states x values
_LARGEST_LOG = 600.0  # natural logarithm of the number of samples; more would overflow
_LARGEST_SCALE = 10**20  # decimal places that are worth counting in
_SAME = 1e-13  # sums closer than this, relative to the largest possible, are one


@dataclass(frozen=True, slots=True, eq=False)
class _States:
    """Unfinished samples: how many were drawn, what they add up to, how often it happens."""

    drawn: Ints
    sums: Floats
    weights: Floats


def listing_is_short(kinds: int, counts: Ints, n: int, *, replacement: bool) -> bool:
    """Whether the samples of n that differ are few enough to list.

    Parameters
    ----------
    kinds : int
        Distinct values.
    counts : (k,) int
        Units at each.
    n : int
        Units drawn; without replacement those left out are listed where they are fewer.
    replacement : bool
        Whether a unit could be drawn more than once.

    Returns
    -------
    bool
    """
    size = int(counts.sum())
    draws = n if replacement else min(n, size - n)
    if draws > _MOST_STATES or kinds > _MOST_STATES:
        return False
    states = _log_choices(kinds + draws, draws)
    short = states <= math.log(_MOST_STATES) and states + math.log(kinds) <= math.log(_MOST_WORK)
    return short and draws * math.log(size) < _LARGEST_LOG


def listed_means(
    values: Floats, counts: Ints, n: int, *, replacement: bool
) -> tuple[Floats, Floats]:
    """Give the distribution of the mean of n draws by listing them.

    Parameters
    ----------
    values : (k,) float
        Distinct values, ascending.
    counts : (k,) int
        Units at each.
    n : int
        Units drawn.
    replacement : bool
        Whether a unit could be drawn more than once.

    Returns
    -------
    tuple of (means, probabilities)
        Every mean some sample has, ascending, and its probability; relative errors are a few
        roundings.
    """
    numerators, scale = decimal_numerators(values)
    if scale > _LARGEST_SCALE:
        numbers, scale = values, 1
    else:  # whole numbers, so that equal sums are equal
        numbers = np.array(numerators, dtype=float)
    size = int(counts.sum())
    if replacement or n <= size - n:
        sums, probabilities = _listed_sums(numbers, counts, n, replacement=replacement)
    else:  # those left out are the smaller sample
        left_out, mass = _listed_sums(numbers, counts, size - n, replacement=False)
        sums, probabilities = (math.fsum(numbers * counts) - left_out)[::-1], mass[::-1]
    return sums / (float(n) * scale), probabilities


def _listed_sums(
    values: Floats, counts: Ints, n: int, *, replacement: bool
) -> tuple[Floats, Floats]:
    """Every sum some sample of n reaches, ascending, and its probability."""
    size = int(counts.sum())
    states = _States(np.zeros(1, dtype=np.int64), np.zeros(1), np.ones(1))
    later = size - np.cumsum(counts)
    if replacement:
        later = np.where(later > 0, n, 0)  # any later value can fill up the sample
    for value, count, rest in zip(values, counts.tolist(), later.tolist(), strict=True):
        weights = _ways(count, size, n, replacement=replacement)
        states = _extended(states, float(value), weights, n, rest)
    return _merged(states.sums, states.weights, _SAME * n * float(np.abs(values).max()))


def _ways(count: int, size: int, n: int, *, replacement: bool) -> Floats:
    """Give the weight of drawing 0, 1, 2 ... units of one value."""
    if replacement:
        part = count / size
        return np.array([part**c / math.factorial(c) for c in range(n + 1)])
    return np.array([float(math.comb(count, c)) for c in range(min(count, n) + 1)])


def _extended(states: _States, value: float, weights: Floats, n: int, rest: int) -> _States:
    """Every state followed by every number of units of the next value that can still end at n."""
    more = np.arange(weights.size)
    drawn = (states.drawn[:, None] + more).ravel()
    sums = (states.sums[:, None] + value * more).ravel()
    products = (states.weights[:, None] * weights).ravel()
    open_ = (drawn <= n) & (drawn >= n - rest)
    return _States(drawn[open_], sums[open_], products[open_])


def _merged(sums: Floats, weights: Floats, same: float) -> tuple[Floats, Floats]:
    """Equal sums together, and weights turned into probabilities."""
    order = np.argsort(sums, kind="stable")
    ordered = sums[order]
    first = np.flatnonzero(np.concatenate(([True], np.diff(ordered) > same)))
    mass = np.add.reduceat(weights[order], first)
    return ordered[first], mass / math.fsum(mass)


def _log_choices(size: int, n: int) -> float:
    """Logarithm of the number of ways to choose n of size."""
    return math.lgamma(size + 1) - math.lgamma(n + 1) - math.lgamma(size - n + 1)
