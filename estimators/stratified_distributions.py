"""Where the mean or the total of a stratified sample falls, in universes that are known."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from estimators.array_checks import as_count
from estimators.errors import InputError
from estimators.independent_sums import Part, sum_of_parts
from estimators.lattices import exact_lattice
from estimators.sampling_distributions import SamplingDistribution, mean_distribution
from estimators.universes import Universe

_MOST_POINTS = 200_000
_WORK = 2  # values x possible sums of all strata together, over most_points
_FEWEST_STEPS = 64  # over the range of the values of a stratum, at least


def stratified_mean_distribution(
    universes: Sequence[Universe],
    sample_sizes: Sequence[int],
    *,
    replacement: bool = False,
    most_points: int = _MOST_POINTS,
) -> SamplingDistribution:
    """Give the distribution of the stratified mean, the strata being drawn independently.

    Parameters
    ----------
    universes : (H,) sequence of Universe
        One for each stratum; none of them endless.
    sample_sizes : (H,) sequence of int
        Units drawn by simple random sampling from each.
    replacement : bool
        Whether a unit could be drawn more than once.
    most_points : int
        Possible sums to tell apart; where there are more, they are moved to a grid. The sums of a
        single stratum are limited too, the more its values differ, but to no fewer than 64 steps
        from its smallest value to the largest.

    Returns
    -------
    SamplingDistribution
        Of the sum over strata of (size of the stratum / size of the universe) x sample mean.
        Mean, standard deviation and skewness are in closed form. ``exact`` where the combinations
        of the strata are few enough to list or lie on a common lattice with at most
        ``most_points`` points. If not, each value is split between two neighbours on a grid of
        even spacing g, which keeps the mean and adds at most H g^2 / 4 to the variance. ``error``
        then bounds the error of every cumulative probability: the largest probability of as many
        neighbouring grid points as strata were moved (at many strata fewer, by Hoeffding's
        inequality), not counting samples that were not moved. Where a stratum alone has too many
        sums, its own estimated error comes on top, in quadrature over strata.

    Raises
    ------
    InputError
        If the two do not match, a stratum is endless, or a sample size is no whole number from 1
        to the size of its stratum (with replacement: 1 or more).

    References
    ----------
    Cochran, W. G. (1977). Sampling Techniques, 3rd ed., theorems 5.1 and 5.3 (mean and variance).
    Hoeffding, W. (1963). Journal of the American Statistical Association 58, 13-30, theorem 2.

    Examples
    --------
    >>> strata = [Universe([0, 1], [2, 2]), Universe([2, 4], [3, 1])]
    >>> distribution = stratified_mean_distribution(strata, [1, 1])
    >>> distribution.support.tolist()
    [1.0, 1.5, 2.0, 2.5]
    >>> distribution.probabilities.round(12).tolist()
    [0.375, 0.375, 0.125, 0.125]
    """
    sizes = _checked_sizes(universes, sample_sizes, replacement=replacement)
    if len(universes) == 1:
        return mean_distribution(
            universes[0], sizes[0], replacement=replacement, most_points=most_points
        )
    strata = [
        _stratum(universe, n, len(sizes), replacement=replacement, most_points=most_points)
        for universe, n in zip(universes, sizes, strict=True)
    ]
    return _combined(strata, most_points)


def stratified_total_distribution(
    universes: Sequence[Universe],
    sample_sizes: Sequence[int],
    *,
    replacement: bool = False,
    most_points: int = _MOST_POINTS,
) -> SamplingDistribution:
    """Give the distribution of the estimated total: size of the universe x stratified mean.

    Parameters
    ----------
    universes, sample_sizes, replacement, most_points
        As for :func:`stratified_mean_distribution`.

    Returns
    -------
    SamplingDistribution
        In the unit of the values, summed over the universe.

    Raises
    ------
    InputError
        As for :func:`stratified_mean_distribution`.
    """
    means = stratified_mean_distribution(
        universes, sample_sizes, replacement=replacement, most_points=most_points
    )
    size = sum(universe.size for universe in universes)
    return SamplingDistribution(
        means.support * size,
        means.probabilities,
        means.mean * size,
        means.standard_deviation * size,
        means.skewness,
        means.exact,
        means.error,
    )


@dataclass(frozen=True, slots=True, eq=False)
class _Stratum:
    """The law of the mean of one stratum, its units, and the step between possible means."""

    law: SamplingDistribution
    size: int
    step: Fraction | None

    def part(self, whole: int) -> Part:
        """Its contribution to the stratified mean of a universe with so many units."""
        law, weight = self.law, Fraction(self.size, whole)
        step = None if self.step is None else self.step * weight
        return Part(
            law.support * float(weight),
            law.probabilities,
            step,
            law.exact,
            law.error if law.exact else 0.0,
        )


def _stratum(
    universe: Universe, n: int, strata: int, *, replacement: bool, most_points: int
) -> _Stratum:
    quick = _WORK * most_points // (strata * universe.values.size)
    points = max(min(quick, most_points), _FEWEST_STEPS * n + 1)
    law = mean_distribution(universe, n, replacement=replacement, most_points=points)
    return _Stratum(law, universe.size, _step_of_means(universe, n, law))


def _step_of_means(universe: Universe, n: int, law: SamplingDistribution) -> Fraction | None:
    """Step of which all differences between possible means of n units are multiples."""
    if not law.exact or law.support.size == 1:
        return None
    lattice = exact_lattice(universe)
    if lattice is None or not isinstance(lattice.step, int):
        return None
    return Fraction(lattice.step, n * lattice.scale)


def _combined(strata: Sequence[_Stratum], most_points: int) -> SamplingDistribution:
    whole = sum(stratum.size for stratum in strata)
    weights = [stratum.size / whole for stratum in strata]
    laws = [stratum.law for stratum in strata]
    spreads = [w * law.standard_deviation for w, law in zip(weights, laws, strict=True)]
    spread = math.sqrt(math.fsum(s * s for s in spreads))
    mean = math.fsum(w * law.mean for w, law in zip(weights, laws, strict=True))
    parts = [stratum.part(whole) for stratum in strata if stratum.law.support.size > 1]
    fixed = math.fsum(
        w * law.mean for w, law in zip(weights, laws, strict=True) if law.support.size == 1
    )
    if not parts:
        return SamplingDistribution(
            np.array([mean]), np.ones(1), mean, 0.0, math.nan, exact=True, error=0.0
        )
    found = sum_of_parts(parts, most_points=most_points)
    return SamplingDistribution(
        found.values + fixed,
        found.probabilities,
        mean,
        spread,
        _skewness(laws, spreads, spread),
        found.exact,
        found.error + _error_within(laws, spreads, spread),
    )


def _skewness(
    laws: Sequence[SamplingDistribution], spreads: Sequence[float], spread: float
) -> float:
    """Third central moments of independent parts add up."""
    pairs = zip(laws, spreads, strict=True)
    third = math.fsum(law.skewness * s**3 for law, s in pairs if not math.isnan(law.skewness))
    return third / spread**3


def _error_within(
    laws: Sequence[SamplingDistribution], spreads: Sequence[float], spread: float
) -> float:
    """Error of strata that are not exact: their independent small shifts, in quadrature."""
    pairs = zip(laws, spreads, strict=True)
    shifts = math.fsum((law.error * s) ** 2 for law, s in pairs if not law.exact)
    return math.sqrt(shifts) / spread


def _checked_sizes(
    universes: Sequence[Universe], sample_sizes: Sequence[int], *, replacement: bool
) -> list[int]:
    if not len(universes):
        raise InputError("universes", "no stratum", "must hold one or more", "give the strata")
    if len(sample_sizes) != len(universes):
        raise InputError(
            "sample_sizes",
            f"{len(sample_sizes)} numbers",
            f"must hold one for each of the {len(universes)} strata",
            "give as many as there are strata",
        )
    pairs = zip(universes, sample_sizes, strict=True)
    return [_checked_size(h, universe, n, replacement) for h, (universe, n) in enumerate(pairs)]


def _checked_size(h: int, universe: Universe, n: int, replacement: bool) -> int:
    if universe.endless:
        raise InputError(
            f"universes[{h}]",
            "an endless one",
            "must have a size, which is the weight of the stratum",
            "give the number of units in the stratum",
        )
    size = as_count(n, f"sample_sizes[{h}]")
    if size > universe.size and not replacement:
        raise InputError(
            f"sample_sizes[{h}]",
            size,
            f"must be at most the {universe.size} units of the stratum",
            "draw fewer, or draw with replacement",
        )
    return size
