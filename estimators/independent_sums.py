"""The distribution of a sum of independent parts, each with few or many possible values.

Three ways: by listing every combination where they are few, on the lattice all parts share, or on
a fine grid. On the grid the probability of a value is split between its two neighbours so that the
mean stays; each part has its likeliest value on a grid point. The last two are inverted by FFT on
so many points that nothing wraps round.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray
from scipy import fft

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

_MOST_LISTED = 2**16  # combinations
_GRID_POINTS = 2**16
_SAME = 1e-13  # sums closer than this, relative to their range, are one
_ON_POINT = 1e-9  # of a grid step; closer to a grid point is on it
_TAIL = 1e-17  # of each part, cut off at either end before it is put on a grid
_UNLIKELY = 1e-9  # that the moves of many parts add up to more than is allowed for
_EPS = float(np.finfo(float).eps)


@dataclass(frozen=True, slots=True, eq=False)
class Part:
    """One of the independent parts of a sum.

    Parameters
    ----------
    values : (m,) float
        What it can be, ascending.
    probabilities : (m,) float
        Of each.
    step : Fraction or None
        Every difference of two values is a multiple of it; None where there is no such step, or
        the values are not exact.
    exact : bool
        Whether the values stand where they were.
    error : float
        Bound for the absolute error of each probability.
    """

    values: Floats
    probabilities: Floats
    step: Fraction | None
    exact: bool
    error: float

    @property
    def range(self) -> float:
        """Distance from the smallest to the largest value."""
        return float(self.values[-1] - self.values[0])


@dataclass(frozen=True, slots=True, eq=False)
class SumLaw:
    """Values of a sum in ascending order, their probabilities, and how far to trust them.

    ``error`` bounds each probability where ``exact``, otherwise each cumulative probability.
    """

    values: Floats
    probabilities: Floats
    exact: bool
    error: float


def sum_of_parts(parts: Sequence[Part], *, most_points: int) -> SumLaw:
    """Give the distribution of the sum of independent parts.

    Parameters
    ----------
    parts : sequence of Part
        One or more, at least two values each.
    most_points : int
        Possible sums to tell apart; where there are more, they are moved to a grid.

    Returns
    -------
    SumLaw
        The error of moving to the grid is bounded with the parts as given; where a part is not
        exact itself, that comes on top.
    """
    if not all(part.exact for part in parts):
        return _on_a_grid(parts, most_points)
    combinations = math.prod(part.values.size for part in parts)
    step = _common_step(parts)
    points = None if step is None else 1 + sum(_multiple(part.range, step) for part in parts)
    if combinations <= min(most_points, _MOST_LISTED, points or _MOST_LISTED):
        return _listed(parts)
    if step is None or points is None or points > most_points:
        return _on_a_grid(parts, most_points)
    return _on_the_lattice(parts, step, points)


def _common_step(parts: Sequence[Part]) -> Fraction | None:
    """Largest step that goes into the steps of all parts without remainder."""
    common = Fraction(0)
    for part in parts:
        if part.step is None:
            return None
        below = common.denominator * part.step.denominator
        common = Fraction(
            math.gcd(
                common.numerator * part.step.denominator, part.step.numerator * common.denominator
            ),
            below,
        )
    return common


def _multiple(distance: float, step: Fraction) -> int:
    return round(Fraction(distance) / step)


def _listed(parts: Sequence[Part]) -> SumLaw:
    """Every combination, equal sums together."""
    values, mass = parts[0].values, parts[0].probabilities
    same = _SAME * sum(part.range for part in parts)
    for part in parts[1:]:
        sums = (values[:, None] + part.values).ravel()
        products = (mass[:, None] * part.probabilities).ravel()
        order = np.argsort(sums, kind="stable")
        sums = sums[order]
        first = np.flatnonzero(np.concatenate(([True], np.diff(sums) > same)))
        values, mass = sums[first], np.add.reduceat(products[order], first)
    return SumLaw(values, mass, True, sum(part.error for part in parts) + len(parts) * _EPS)


def _on_the_lattice(parts: Sequence[Part], step: Fraction, points: int) -> SumLaw:
    """Convolution on the lattice all parts share."""
    masses: list[Floats] = []
    for part in parts:
        assert part.step is not None
        steps = np.rint((part.values - part.values[0]) / float(part.step)).astype(np.int64)
        places = steps * int(part.step / step)
        masses.append(_mass(places, part.probabilities, int(places[-1]) + 1))
    probabilities = _convolved(masses, points)
    error = sum(part.error for part in parts) + _rounding(masses, points)
    first = math.fsum(float(part.values[0]) for part in parts)
    values = np.asarray(first + float(step) * np.arange(points), dtype=float)
    return SumLaw(values, probabilities, True, error)


def _on_a_grid(parts: Sequence[Part], most_points: int) -> SumLaw:
    """Convolution on a fine grid; what is below rounding errors at either end is cut off."""
    kept = [_without_hopeless_tails(part) for part in parts]
    step = sum(part.range for part in kept) / max(1, min(most_points, _GRID_POINTS) - 1)
    split = [_Split.of(part, step) for part in kept]
    points = 1 + sum(one.mass.size - 1 for one in split)
    masses = [one.mass for one in split]
    probabilities = _convolved(masses, points)
    moved = probabilities - _convolved([one.unmoved for one in split], points)
    error = _error_of_moving(moved, sum(one.moves for one in split))
    error += sum(part.error * part.values.size + 2 * _TAIL for part in kept)
    error += _rounding(masses, points) * points
    places = np.flatnonzero(probabilities > _rounding(masses, points))
    inside = np.arange(places[0], places[-1] + 1)
    first = math.fsum(one.first for one in split)
    mass = probabilities[inside] / probabilities[inside].sum()
    return SumLaw(first + step * inside, mass, False, float(error))


def _without_hopeless_tails(part: Part) -> Part:
    below = np.cumsum(part.probabilities) > _TAIL
    above = np.cumsum(part.probabilities[::-1])[::-1] > _TAIL
    kept = np.flatnonzero(below & above)
    inside = slice(int(kept[0]), int(kept[-1]) + 1)
    return Part(part.values[inside], part.probabilities[inside], part.step, part.exact, part.error)


@dataclass(frozen=True, slots=True, eq=False)
class _Split:
    """A part on the grid: value of the first point, mass, mass that stands where it was."""

    first: float
    mass: Floats
    unmoved: Floats

    @property
    def moves(self) -> bool:
        """Whether any value was moved."""
        return bool((self.unmoved < self.mass).any())

    @classmethod
    def of(cls, part: Part, step: float) -> _Split:
        """Split every value between its neighbours, the likeliest value being on a point."""
        likeliest = float(part.values[int(np.argmax(part.probabilities))])
        places = (part.values - likeliest) / step
        below = np.floor(places + _ON_POINT)
        rest = np.maximum(places - below, 0.0)
        rest[rest <= _ON_POINT] = 0.0
        indices = (below - below[0]).astype(np.int64)
        size = int(indices[-1]) + 2
        mass = _mass(indices, part.probabilities * (1 - rest), size)
        mass += _mass(indices + 1, part.probabilities * rest, size)
        unmoved = _mass(indices, np.where(rest == 0, part.probabilities, 0.0), size)
        return cls(likeliest + step * float(below[0]), mass, unmoved)


def _error_of_moving(moved: Floats, parts: int) -> float:
    """Bound the error of the cumulative probabilities, given the mass of which a part was moved.

    Two sums that end on different sides of a value are apart by less than one step for each part
    that moved, and for many parts, by Hoeffding (1963), theorem 2, hardly ever by more than
    sqrt(parts ln(2 / chance) / 2) steps, as moves have mean zero and a range of one step.
    """
    if not parts:
        return 0.0
    usual = math.ceil(math.sqrt(parts / 2 * math.log(2 / _UNLIKELY))) + 1
    window, chance = (usual, _UNLIKELY) if usual < parts else (parts, 0.0)
    before = np.concatenate(([0.0], np.cumsum(np.maximum(moved, 0.0))))
    window = min(window, moved.size)
    return float((before[window:] - before[:-window]).max()) + chance


def _mass(places: Ints, probabilities: Floats, size: int) -> Floats:
    return np.asarray(np.bincount(places, weights=probabilities, minlength=size), dtype=float)


def _convolved(masses: Sequence[Floats], points: int) -> Floats:
    """Mass of the sum; what is negative is rounding, and so is as much that is positive."""
    size = int(fft.next_fast_len(points, real=True))
    spectrum = fft.rfft(masses[0], size)
    for mass in masses[1:]:
        spectrum *= fft.rfft(mass, size)
    found = np.asarray(fft.irfft(spectrum, size)[:points], dtype=float)
    noise = max(0.0, -float(found.min()))
    return np.where(found > noise, found, 0.0)


def _rounding(masses: Sequence[Floats], points: int) -> float:
    """Bound the rounding error of one probability: that of every transform, added up."""
    lengths = sum(float(np.sqrt(mass @ mass)) for mass in masses)
    return _EPS * math.log2(points + 1) * lengths
