"""The t interval of a mean from a summary: mean, standard deviation and number of answers."""

from __future__ import annotations

import math

from scipy import special

from estimators.array_checks import as_confidence, as_count
from estimators.errors import InputError
from estimators.interval_checks import sampling_fraction
from estimators.results import Interval


def mean_interval(
    mean: float,
    standard_deviation: float,
    n: int,
    *,
    confidence: float = 0.95,
    population_size: int | None = None,
    replacement: bool = False,
) -> Interval:
    """Give the confidence interval of the mean of a simple random sample.

    Parameters
    ----------
    mean : float
        Mean of the n answers.
    standard_deviation : float
        Of the n answers, with divisor n - 1, in the unit of the mean; not used where n is 1.
    n : int
        Answers.
    confidence : float
        Between 0 and 1.
    population_size : int, optional
        Units in the universe; None for an endless one.
    replacement : bool
        Whether a unit could be drawn more than once; then the universe's size does not matter.

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
    Student (1908). Biometrika 6, 1-25.
    Cochran, W. G. (1977). Sampling Techniques, 3rd ed., equations 2.22 and 2.23 (finite universe).

    Examples
    --------
    >>> interval = mean_interval(7.4, 2.0, 400, population_size=1000)
    >>> round(interval.low, 3), round(interval.high, 3)
    (7.248, 7.552)
    """
    answers = as_count(n, "n")
    level = as_confidence(confidence)
    _check_answers(mean, standard_deviation, answers)
    fraction = sampling_fraction(answers, population_size, replacement=replacement)
    half = _half_width(standard_deviation, answers, fraction, level)
    return Interval(float(mean) - half, float(mean) + half, level, "t")


def _half_width(deviation: float, n: int, fraction: float, confidence: float) -> float:
    """T quantile x s sqrt((1-f)/n); zero in a census, endless without degrees of freedom."""
    if fraction >= 1:
        return 0.0
    if n == 1:
        return math.inf
    quantile = float(special.stdtrit(n - 1, (1 + confidence) / 2))
    return quantile * float(deviation) * math.sqrt((1 - fraction) / n)


def _check_answers(mean: float, deviation: float, n: int) -> None:
    if not math.isfinite(mean):
        raise InputError("mean", mean, "must be a number", "give the mean of the answers")
    if n > 1 and not (math.isfinite(deviation) and deviation >= 0):
        raise InputError(
            "standard_deviation",
            deviation,
            "must be a number that is not negative",
            "give the standard deviation of the answers",
        )
