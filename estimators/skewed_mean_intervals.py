"""Intervals for the mean of skewed answers, such as yearly spends, beside the t interval.

A few large answers pull the mean and the standard deviation up together, so that the t interval of
a sample without them is too low and too short at once. The methods here move and stretch it.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from estimators.array_checks import Floats, as_confidence, as_count, numbers_of_base
from estimators.cautions import SKEWED_ANSWERS
from estimators.errors import InputError
from estimators.interval_checks import sampling_fraction
from estimators.mean_intervals import mean_interval
from estimators.repeated_samples import repeat_samples
from estimators.results import Caution, Interval
from estimators.universes import plug_in_universe

MEAN_METHODS = ("t", "johnson", "hall")

_COCHRAN = 25  # answers for each unit of squared skewness
_FOR_SKEWNESS = 3  # answers
_FLAT = 1e-9  # a curvature this small is none


def skewed_mean_interval(  # noqa: PLR0913 - the figures of one mean, all but four with a default
    mean: float,
    standard_deviation: float,
    skewness: float,
    n: int,
    *,
    method: str = "hall",
    confidence: float = 0.95,
    population_size: int | None = None,
    replacement: bool = False,
) -> Interval:
    """Give the interval of the mean of a simple random sample, corrected for skewness.

    Parameters
    ----------
    mean : float
        Mean of the n answers.
    standard_deviation : float
        Of the n answers, with divisor n - 1, in the unit of the mean.
    skewness : float
        Of the n answers; :func:`sample_skewness` gives it. Not used where n is below 3.
    n : int
        Answers.
    method : str
        "johnson" moves the t interval by skewness x s (1 - 2f) / (6n): about a ninth of what the
        skewness of the answers does at 95 percent. "hall" takes away all of it, to the order of
        1/n, by a transformation that can always be undone; its far arm is the longer one. "t"
        corrects nothing.
    confidence : float
        Between 0 and 1.
    population_size : int, optional
        Units in the universe, f = n / N; None for an endless one.
    replacement : bool
        Whether a unit could be drawn more than once; then f = 0.

    Returns
    -------
    Interval
        Without bounds where n is 1, unless that one unit is the whole universe.

    Raises
    ------
    InputError
        If an argument cannot be right; the message says which and what to do.

    References
    ----------
    Johnson, N. J. (1978). Modified t tests and confidence intervals for asymmetrical populations.
    Journal of the American Statistical Association 73, 536-544.
    Hall, P. (1992). On the removal of skewness by transformation. Journal of the Royal Statistical
    Society B 54, 221-228.
    Sugden, R. A., Smith, T. M. F., Jones, R. P. (2000). Journal of the Royal Statistical Society
    B 62, 787-793 (the expansion of the studentised mean without replacement).

    Examples
    --------
    >>> interval = skewed_mean_interval(420.0, 610.0, 3.1, 90, population_size=1184)
    >>> round(interval.low), round(interval.high)
    (319, 593)
    """
    check_mean_method(method)
    plain = mean_interval(
        mean,
        standard_deviation,
        n,
        confidence=confidence,
        population_size=population_size,
        replacement=replacement,
    )
    if method == "t" or n < _FOR_SKEWNESS or plain.half_width == 0:
        return Interval(plain.low, plain.high, plain.confidence, method)
    if not math.isfinite(skewness):
        raise InputError(
            "skewness", skewness, "must be a number", "give the skewness of the answers"
        )
    fraction = sampling_fraction(n, population_size, replacement=replacement)
    error = standard_deviation * math.sqrt((1 - fraction) / n)
    low, high = standard_bounds(skewness, n, fraction, confidence=plain.confidence, method=method)
    return Interval(float(mean + low * error), float(mean + high * error), plain.confidence, method)


def bootstrap_t_interval(
    values: ArrayLike,
    *,
    confidence: float = 0.95,
    population_size: int | None = None,
    replacement: bool = False,
    repetitions: int = 9_999,
    seed: int = 0,
) -> Interval:
    """Give the bootstrap-t interval of the mean of a simple random sample.

    The survey is repeated in the universe that looks like the sample
    (:func:`estimators.universes.plug_in_universe`); what (mean - truth) / standard deviation does
    there takes the place of the t distribution. With a known universe the repeats are drawn
    without replacement from N units, and that is the whole finite correction: the factor
    sqrt((1 - n/N) / n) of a standard error is the same in repeats and sample and cancels.

    Parameters
    ----------
    values : (n,) array_like of float
        Answers.
    confidence : float
        Between 0 and 1.
    population_size : int, optional
        Units in the universe; None for an endless one.
    replacement : bool
        Whether a unit could be drawn more than once; then the universe's size does not matter.
    repetitions : int
        Repeats; at least 2 / (1 - confidence).
    seed : int
        Of the random numbers: the same seed gives the same interval.

    Returns
    -------
    Interval
        A side without bound where too many repeats would see no variation, both where n is 1; of
        zero width where the answers do not differ.

    Raises
    ------
    InputError
        If an answer is no number, the repetitions are too few for the confidence, or the universe
        is smaller than the sample.

    References
    ----------
    Efron, B., Tibshirani, R. J. (1993). An Introduction to the Bootstrap, section 12.5.
    Davison, A. C., Hinkley, D. V. (1997). Bootstrap Methods and their Application, sections 2.4
    (order statistics) and 3.7 (finite universes).
    Booth, J. G., Butler, R. W., Hall, P. (1994). Journal of the American Statistical Association
    89, 1282-1289.
    """
    answers = numbers_of_base(values, "values", np.size(values), None)
    level, n = as_confidence(confidence), as_count(answers.size, "number of values")
    fraction = sampling_fraction(n, population_size, replacement=replacement)
    rank = _rank(as_count(repetitions, "repetitions"), level)
    centre = float(answers.mean())
    if n == 1 or fraction == 1 or np.ptp(answers) == 0:
        half = math.inf if n == 1 and fraction < 1 else 0.0
        return Interval(centre - half, centre + half, level, "bootstrap_t")
    units = None if replacement else population_size
    samples = repeat_samples(
        plug_in_universe(answers, units),
        n,
        replacement=units is None,
        repetitions=repetitions,
        seed=seed,
    )
    ratios = np.sort(_studentised(samples.deviations, samples.standard_deviations))
    deviation = float(answers.std(ddof=1))
    low, high = centre - ratios[-rank] * deviation, centre - ratios[rank - 1] * deviation
    return Interval(float(low), float(high), level, "bootstrap_t")


def sample_skewness(values: ArrayLike) -> float:
    """Give the skewness of answers: third k-statistic over the cubed standard deviation.

    Parameters
    ----------
    values : (n,) array_like of float
        Answers.

    Returns
    -------
    float
        Positive where a few answers are far above the others; NaN for fewer than 3 answers, and
        where they do not differ.

    Raises
    ------
    InputError
        If an answer is no number.

    References
    ----------
    Fisher, R. A. (1930). Proceedings of the Royal Society of London A 130, 16-28.
    """
    answers = numbers_of_base(values, "values", np.size(values), None)
    n = answers.size
    if n < _FOR_SKEWNESS or np.ptp(answers) == 0:
        return math.nan
    scaled = (answers - answers.mean()) / np.ptp(answers)
    spread = float(scaled @ scaled) / (n - 1)
    return float((scaled**3).sum()) * n / ((n - 1) * (n - 2)) / math.sqrt(spread) ** 3


def skewness_caution(values: ArrayLike) -> Caution | None:
    """Say whether there are fewer answers than 25 times their squared skewness.

    Parameters
    ----------
    values : (n,) array_like of float
        Answers behind a mean or a total, not only zeros and ones.

    Returns
    -------
    Caution or None
        "skewed_answers" where the t interval cannot be relied on; None otherwise, and where the
        answers do not differ or are fewer than 3, so that no skewness can be told.

    Raises
    ------
    InputError
        If an answer is no number.

    References
    ----------
    Cochran, W. G. (1977). Sampling Techniques, 3rd ed., section 2.15.
    """
    skewness = sample_skewness(values)
    return SKEWED_ANSWERS if np.size(values) < _COCHRAN * skewness**2 else None


def standard_bounds(
    skewness: float | Floats, n: int, fraction: float, *, confidence: float, method: str
) -> tuple[Floats, Floats]:
    """Give the bounds of a mean in standard errors, counted from the mean.

    Parameters
    ----------
    skewness : float or (m,) float
        Of the answers.
    n : int
        Answers, 2 or more.
    fraction : float
        Part of the universe that was drawn, below 1.
    confidence : float
        Between 0 and 1.
    method : str
        A name in ``MEAN_METHODS``.

    Returns
    -------
    tuple of (low, high)
        In the shape of ``skewness``.
    """
    quantile = float(special.stdtrit(n - 1, (1 + confidence) / 2))
    lean = np.asarray(skewness, dtype=float) / (6 * math.sqrt(n * (1 - fraction)))
    shift = lean * (1 - 2 * fraction)
    if method == "t":
        return np.full(lean.shape, -quantile), np.full(lean.shape, quantile)
    if method == "johnson":
        return shift - quantile, shift + quantile
    curve = lean * (2 - fraction)
    return -_untransformed(quantile - shift, curve), -_untransformed(-quantile - shift, curve)


def check_mean_method(method: str) -> None:
    """Refuse a method that does not exist, by name."""
    if method not in MEAN_METHODS:
        raise InputError(
            "method",
            repr(method),
            "must be the name of a method for means",
            "choose one of " + ", ".join(MEAN_METHODS),
        )


def _untransformed(wanted: Floats, curve: Floats) -> Floats:
    """T at which T + c T^2 + c^2 T^3 / 3 is what is wanted (Hall 1992, section 2)."""
    bent = np.where(np.abs(curve) > _FLAT, curve, 1.0)
    return np.where(bent == curve, (np.cbrt(1 + 3 * bent * wanted) - 1) / bent, wanted)


def _studentised(deviations: Floats, spreads: Floats) -> NDArray[np.float64]:
    """Deviations over standard deviations; endless where a sample does not vary but is off."""
    varies = spreads > 0
    ratios = np.where(np.abs(deviations) > _FLAT, np.copysign(np.inf, deviations), 0.0)
    ratios[varies] = deviations[varies] / spreads[varies]
    return ratios


def _rank(repetitions: int, confidence: float) -> int:
    """Order statistic at half of the rest, counted from either end."""
    rank = math.floor((repetitions + 1) * (1 - confidence) / 2 + _FLAT)
    if rank < 1:
        raise InputError(
            "repetitions",
            repetitions,
            f"must be at least 2 / (1 - confidence), here {math.ceil(2 / (1 - confidence))}",
            "repeat more often",
        )
    return rank
