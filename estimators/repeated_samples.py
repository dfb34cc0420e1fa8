"""What simple random samples of a known universe give when the survey is repeated by chance."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from estimators.array_checks import Floats, as_count
from estimators.errors import InputError
from estimators.universes import Universe

_ENTRIES = 2_000_000  # numbers held at a time
_COUNTING = 8  # a drawn count of one value takes as long as this many drawn units
_MOST_UNITS = 10**9  # the generator counts no further without replacement
_ROUNDING = 1e-13  # a sum of squared deviations this small next to its parts is a rounding error
_FOR_SKEWNESS = 3  # answers

Shape = tuple[int, int]


@dataclass(frozen=True, slots=True, eq=False)
class RepeatedSamples:
    """Mean, standard deviation and skewness of each of r samples drawn by chance.

    Parameters
    ----------
    deviations : (r,) float, read-only
        Mean of the sample minus the mean of the universe, in ranges of the universe.
    standard_deviations : (r,) float, read-only
        Of the answers of each sample, divisor n - 1, in ranges of the universe; NaN where n is 1.
    skewness : (r,) float, read-only
        Third k-statistic over the cubed standard deviation; 0 where n is below 3 or no answer
        differs.
    """

    deviations: Floats
    standard_deviations: Floats
    skewness: Floats

    def __post_init__(self) -> None:
        for array in (self.deviations, self.standard_deviations, self.skewness):
            array.setflags(write=False)


def repeat_samples(
    universe: Universe, n: int, *, replacement: bool, repetitions: int, seed: int
) -> RepeatedSamples:
    """Draw simple random samples again and again, in less than 100 MB however many.

    Parameters
    ----------
    universe : Universe
        What is drawn from.
    n : int
        Units in each sample.
    replacement : bool
        Whether a unit can be drawn more than once.
    repetitions : int
        Samples.
    seed : int
        Of the random numbers: the same seed gives the same samples.

    Returns
    -------
    RepeatedSamples
        In ranges of the universe (largest value minus smallest), which no interval depends on.

    Raises
    ------
    InputError
        If a number is not whole, n exceeds the universe without replacement, or an endless
        universe or one of 1,000,000,000 units or more is to be drawn from without replacement.
    """
    n = as_count(n, "n")
    _check_draws(universe, n, replacement=replacement)
    left = as_count(repetitions, "repetitions")
    chance = np.random.default_rng(as_count(seed, "seed", least=0))
    values = _scaled_values(universe)
    by_counts = _COUNTING * values.size <= n
    draw = _sums_from_counts if by_counts else _sums_from_units
    rows = max(1, _ENTRIES // (values.size if by_counts else n))
    parts = []
    while left > 0:
        parts.append(draw(universe, values, (min(rows, left), n), chance, replacement))
        left -= rows
    return _moments(np.concatenate(parts, axis=1), n)


def _scaled_values(universe: Universe) -> Floats:
    """Values about the mean of the universe, in its range; all 0 where no unit differs."""
    span = float(universe.values[-1] - universe.values[0])
    if span == 0:
        return np.zeros(1)
    return (universe.values - universe.mean) / span


def _sums_from_counts(
    universe: Universe, values: Floats, shape: Shape, chance: np.random.Generator, replacement: bool
) -> Floats:
    """(3, r) mean, and sums of squared and cubed deviations, from how often each value came."""
    repetitions, n = shape
    if replacement:
        drawn = chance.multinomial(n, universe.counts / universe.size, size=repetitions)
    else:
        drawn = chance.multivariate_hypergeometric(
            universe.counts, n, size=repetitions, method="marginals"
        )
    first, second, third = (drawn @ np.stack([values, values**2, values**3], axis=1)).T
    mean = first / n
    squares = _without_noise(second - n * mean**2, second)
    return np.stack([mean, squares, third - 3 * mean * second + 2 * n * mean**3])


def _sums_from_units(
    universe: Universe, values: Floats, shape: Shape, chance: np.random.Generator, replacement: bool
) -> Floats:
    """(3, r) mean, and sums of squared and cubed deviations, from the units themselves."""
    repetitions, n = shape
    if replacement:
        units = chance.integers(universe.size, size=shape)
    else:
        units = np.empty(shape, dtype=np.int64)
        for row in range(repetitions):
            units[row] = chance.choice(universe.size, n, replace=False, shuffle=False)
    numbers = values[np.searchsorted(np.cumsum(universe.counts), units, side="right")]
    mean = numbers.mean(axis=1)
    numbers -= mean[:, None]
    powers = numbers * numbers
    squares = _without_noise(powers.sum(axis=1), n * mean**2)
    return np.stack([mean, squares, np.einsum("ij,ij->i", powers, numbers)])


def _without_noise(squares: Floats, scale: Floats) -> Floats:
    """Return sums of squared deviations, exactly 0 where they are rounding errors."""
    return np.where(squares <= _ROUNDING * scale, 0.0, squares)


def _moments(sums: Floats, n: int) -> RepeatedSamples:
    """From sums of deviations to standard deviation and skewness (k-statistics)."""
    mean, squares, cubes = sums
    deviation = np.sqrt(squares / (n - 1)) if n > 1 else np.full(mean.shape, np.nan)
    skewness = np.zeros(mean.shape)
    if n >= _FOR_SKEWNESS:
        varies = squares > 0
        third = cubes[varies] * n / ((n - 1) * (n - 2))
        skewness[varies] = third / deviation[varies] ** 3
    return RepeatedSamples(mean, deviation, skewness)


def _check_draws(universe: Universe, n: int, *, replacement: bool) -> None:
    if replacement:
        return
    if universe.endless or universe.size >= _MOST_UNITS:
        raise InputError(
            "replacement",
            replacement,
            f"must be True for an endless universe and one of {_MOST_UNITS:,} units or more",
            "draw with replacement, or give a universe with fewer units",
        )
    if n > universe.size:
        raise InputError(
            "n",
            n,
            f"must be at most the {universe.size} units of the universe",
            "draw fewer, or draw with replacement",
        )
