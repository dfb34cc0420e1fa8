"""Where the mean or the total of a sample falls: its exact distribution in a known universe."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from estimators.array_checks import as_confidence, as_count
from estimators.errors import InputError
from estimators.exact_sums import (
    SumProbabilities,
    sums_with_replacement,
    sums_without_replacement,
)
from estimators.lattices import Lattice, exact_lattice, grid_lattice
from estimators.listed_sums import listed_means, listing_is_short
from estimators.results import Interval
from estimators.universes import Universe

Floats = NDArray[np.float64]

_MOST_POINTS = 10**7
_FINEST_GRID = 2**12  # steps over the range of the values
_GRID_SUMS = 2**22  # possible sums on a grid
_CERTAIN = 1e-12  # a tail this much beyond its share is a rounding error
_LISTED_ERROR = 1e-14


@dataclass(frozen=True, slots=True, eq=False)
class SamplingDistribution:
    """The distribution of an estimate over all samples that could have been drawn.

    Parameters
    ----------
    support : (m,) float, read-only
        Values the estimate can take, ascending and evenly spaced unless few samples differ. A
        value that no sample reaches has probability 0 (within ``error``).
    probabilities : (m,) float, read-only
        Probability of each; 0 where it cannot be told from a rounding error.
    mean, standard_deviation, skewness : float
        Of the estimate, in closed form; skewness is NaN where the estimate cannot vary.
    exact : bool
        Whether the values stand where they were. If not, each was moved to the nearest point of a
        fine grid (with the mean kept) because the possible sums are too many to tell apart.
    error : float
        If exact, a bound for the absolute error of each probability. If not, an estimate of how
        far a cumulative probability may be off.
    """

    support: Floats
    probabilities: Floats
    mean: float
    standard_deviation: float
    skewness: float
    exact: bool
    error: float

    def __post_init__(self) -> None:
        self.support.setflags(write=False)
        self.probabilities.setflags(write=False)

    def interval(self, confidence: float = 0.95) -> Interval:
        """Say where the estimates fall; this is no confidence interval.

        Parameters
        ----------
        confidence : float
            Part of the samples, between 0 and 1.

        Returns
        -------
        Interval
            The innermost possible values with at most half of the rest below and above.
        """
        confidence = as_confidence(confidence)
        tail = (1 - confidence) / 2 + _CERTAIN
        below = np.searchsorted(np.cumsum(self.probabilities), tail, side="right")
        above = np.searchsorted(np.cumsum(self.probabilities[::-1]), tail, side="right")
        last = self.support.size - 1
        low = float(self.support[min(int(below), last)])
        high = float(self.support[max(last - int(above), 0)])
        return Interval(low, high, confidence, "sampling distribution")


def mean_distribution(
    universe: Universe, n: int, *, replacement: bool = False, most_points: int = _MOST_POINTS
) -> SamplingDistribution:
    """Give the exact distribution of the mean of a simple random sample.

    Parameters
    ----------
    universe : Universe
        Values and how many units have each.
    n : int
        Units drawn.
    replacement : bool
        Whether a unit could be drawn more than once.
    most_points : int
        Possible sums to tell apart; where there are more, the units are moved to a grid.

    Returns
    -------
    SamplingDistribution
        In the unit of the values.

    Raises
    ------
    InputError
        If n is no whole number from 1 to the size of the universe (with replacement: 1 or more),
        or an endless universe is to be drawn from without replacement.

    References
    ----------
    Cochran, W. G. (1977). Sampling Techniques, 3rd ed., theorems 2.1 and 2.2 (mean and variance).
    Sugden, R. A., Smith, T. M. F., Jones, R. P. (2000). Journal of the Royal Statistical Society
    B 62, 787-793 (skewness without replacement).

    Examples
    --------
    >>> distribution = mean_distribution(Universe([2, 3, 6, 8, 11], [1, 1, 1, 1, 1]), 2)
    >>> distribution.support.tolist()
    [2.5, 4.0, 4.5, 5.0, 5.5, 6.5, 7.0, 8.5, 9.5]
    >>> distribution.probabilities.round(12).tolist()
    [0.1, 0.1, 0.1, 0.1, 0.1, 0.1, 0.2, 0.1, 0.1]
    """
    n = as_count(n, "n")
    _check_draws(universe, n, replacement=replacement)
    support, probabilities, exact, error = _mean_probabilities(
        universe, n, replacement=replacement, most_points=most_points
    )
    return SamplingDistribution(
        support,
        probabilities,
        universe.mean,
        _standard_deviation(universe, n, replacement=replacement),
        _skewness(universe, n, replacement=replacement),
        exact,
        error,
    )


def total_distribution(
    universe: Universe, n: int, *, replacement: bool = False, most_points: int = _MOST_POINTS
) -> SamplingDistribution:
    """Give the exact distribution of the estimated total: size of the universe x sample mean.

    Parameters
    ----------
    universe : Universe
        Values and how many units have each; not an endless one.
    n : int
        Units drawn.
    replacement : bool
        Whether a unit could be drawn more than once.
    most_points : int
        Possible sums to tell apart; where there are more, the units are moved to a grid.

    Returns
    -------
    SamplingDistribution
        In the unit of the values, summed over the universe.

    Raises
    ------
    InputError
        As for :func:`mean_distribution`, and if the universe is endless.
    """
    if universe.endless:
        raise InputError(
            "universe",
            "an endless one",
            "must have a size for a total",
            "give the number of units, or ask for the mean",
        )
    means = mean_distribution(universe, n, replacement=replacement, most_points=most_points)
    return SamplingDistribution(
        means.support * universe.size,
        means.probabilities,
        means.mean * universe.size,
        means.standard_deviation * universe.size,
        means.skewness,
        means.exact,
        means.error,
    )


def _mean_probabilities(
    universe: Universe, n: int, *, replacement: bool, most_points: int
) -> tuple[Floats, Floats, bool, float]:
    """Possible means, their probabilities, whether they are exact, and their error."""
    if universe.values.size == 1 or (n == universe.size and not replacement):
        return np.array([universe.mean]), np.ones(1), True, 0.0
    kinds, counts = universe.values.size, universe.counts
    if listing_is_short(kinds, counts, n, replacement=replacement):
        means, probabilities = listed_means(universe.values, counts, n, replacement=replacement)
        return means, probabilities, True, _LISTED_ERROR
    lattice = exact_lattice(universe)
    found = None if lattice is None else _sums(lattice, n, replacement, most_points)
    if lattice is None or found is None:
        return _on_a_grid(universe, n, replacement, most_points)
    kept = _reached(universe, found, n, replacement=replacement)
    support = lattice.mean_of(found.lowest + kept, n)
    return support, found.probabilities[kept], True, found.error


def _sums(lattice: Lattice, n: int, replacement: bool, most_points: int) -> SumProbabilities | None:
    draw = sums_with_replacement if replacement else sums_without_replacement
    return draw(lattice.positions, lattice.counts, n, most_points=most_points)


def _reached(
    universe: Universe, found: SumProbabilities, n: int, *, replacement: bool
) -> NDArray[np.int64]:
    """Places of the sums to keep: all, or those samples reach where rounding cannot hide them."""
    size = universe.size
    if replacement:
        rarest = n * math.log(int(universe.counts.min()) / size)
    else:
        rarest = math.lgamma(n + 1) + math.lgamma(size - n + 1) - math.lgamma(size + 1)
    if rarest < math.log(1000 * max(found.error, 1e-300)):
        return np.arange(found.probabilities.size)
    return np.flatnonzero(found.probabilities > math.exp(rarest) / 2)


def _on_a_grid(
    universe: Universe, n: int, replacement: bool, most_points: int
) -> tuple[Floats, Floats, bool, float]:
    """Means of the units moved to a grid as fine as can be worked out; hopeless tails cut off."""
    steps = max(1, min(_FINEST_GRID, min(_GRID_SUMS, most_points) // n))
    lattice, found = grid_lattice(universe, steps), None
    while found is None:
        lattice = grid_lattice(universe, steps)
        found = _sums(lattice, n, replacement, max(most_points, _MOST_POINTS))
        steps = max(1, steps // 2)
    places = np.flatnonzero(found.probabilities > found.error)
    kept = np.arange(places[0], places[-1] + 1)
    support = lattice.mean_of(found.lowest + kept, n)
    # a small random shift of the estimate: density at the centre x its standard deviation
    error = found.error + lattice.moved / universe.standard_deviation / math.sqrt(2 * math.pi)
    return support, found.probabilities[kept], False, error


def _standard_deviation(universe: Universe, n: int, *, replacement: bool) -> float:
    """Give the standard deviation of the mean (Cochran 1977, theorem 2.2)."""
    if replacement:
        return universe.standard_deviation / math.sqrt(n)
    size = universe.size
    if size == n:
        return 0.0
    return universe.standard_deviation * math.sqrt((size - n) / (n * (size - 1)))


def _skewness(universe: Universe, n: int, *, replacement: bool) -> float:
    """Skewness of the mean; that of the hypergeometric distribution is the case of two values."""
    size = universe.size
    if replacement:
        return universe.skewness / math.sqrt(n)
    if n == size:
        return math.nan
    if size == 2:
        return universe.skewness  # one of two units: as far to one side as to the other
    spread = math.sqrt((size - 1) / (n * (size - n)))
    return universe.skewness * (size - 2 * n) / (size - 2) * spread


def _check_draws(universe: Universe, n: int, *, replacement: bool) -> None:
    if not replacement and universe.endless:
        raise InputError(
            "replacement",
            replacement,
            "must be True for an endless universe",
            "give the number of units in the universe, or draw with replacement",
        )
    if not replacement and n > universe.size:
        raise InputError(
            "n",
            n,
            f"must be at most the {universe.size} units of the universe",
            "draw fewer, or draw with replacement",
        )
    if (n if replacement else min(n, universe.size - n)) >= _MOST_POINTS:
        raise InputError(
            "n", n, f"must be below {_MOST_POINTS} draws", "use the normal curve for so many"
        )
