"""Exact probabilities of the sum of a sample of whole numbers, by its generating function.

With draws without replacement the sum of n units of N, N_k of them at v_k, has the generating
function [z^n] prod_k (1 + z e^(itv_k))^(N_k). It is evaluated on the circle |z| = n/(N-n), where
the wanted coefficient is the largest one, and divided by its value at t = 0. With draws with
replacement it is the n-th power of that of one draw. Both are inverted by FFT on as many
frequencies as there are possible sums, so that nothing wraps round.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import fft

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

_NOTHING = 1e-17  # what may be left out, relative to the whole
_MOST_WORK = 15 * 10**6  # evaluations of one factor, about half a second
_CHUNK = 2**19  # evaluations at a time, for memory
_ROUNDING = 32 * np.finfo(float).eps  # of one frequency, relative; checked against enumeration
_TAYLOR = (-1 / 6, 1 / 20, 1 / 42, 1 / 72, 1 / 110, 1 / 156, 1 / 210)


@dataclass(frozen=True, slots=True, eq=False)
class SumProbabilities:
    """Probabilities of consecutive whole numbers.

    Parameters
    ----------
    lowest : int
        The smallest possible sum.
    probabilities : (m,) float
        Of ``lowest``, ``lowest + 1`` and so on up to the largest possible sum; 0 where it cannot be
        told from a rounding error.
    error : float
        Bound for the absolute error of each of them.
    """

    lowest: int
    probabilities: Floats
    error: float


@dataclass(frozen=True, slots=True, eq=False)
class _Draws:
    """n draws from counts at whole-number positions that start at 0."""

    positions: Ints
    counts: Ints
    n: int

    @property
    def size(self) -> int:
        return int(self.counts.sum())

    @property
    def centre(self) -> int:
        """The whole number next to the mean."""
        return round(int(self.positions @ self.counts) / self.size)


def sums_without_replacement(
    positions: Ints, counts: Ints, n: int, *, most_points: int = 10**7
) -> SumProbabilities | None:
    """Give the distribution of the sum of n different units.

    Parameters
    ----------
    positions : (k,) int
        Distinct whole numbers in ascending order, the first of them 0.
    counts : (k,) int
        Units at each.
    n : int
        Units drawn, 0 to the sum of counts.
    most_points : int
        Possible sums that may be told apart.

    Returns
    -------
    SumProbabilities or None
        None where there are more of them, or the work would take too long.
    """
    size, whole = int(counts.sum()), int(positions @ counts)
    if n > size - n:  # those left out are the smaller sample
        rest = sums_without_replacement(positions, counts, size - n, most_points=most_points)
        if rest is None:
            return None
        highest = rest.lowest + rest.probabilities.size - 1
        return SumProbabilities(whole - highest, rest.probabilities[::-1], rest.error)
    lowest = _sum_of_first(positions, counts, n)
    highest = _sum_of_first(positions[::-1], counts[::-1], n)
    if lowest == highest:
        return SumProbabilities(lowest, np.ones(1), 0.0)
    draws = _Draws(positions, counts, n)
    grid = int(fft.next_fast_len(highest - lowest + 1, real=True))
    frequencies = None if highest - lowest >= most_points else _lasting_without(draws, grid)
    if frequencies is None:
        return None
    values = _without_at(draws, grid, *frequencies)
    return _inverted(draws, grid, frequencies[0], values, (lowest, highest))


def sums_with_replacement(
    positions: Ints, counts: Ints, n: int, *, most_points: int = 10**7
) -> SumProbabilities | None:
    """Give the distribution of the sum of n draws, each from all units.

    Parameters and returns are those of :func:`sums_without_replacement`.
    """
    lowest, highest = n * int(positions[0]), n * int(positions[-1])
    if lowest == highest:
        return SumProbabilities(lowest, np.ones(1), 0.0)
    draws = _Draws(positions, counts, n)
    grid = int(fft.next_fast_len(highest - lowest + 1, real=True))
    frequencies = None if highest - lowest >= most_points else _lasting_with(draws, grid)
    if frequencies is None:
        return None
    values = _with_at(draws, grid, frequencies)
    return _inverted(draws, grid, frequencies, values, (lowest, highest))


def _sum_of_first(positions: Ints, counts: Ints, n: int) -> int:
    """Sum of the first n units in the given order."""
    before = np.cumsum(counts) - counts
    return int(positions @ np.clip(n - before, 0, counts))


def _one_draw(draws: _Draws, grid: int) -> NDArray[np.complex128]:
    """Characteristic function of a single draw at the frequencies 0 .. grid/2."""
    mass = np.bincount(draws.positions % grid, weights=draws.counts, minlength=grid)
    forward: NDArray[np.complex128] = fft.rfft(mass / draws.size)
    return np.asarray(np.conj(forward), dtype=np.complex128)


def _lasting_without(draws: _Draws, grid: int) -> tuple[Ints, Floats, Floats] | None:
    """Frequencies that matter, the middle of the arc for each, and the arc's offsets.

    On the circle the modulus relative to t = 0, z > 0 is at most exp(-N pq (1 - |f(t)| cos a)),
    f being the characteristic function of one draw and a the angle from the middle of the arc;
    the wanted coefficient at t = 0 is at least 1/sqrt(8 N pq).
    """
    part = draws.n / draws.size
    spread = draws.size * part * (1 - part)
    margin = math.log(math.sqrt(max(8 * spread, 1.0)) / _NOTHING)
    one = _one_draw(draws, grid)
    kept = np.flatnonzero(_log_bound(draws, np.abs(one)) > math.log(_NOTHING))
    offsets = _arc(draws, spread, margin)
    if kept.size * offsets.size * draws.positions.size > _MOST_WORK:
        return None
    turn = 2 * math.pi / grid * (kept * draws.centre % grid)
    return kept, turn - np.angle(one[kept]), offsets


def _log_bound(draws: _Draws, modulus: Floats) -> Floats:
    """Logarithm of a bound for the characteristic function of the sum, given that of one draw.

    On a circle of radius r the generating function is at most (1 + r^2 + 2 r |f(t)|)^(N/2), as the
    logarithm is concave; the coefficient of z^n is at most that over r^n, for the best r.
    """
    n, left = draws.n, draws.size - draws.n
    slope = (left - n) * modulus
    radius = (np.sqrt(slope**2 + 4.0 * n * left) - slope) / (2 * left)
    samples = math.lgamma(n + left + 1) - math.lgamma(n + 1) - math.lgamma(left + 1)
    growth = 0.5 * draws.size * np.log1p(radius * (radius + 2 * modulus))
    return np.asarray(growth - n * np.log(radius) - samples, dtype=float)


def _arc(draws: _Draws, spread: float, margin: float) -> Floats:
    """Offsets of the points on the circle that are not negligible, from the middle of the arc.

    M equally spaced points mix the coefficient n with those at n - M, n + M and so on. Their share
    is bounded by Bernstein's inequality for the number of successes (variance ``spread``).
    """
    reach = margin + math.log(2)
    enough = math.ceil(reach / 3 + math.sqrt(reach**2 / 9 + 2 * reach * spread))
    points = min(enough, max(draws.n, draws.size - draws.n) + 1)
    if margin < spread:
        half = math.ceil(math.acos(1 - margin / spread) * points / (2 * math.pi))
        if 2 * half + 1 < points:
            return 2 * math.pi * np.arange(-half, half + 1) / points
    return 2 * math.pi * np.arange(points) / points


def _without_at(
    draws: _Draws, grid: int, kept: Ints, middles: Floats, offsets: Floats
) -> NDArray[np.complex128]:
    """Characteristic function of the centred sum at the frequencies kept."""
    values = np.empty(kept.size, dtype=np.complex128)
    step = max(1, _CHUNK // (offsets.size * draws.positions.size))
    for start in range(0, kept.size, step):
        chunk = slice(start, start + step)
        values[chunk] = _arc_sums(draws, grid, kept[chunk], middles[chunk], offsets)
    values /= values[0].real  # the frequency 0 is always kept
    return values


def _arc_sums(
    draws: _Draws, grid: int, kept: Ints, middles: Floats, offsets: Floats
) -> NDArray[np.complex128]:
    """Sum over the arc of z^-n prod_k (q + p z e^(itv_k))^(N_k), as phases and moduli.

    Each factor is written e^(ip a) (q e^(-ip a) + p e^(iq a)), a its angle within -pi..pi: the
    second part is near 1 and keeps its digits, the first parts add up to whole turns that are
    counted in whole numbers.
    """
    n, size, counts = draws.n, draws.size, draws.counts
    p, q = n / size, (size - n) / size
    residues = _residues(draws, grid, kept)
    angles = (
        middles[:, None, None]
        + offsets[None, :, None]
        + (2 * math.pi / grid) * residues[:, None, :]
    )
    turns = np.rint(angles / (2 * math.pi))
    angles -= 2 * math.pi * turns
    wrapped = (turns @ counts).astype(np.int64) % size
    bend = p * _sine_excess(q * angles) - q * _sine_excess(p * angles)
    level = 1 - 2 * q * np.sin(p / 2 * angles) ** 2 - 2 * p * np.sin(q / 2 * angles) ** 2
    with np.errstate(divide="ignore"):
        decay = 0.5 * (np.log1p(-4 * p * q * np.sin(angles / 2) ** 2) @ counts)
    phase = np.arctan2(bend, level) @ counts - 2 * math.pi * (n * wrapped % size) / size
    phase += _drift(draws, grid, residues)[:, None]
    return np.asarray((np.exp(decay) * np.exp(1j * phase)).sum(axis=1), dtype=np.complex128)


def _lasting_with(draws: _Draws, grid: int) -> Ints | None:
    """Frequencies at which the n-th power is not negligible."""
    modulus = np.abs(_one_draw(draws, grid))
    kept = np.flatnonzero(modulus > _NOTHING ** (1 / draws.n))
    return None if kept.size * draws.positions.size > _MOST_WORK else kept


def _with_at(draws: _Draws, grid: int, kept: Ints) -> NDArray[np.complex128]:
    """Characteristic function of the centred sum of n independent draws."""
    values = np.empty(kept.size, dtype=np.complex128)
    step = max(1, _CHUNK // draws.positions.size)
    for start in range(0, kept.size, step):
        chunk = slice(start, start + step)
        values[chunk] = _power(draws, grid, kept[chunk])
    return values


def _power(draws: _Draws, grid: int, kept: Ints) -> NDArray[np.complex128]:
    """N-th power of the characteristic function of one draw, taken about its mean."""
    weights = draws.counts / draws.size
    residues = _residues(draws, grid, kept)
    means = (residues @ draws.counts) / draws.size
    angles = (2 * math.pi / grid) * (residues - means[:, None])
    drop = -2 * (np.sin(angles / 2) ** 2 @ weights)
    bend = _sine_excess(angles) @ weights  # the angles themselves add up to zero
    with np.errstate(divide="ignore"):
        decay = 0.5 * draws.n * np.log1p(np.maximum(2 * drop + drop**2 + bend**2, -1.0))
    phase = draws.n * np.arctan2(bend, 1 + drop) + _drift(draws, grid, residues)
    return np.asarray(np.exp(decay) * np.exp(1j * phase), dtype=np.complex128)


def _residues(draws: _Draws, grid: int, kept: Ints) -> Ints:
    """Frequency times centred position, in steps of a whole turn / grid, nearest to zero."""
    half = grid // 2
    product = kept[:, None] * (draws.positions - draws.centre)[None, :]
    return np.asarray((product + half) % grid - half, dtype=np.int64)


def _drift(draws: _Draws, grid: int, residues: Ints) -> Floats:
    """Phase of the mean of the sum: whole parts are reduced as whole numbers before the turn."""
    whole, rest = np.divmod(residues @ draws.counts, draws.size)
    turns = (draws.n * whole % grid) / grid + draws.n * (rest / draws.size) / grid
    return np.asarray(2 * math.pi * turns, dtype=float)


def _sine_excess(x: Floats) -> Floats:
    """Sin x - x without loss of digits near zero."""
    small = np.abs(x) < 0.5
    y = np.where(small, x, 0.0) ** 2
    series = np.ones_like(y)
    for factor in _TAYLOR[:0:-1]:
        series = 1 - y * factor * series
    return np.where(small, _TAYLOR[0] * x * y * series, np.sin(x) - x)


def _inverted(
    draws: _Draws,
    grid: int,
    kept: Ints,
    values: NDArray[np.complex128],
    ends: tuple[int, int],
) -> SumProbabilities:
    """Probabilities from the characteristic function of the centred sum."""
    spectrum = np.zeros(grid // 2 + 1, dtype=np.complex128)
    spectrum[kept] = np.conj(values)
    around = fft.irfft(spectrum, grid)
    lowest, highest = ends
    first = (lowest - draws.n * draws.centre) % grid
    probabilities = np.roll(around, -first)[: highest - lowest + 1]
    error = 3 * _NOTHING + _ROUNDING * 2 * float(np.abs(values).sum()) / grid
    noise = max(0.0, -float(probabilities.min()))  # what is negative is rounding, and so is as much
    return SumProbabilities(lowest, np.where(probabilities > noise, probabilities, 0.0), error)
