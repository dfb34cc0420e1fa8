"""Values as whole-number positions on a lattice: exact where they have one, else a fine grid."""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import Decimal

import numpy as np
from numpy.typing import NDArray

from estimators.universes import Universe

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

_MOST_POSITIONS = 10**7
_MOST_COMMON_PARTS = 10**5  # of the range, for a step that is not a short decimal
_CLOSE = 1e-12  # relative; two results of one division differ by less


@dataclass(frozen=True, slots=True, eq=False)
class Lattice:
    """A universe on a lattice: value = (first + step x position) / scale.

    Parameters
    ----------
    positions : (k,) int
        Ascending, the first of them 0.
    counts : (k,) int
        Units at each.
    first, step : int or float
        Whole numbers where the values are decimals.
    scale : int
        Power of ten that makes them whole.
    moved : float
        Root mean square distance the units were moved, in the unit of the values; 0 if exact.
    """

    positions: Ints
    counts: Ints
    first: float
    step: float
    scale: int = 1
    moved: float = 0.0

    def mean_of(self, sums: Ints, n: int) -> Floats:
        """Give the mean of n values whose positions add up to each sum."""
        return np.asarray((n * self.first + self.step * sums) / (n * self.scale), dtype=float)


def decimal_numerators(values: Floats) -> tuple[list[int], int]:
    """Give whole numbers and the power of ten that, as divisor, makes them the values.

    Parameters
    ----------
    values : (k,) float
        Finite numbers; their shortest decimal text counts.

    Returns
    -------
    tuple of (numerators, scale)
    """
    decimals = [Decimal(repr(float(value))) for value in values]
    places = max(0, *(-int(decimal.as_tuple().exponent) for decimal in decimals))
    return [int(decimal.scaleb(places)) for decimal in decimals], 10**places


def exact_lattice(universe: Universe) -> Lattice | None:
    """Find the lattice the values lie on, the common divisor of their gaps being its step.

    Parameters
    ----------
    universe : Universe
        Two values or more.

    Returns
    -------
    Lattice or None
        None where there is none with at most ten million positions.
    """
    numerators, scale = decimal_numerators(universe.values)
    gaps = [number - numerators[0] for number in numerators]
    step = math.gcd(*gaps)
    if gaps[-1] // step > _MOST_POSITIONS:
        return _common_parts(universe)
    positions = np.array([gap // step for gap in gaps], dtype=np.int64)
    return Lattice(positions, universe.counts, numerators[0], step, scale)


def grid_lattice(universe: Universe, steps: int) -> Lattice:
    """Move every unit to the nearest point of an even grid over the range, keeping the mean.

    Parameters
    ----------
    universe : Universe
        Two values or more.
    steps : int
        Steps from the smallest to the largest value.

    Returns
    -------
    Lattice
        With ``moved`` saying how far.
    """
    values, counts = universe.values, universe.counts
    step = float(values[-1] - values[0]) / steps
    nearest = np.rint((values - values[0]) / step).astype(np.int64)
    positions, where = np.unique(nearest, return_inverse=True)
    units = np.bincount(where, weights=counts).astype(np.int64)
    first = universe.mean - step * float(nearest @ counts) / universe.size
    gaps = values - (first + step * nearest)
    moved = math.sqrt(float(gaps**2 @ counts) / universe.size)
    return Lattice(positions, units, first, step, moved=moved)


def _common_parts(universe: Universe) -> Lattice | None:
    """Find a step that is no short decimal, such as a third, up to rounding errors."""
    values = universe.values
    close = _CLOSE * float(np.abs(values).max())
    gaps = values[1:] - values[0]
    step = float(gaps[0])
    for gap in gaps[1:]:
        step = _common_divisor(float(gap), step, close)
    parts = round(float(gaps[-1]) / step)
    if parts > _MOST_COMMON_PARTS:
        return None
    step = float(gaps[-1]) / parts
    positions = np.rint((values - values[0]) / step).astype(np.int64)
    if np.abs(values - values[0] - step * positions).max() > close:
        return None
    return Lattice(positions, universe.counts, float(values[0]), step)


def _common_divisor(larger: float, smaller: float, close: float) -> float:
    """Euclid's algorithm with remainders nearest to zero."""
    while smaller > close:
        larger, smaller = smaller, abs(math.remainder(larger, smaller))
    return larger
