"""How large a true difference must be to be found."""

from __future__ import annotations

import math
from numbers import Real

from scipy import optimize, special

from estimators.array_checks import as_confidence
from estimators.cautions import NO_VARIATION, NO_VARIATION_ON_ONE_SIDE
from estimators.errors import InputError
from estimators.linearized_differences import satterthwaite
from estimators.precision import t_quantile
from estimators.results import Estimate


def detectable_difference(
    first: Estimate | float,
    second: Estimate | float = 0.0,
    *,
    power: float = 0.8,
    confidence: float = 0.95,
    degrees_of_freedom: float | None = None,
) -> float:
    """Give the smallest true difference that a test finds with the power asked for.

    Parameters
    ----------
    first, second : Estimate or float
        Two figures of independent samples, or their standard errors. A :class:`Difference`, or
        its standard error, stands alone as ``first``: so for groups that overlap.
    power : float
        Chance that the test finds the difference; above half of 1 - confidence and below 1.
    confidence : float
        1 minus the level of the two-sided test.
    degrees_of_freedom : float, optional
        Behind the standard error of the difference; Satterthwaite's of the two figures when not
        given, infinite for plain standard errors.

    Returns
    -------
    float
        In the unit of the figures; 0 in a census, infinite without degrees of freedom, NaN where
        the answers behind a mean do not differ. A share that does not vary counts with the
        half-width of its interval over the t quantile.

    Raises
    ------
    InputError
        If a standard error is negative or not finite, or a level is out of range.

    References
    ----------
    Cohen, J. (1988). Statistical Power Analysis for the Behavioral Sciences, 2nd ed., chapter 2:
    (z of confidence + z of power) x standard error; with few degrees of freedom the noncentral t
    distribution. The chance to find a difference with the wrong sign does not count.

    Examples
    --------
    >>> round(detectable_difference(0.0158, 0.0158), 4)
    0.0626
    """
    level, chance = as_confidence(confidence), _checked_power(power, confidence)
    sides = _side(first, "first"), _side(second, "second")
    error = math.hypot(sides[0][0], sides[1][0])
    df = satterthwaite([e**2 for e, _ in sides], [d for _, d in sides])
    if degrees_of_freedom is not None:
        df = _checked_degrees(degrees_of_freedom)
    if df <= 0:
        return math.inf
    if error == 0 or math.isnan(error):
        return error
    return error * _noncentrality(df, level, chance)


def _noncentrality(degrees_of_freedom: float, confidence: float, power: float) -> float:
    """Return the standard errors by which a true difference must exceed zero."""
    limit = t_quantile(degrees_of_freedom, confidence)
    if math.isinf(degrees_of_freedom):
        return limit + float(special.ndtri(power))

    def too_weak(shift: float) -> float:
        return float(special.nctdtr(degrees_of_freedom, shift, limit)) - (1 - power)

    highest = 2.0 * limit + 2.0
    while too_weak(highest) > 0:
        highest *= 2
    return float(optimize.brentq(too_weak, 0.0, highest, xtol=1e-13))


def _side(figure: Estimate | float, name: str) -> tuple[float, float]:
    """Return standard error and degrees of freedom of one figure."""
    if isinstance(figure, Estimate):
        return _standard_error(figure), figure.degrees_of_freedom
    if isinstance(figure, Real) and 0 <= figure < math.inf:
        return float(figure), math.inf
    raise InputError(
        name,
        repr(figure),
        "must be an estimate or a standard error, finite and not negative",
        "pass what mean or proportion gave back",
    )


def _standard_error(figure: Estimate) -> float:
    """Return the standard error, or what the interval of a share that does not vary is worth."""
    still = {NO_VARIATION.code, NO_VARIATION_ON_ONE_SIDE.code}
    if still.isdisjoint(note.code for note in figure.cautions):
        return figure.standard_error
    if figure.degrees_of_freedom <= 0 or not figure.half_width > 0:
        return math.nan
    quantile = t_quantile(figure.degrees_of_freedom, figure.interval.confidence)
    return figure.half_width / quantile


def _checked_power(power: float, confidence: float) -> float:
    if isinstance(power, Real) and (1 - confidence) / 2 < power < 1:
        return float(power)
    raise InputError(
        "power",
        power,
        "must lie below 1 and above half of 1 - confidence",
        "write 80 percent as 0.8",
    )


def _checked_degrees(degrees_of_freedom: float) -> float:
    if isinstance(degrees_of_freedom, Real) and degrees_of_freedom >= 0:
        return float(degrees_of_freedom)
    raise InputError(
        "degrees_of_freedom",
        degrees_of_freedom,
        "must not be negative",
        "use the number of clusters minus the number of strata",
    )
