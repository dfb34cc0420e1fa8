"""A finite universe: the values its units have, and how many units have each."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.errors import InputError

_LARGEST = 2**31  # units; products of two counts then stay exact in 64 bits


@dataclass(frozen=True, slots=True, eq=False)
class Universe:
    """All units a figure speaks for, by value.

    Parameters
    ----------
    values : (m,) array_like of float
        Values of the units. Stored in ascending order, equal values together, values without
        units left out.
    counts : (m,) array_like of int
        Units that have the value.
    endless : bool
        The counts stand for parts of an endless universe, so that only draws with replacement
        make sense.

    Attributes
    ----------
    values : (k,) float, read-only
    counts : (k,) int, read-only

    Raises
    ------
    InputError
        If the two do not match, a value is no number or a count is not whole.

    Examples
    --------
    >>> universe = Universe([1, 2, 3], [50, 30, 20])
    >>> universe.size, universe.mean
    (100, 1.7)
    """

    values: NDArray[np.float64]
    counts: NDArray[np.int64]
    endless: bool = False

    def __post_init__(self) -> None:
        values = _checked_values(self.values, "values")
        counts = _checked_counts(self.counts, values.size)
        distinct, where = np.unique(values[counts > 0] + 0.0, return_inverse=True)
        sums = np.zeros(distinct.size, dtype=np.int64)
        np.add.at(sums, where, counts[counts > 0])
        for name, array in (("values", distinct), ("counts", sums)):
            array.setflags(write=False)
            object.__setattr__(self, name, array)

    @property
    def size(self) -> int:
        """Units in all."""
        return int(self.counts.sum())

    @property
    def mean(self) -> float:
        """Mean of all units."""
        return math.fsum(self.values * self.counts) / self.size

    @property
    def standard_deviation(self) -> float:
        """Root of the mean squared deviation, with the number of units as divisor."""
        return math.sqrt(self._central_moment(2))

    @property
    def skewness(self) -> float:
        """Third central moment over the cubed standard deviation; NaN where no unit differs."""
        if self.values.size == 1:
            return math.nan
        return float(self._central_moment(3) / self._central_moment(2) ** 1.5)

    def _central_moment(self, power: int) -> float:
        """Mean of the deviations from the mean, raised to a power."""
        return math.fsum((self.values - self.mean) ** power * self.counts) / self.size


def plug_in_universe(responses: ArrayLike, population_size: int | None = None) -> Universe:
    """Build the universe that looks like the sample: every value as frequent as in the answers.

    Parameters
    ----------
    responses : (n,) array_like of float
        The answers of a sample.
    population_size : int, optional
        Units in the universe, at least n. Each value gets its whole part of the units, the rest
        goes to the largest remainders, and between equal remainders to the smaller value; no
        value gets fewer units than were seen. Without it the universe is endless.

    Returns
    -------
    Universe
        With ``population_size`` units; with the counts of the sample where it is endless, good
        for draws with replacement only.

    Raises
    ------
    InputError
        If an answer is no number, or the universe is smaller than the sample.
    """
    answers = _checked_values(responses, "responses")
    values, counts = np.unique(answers + 0.0, return_counts=True)
    if population_size is None:
        return Universe(values, counts, endless=True)
    n = answers.size
    if not n <= population_size <= _LARGEST or population_size % 1:
        raise InputError(
            "population_size",
            population_size,
            f"must be a whole number of at least the {n} answers and at most {_LARGEST}",
            "correct it, or leave it out and draw with replacement",
        )
    whole, remainders = np.divmod(counts * int(population_size), n)  # below 2**62: exact
    left = int(population_size) - int(whole.sum())
    favoured = np.argsort(-remainders, kind="stable")[:left]
    units = whole.astype(np.int64)
    units[favoured] += 1
    return Universe(values, units)


def _checked_values(given: ArrayLike, name: str) -> NDArray[np.float64]:
    values = np.asarray(given, dtype=float)
    if values.ndim != 1 or values.size == 0:
        raise InputError(
            name, f"shape {values.shape}", "must be a list of numbers", "give one or more numbers"
        )
    if not np.isfinite(values).all():
        raise InputError(
            name,
            float(values[~np.isfinite(values)][0]),
            "must all be finite numbers",
            "leave out missing answers",
        )
    return values


def _checked_counts(given: ArrayLike, wanted: int) -> NDArray[np.int64]:
    counts = np.asarray(given, dtype=float)
    if counts.shape != (wanted,):
        raise InputError(
            "counts", f"shape {counts.shape}", "must match values", "give one count for each value"
        )
    if not (np.isfinite(counts).all() and (counts >= 0).all() and (counts % 1 == 0).all()):
        raise InputError(
            "counts", counts.tolist(), "must be whole numbers, 0 or more", "count the units again"
        )
    if not 1 <= counts.sum() <= _LARGEST:
        raise InputError(
            "counts",
            f"{counts.sum():.0f} units",
            f"must add up to between 1 and {_LARGEST} units",
            "for a larger universe scale the counts down and draw with replacement",
        )
    return counts.astype(np.int64)
