"""From the variance of a difference to what is said about it: interval, test, cautions."""

from __future__ import annotations

import math

from scipy import special

from estimators import cautions as caution
from estimators.precision import t_interval
from estimators.results import Caution, Difference, Interval


def difference_with_t(
    value: float,
    variance: float,
    degrees_of_freedom: float,
    confidence: float,
    counts: tuple[int, float],
    design_effect: float,
    cautions: tuple[Caution, ...],
) -> Difference:
    """Put together a difference with a t interval and a t test.

    Parameters
    ----------
    value, variance, degrees_of_freedom : float
        The difference and what is known of its error.
    confidence : float
        Between 0 and 1.
    counts : tuple of (int, float)
        Rows behind it and their weights.
    design_effect : float
        Against simple random sampling; NaN where it cannot be said.
    cautions : tuple of Caution
        Of the sample and both sides.
    """
    if degrees_of_freedom <= 0 and not variance > 0:
        variance = math.nan
    error = math.sqrt(variance) if variance >= 0 else math.nan
    none = (caution.NO_DEGREES_OF_FREEDOM,) if degrees_of_freedom <= 0 else ()
    return Difference(
        value=value,
        standard_error=error,
        interval=t_interval(value, error, degrees_of_freedom, confidence),
        degrees_of_freedom=degrees_of_freedom,
        base=counts[0],
        weighted_base=counts[1],
        design_effect=design_effect,
        effective_base=math.nan,
        equivalent_base=math.nan,
        cautions=merged(cautions, none),
        p_value=_p_value(value, error, degrees_of_freedom),
    )


def no_difference(
    counts: tuple[int, float], confidence: float, cautions: tuple[Caution, ...]
) -> Difference:
    """Return the difference of which one side has no figure: not a number."""
    nan = math.nan
    return Difference(
        value=nan,
        standard_error=nan,
        interval=Interval(nan, nan, confidence, "t"),
        degrees_of_freedom=nan,
        base=counts[0],
        weighted_base=counts[1],
        design_effect=nan,
        effective_base=nan,
        equivalent_base=nan,
        cautions=cautions,
        p_value=nan,
    )


def merged(*groups: tuple[Caution, ...]) -> tuple[Caution, ...]:
    """Join groups of cautions, each kind once."""
    kinds: dict[str, Caution] = {}
    for note in (note for group in groups for note in group):
        kinds.setdefault(note.code, note)
    return tuple(kinds.values())


def of_one_side(notes: tuple[Caution, ...]) -> tuple[Caution, ...]:
    """Say of one side of the difference what was said of a figure by itself."""
    one = caution.NO_VARIATION_ON_ONE_SIDE
    return tuple(one if note == caution.NO_VARIATION else note for note in notes)


def _p_value(value: float, error: float, degrees_of_freedom: float) -> float:
    """Two-sided p-value of the t test."""
    if degrees_of_freedom <= 0 or math.isnan(error):
        return math.nan
    if error == 0:
        return 1.0 if value == 0 else 0.0
    t = -abs(value) / error
    below = (
        special.ndtr(t) if math.isinf(degrees_of_freedom) else special.stdtr(degrees_of_freedom, t)
    )
    return float(2 * below)
