"""How often an interval covers the truth when the survey is repeated.

Shares are worked out exactly, by adding up the probabilities of all counts whose interval covers.
Means are simulated, as their intervals depend on every answer.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.array_checks import Floats, as_confidence, as_count
from estimators.errors import InputError
from estimators.interval_checks import sampling_fraction
from estimators.proportion_intervals import share_bounds
from estimators.repeated_samples import repeat_samples
from estimators.share_evidence import ShareEvidence
from estimators.skewed_mean_intervals import check_mean_method, standard_bounds
from estimators.universes import Universe

_REACH = 4.5  # counts further than this many roots of n from their mean: below 1e-17 in all
_TOUCHING = 1e-12  # a bound this close to the truth covers it


def proportion_coverage(
    method: str,
    n: int,
    proportion: float,
    *,
    population_size: int | None = None,
    replacement: bool = False,
    confidence: float = 0.95,
) -> float:
    """Give the chance that the interval of a share covers the true share: exact, not simulated.

    Parameters
    ----------
    method : str
        As for :func:`estimators.proportion_intervals.proportion_interval`, whose intervals these
        are.
    n : int
        Answers of a simple random sample.
    proportion : float
        True share, 0 to 1. In a universe of N units it can only be a whole number of units:
        ``round(N * proportion)`` of them have the property, and their part of N is the truth.
    population_size : int, optional
        Units in the universe; None for an endless one. Counts are then hypergeometric, otherwise
        (and with replacement) binomial.
    replacement : bool
        Whether a unit could be drawn more than once.
    confidence : float
        Nominal level, between 0 and 1.

    Returns
    -------
    float
        Probability, 0 to 1, with an absolute error of about 1e-14.

    Raises
    ------
    InputError
        If an argument cannot be right; the message says which and what to do.

    References
    ----------
    Brown, L. D., Cai, T. T., DasGupta, A. (2001). Statistical Science 16, 101-133, section 2.
    Hoeffding, W. (1963). Journal of the American Statistical Association 58, 13-30, theorems 1
    and 4 (counts too far off to matter, with and without replacement).

    Examples
    --------
    >>> round(proportion_coverage("wald", 30, 0.2), 3)
    0.946
    >>> round(proportion_coverage("wilson", 30, 0.2), 3)
    0.964
    """
    coverages = proportion_coverages(
        method,
        n,
        [proportion],
        population_size=population_size,
        replacement=replacement,
        confidence=confidence,
    )
    return float(coverages[0])


def proportion_coverages(
    method: str,
    n: int,
    proportions: ArrayLike,
    *,
    population_size: int | None = None,
    replacement: bool = False,
    confidence: float = 0.95,
) -> Floats:
    """Give the coverage at many true shares at once; see :func:`proportion_coverage`.

    Parameters
    ----------
    proportions : (m,) array_like of float
        True shares, 0 to 1.
    method, n, population_size, replacement, confidence
        As for :func:`proportion_coverage`.

    Returns
    -------
    (m,) float
        Probability at each share.

    Raises
    ------
    InputError
        As for :func:`proportion_coverage`.
    """
    n = as_count(n, "n")
    level = as_confidence(confidence)
    fraction = sampling_fraction(n, population_size, replacement=replacement)
    truths = _true_shares(proportions, population_size)
    first, last = _likely(n, float(truths.min()))[0], _likely(n, float(truths.max()))[1]
    units = None if replacement else population_size
    low, high = _bounds_of_counts(method, (first, last, n), fraction, units, level)
    coverages = np.empty(truths.size)
    for place, truth in enumerate(truths):
        lowest, chances = _chances(n, float(truth), units)
        covers = slice(lowest - first, lowest - first + chances.size)
        reached = (low[covers] <= truth + _TOUCHING) & (truth - _TOUCHING <= high[covers])
        coverages[place] = min(float(chances[reached].sum()), 1.0)
    return coverages


def mean_coverage(
    universe: Universe,
    n: int,
    *,
    replacement: bool = False,
    confidence: float = 0.95,
    repetitions: int = 10_000,
    seed: int = 0,
    method: str = "t",
) -> float:
    """Estimate by simulation how often the interval of a mean covers the mean of the universe.

    Parameters
    ----------
    universe : Universe
        Values and how many units have each.
    n : int
        Answers of a simple random sample.
    replacement : bool
        Whether a unit could be drawn more than once.
    confidence : float
        Nominal level, between 0 and 1.
    repetitions : int
        Simulated surveys; :func:`simulation_error` says how far they leave the result uncertain.
    seed : int
        Of the random numbers: the same seed gives the same result.
    method : str
        t, johnson or hall.

    Returns
    -------
    float
        Part of the simulated surveys whose interval covers, 0 to 1.

    Raises
    ------
    InputError
        If a number is not whole, n exceeds the universe without replacement, the method is
        unknown, or an endless universe is to be drawn from without replacement.

    References
    ----------
    Cochran, W. G. (1977). Sampling Techniques, 3rd ed., section 2.15.

    Examples
    --------
    >>> universe = Universe([0, 1, 50], [600, 300, 100])
    >>> coverage = mean_coverage(universe, 20)
    >>> round(coverage, 2), round(simulation_error(coverage), 3)
    (0.88, 0.003)
    """
    check_mean_method(method)
    level = as_confidence(confidence)
    samples = repeat_samples(
        universe, n, replacement=replacement, repetitions=repetitions, seed=seed
    )
    fraction = 0.0 if replacement else n / universe.size
    if n == 1 or fraction == 1:  # an interval without bounds, or no error at all
        return 1.0
    errors = samples.standard_deviations * math.sqrt((1 - fraction) / n)
    low, high = standard_bounds(samples.skewness, n, fraction, confidence=level, method=method)
    above = samples.deviations + low * errors <= _TOUCHING
    below = samples.deviations + high * errors >= -_TOUCHING
    return float(np.mean(above & below))


def simulation_error(coverage: float, repetitions: int = 10_000) -> float:
    """Give the standard error of a simulated coverage.

    Parameters
    ----------
    coverage : float
        Part of the simulated surveys that covered, 0 to 1.
    repetitions : int
        Simulated surveys.

    Returns
    -------
    float
        sqrt(c (1 - c) / r) at c = (covered + 2) / (r + 4), so that it is not 0 where all covered.

    Raises
    ------
    InputError
        If coverage does not lie in 0 to 1, or repetitions is no whole number of 1 or more.

    References
    ----------
    Agresti, A., Coull, B. A. (1998). The American Statistician 52, 119-126 (two added of each).
    """
    rounds = as_count(repetitions, "repetitions")
    if not 0 <= coverage <= 1:
        raise InputError("coverage", coverage, "must lie in 0 to 1", "write 95 percent as 0.95")
    share = (coverage * rounds + 2) / (rounds + 4)
    return math.sqrt(share * (1 - share) / rounds)


def _true_shares(proportions: ArrayLike, population_size: int | None) -> Floats:
    """Shares as a universe of that many units can have them."""
    given = np.asarray(proportions, dtype=float)
    wrong = ~((given >= 0) & (given <= 1))
    if given.ndim != 1 or given.size == 0 or wrong.any():
        raise InputError(
            "proportion",
            given[wrong][0] if wrong.any() else f"shape {given.shape}",
            "must lie in 0 to 1",
            "write 30 percent as 0.3",
        )
    return given if population_size is None else np.rint(given * population_size) / population_size


def _likely(n: int, share: float) -> tuple[int, int]:
    """First and last count that matter."""
    reach = _REACH * math.sqrt(n)
    return max(0, math.floor(n * share - reach)), min(n, math.ceil(n * share + reach))


def _bounds_of_counts(
    method: str,
    counts: tuple[int, int, int],
    fraction: float,
    units: int | None,
    confidence: float,
) -> tuple[Floats, Floats]:
    """Bounds of the counts first to last of n, as ``proportion_interval`` gives them one by one."""
    first, last, n = counts
    evidence = ShareEvidence(
        share=np.arange(first, last + 1) / n,
        base=n,
        equivalent_base=n / (1 - fraction) if fraction < 1 else math.inf,
        sampling_fraction=fraction,
        degrees_of_freedom=n - 1.0,
        universe=math.nan if units is None else units,
        simple_random=units is not None,
    )
    return share_bounds(evidence, method=method, confidence=confidence)


def _chances(n: int, share: float, units: int | None) -> tuple[int, Floats]:
    """Lowest likely count, and the probabilities of it and of those that follow.

    From the most probable count outwards each is its neighbour times a ratio: no logarithm of a
    large factorial takes digits away.
    """
    lowest, highest = _likely(n, share)
    yes = n * share if units is None else share * units
    if units is not None:
        yes = round(yes)
        lowest, highest = max(lowest, n - (units - yes)), min(highest, yes)
    elif share in (0.0, 1.0):
        lowest = highest = round(yes)
    if lowest == highest:
        return lowest, np.ones(1)
    ratios = _ratios(np.arange(lowest, highest, dtype=float), n, share, units)
    top = int(np.count_nonzero(ratios >= 1))
    chances = np.ones(ratios.size + 1)
    chances[top + 1 :] = np.cumprod(ratios[top:])
    chances[:top] = np.cumprod(1 / ratios[:top][::-1])[::-1]
    return lowest, chances / chances.sum()


def _ratios(counts: Floats, n: int, share: float, units: int | None) -> NDArray[np.float64]:
    """Probability of the next count over that of each: binomial or hypergeometric."""
    if units is None:
        return (n - counts) * share / ((counts + 1) * (1 - share))
    yes = round(share * units)
    return (yes - counts) * (n - counts) / ((counts + 1) * (units - yes - n + counts + 1))
