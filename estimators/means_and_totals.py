"""Means, totals and ratios of everyone or of a subgroup."""

from __future__ import annotations

import math

from numpy.typing import ArrayLike

from estimators import cautions as caution
from estimators.array_checks import Floats, as_confidence, numbers_of_base
from estimators.errors import InputError
from estimators.linearized_values import (
    AnsweredBase,
    answered_base,
    mean_in_base,
    residuals_of_mean,
    variance_of_mean,
    variance_of_total,
)
from estimators.precision import (
    empty_estimate,
    estimate_with_t,
    precision_of_mean,
    precision_of_total,
    weighted_spread,
)
from estimators.results import Estimate
from estimators.sample_designs import SampleDesign


def mean(
    values: ArrayLike,
    design: SampleDesign,
    *,
    where: ArrayLike | None = None,
    answered: ArrayLike | None = None,
    confidence: float = 0.95,
) -> Estimate:
    """Estimate the mean of everyone or of a subgroup.

    Parameters
    ----------
    values : (n,) float
        Answers; what stands outside the base does not matter.
    design : SampleDesign
        How the n rows were drawn.
    where : (n,) bool, optional
        Who the figure is about.
    answered : (n,) bool, optional
        Who of them gave an answer. The others are taken to be like those who did, within their
        stratum, or within their cluster where clusters were drawn and no weights are given.
    confidence : float
        Between 0 and 1.

    Returns
    -------
    Estimate
        In the unit of the values, with a t interval. NaN where nobody answered.

    Raises
    ------
    InputError
        If arrays do not fit the design or a value inside the base is not a finite number.

    References
    ----------
    Woodruff, R. S. (1971). Journal of the American Statistical Association 66, 411-414.
    Särndal, C.-E., Swensson, B., Wretman, J. (1992). Model Assisted Survey Sampling, section 5.8.
    """
    numbers, base, level = _checked(values, design, where, answered, confidence)
    if base.rows == 0:
        return empty_estimate(base, level, "t")
    value = mean_in_base(numbers, base)
    residuals = residuals_of_mean(numbers, value, base)
    variance = variance_of_mean(residuals, base)
    precision = precision_of_mean(variance, weighted_spread(residuals, value, base), base)
    df = base.counts.degrees_of_freedom
    return estimate_with_t(value, variance, df, precision, base, level)


def total(
    values: ArrayLike,
    design: SampleDesign,
    *,
    where: ArrayLike | None = None,
    answered: ArrayLike | None = None,
    confidence: float = 0.95,
) -> Estimate:
    """Estimate the total over the universe, or over all its members of a subgroup.

    Parameters
    ----------
    values, design, where, answered, confidence
        As for :func:`mean`.

    Returns
    -------
    Estimate
        Estimated size of the base times its mean, with a t interval. NaN where nobody answered.

    Raises
    ------
    InputError
        As for :func:`mean`, and where the design does not say how large the universe is.

    References
    ----------
    Cochran, W. G. (1977). Sampling Techniques, 3rd ed., sections 2.13 and 5A.14 (subgroups).
    """
    _refuse_unknown_universe(design)
    numbers, base, level = _checked(values, design, where, answered, confidence)
    if base.rows == 0:
        return empty_estimate(base, level, "t")
    average = mean_in_base(numbers, base)
    residuals = residuals_of_mean(numbers, average, base)
    variance = variance_of_total(residuals, average, base)
    precision = precision_of_total(variance, numbers, base)
    df = base.counts.degrees_of_freedom_of_totals
    return estimate_with_t(base.size * average, variance, df, precision, base, level)


def ratio(
    numerator: ArrayLike,
    denominator: ArrayLike,
    design: SampleDesign,
    *,
    where: ArrayLike | None = None,
    answered: ArrayLike | None = None,
    confidence: float = 0.95,
) -> Estimate:
    """Estimate the ratio of two totals, such as spend per visit.

    Parameters
    ----------
    numerator, denominator : (n,) float
        Two answers of each row; one row counts when it gave both.
    design, where, answered, confidence
        As for :func:`mean`.

    Returns
    -------
    Estimate
        Numerator per unit of the denominator, with a t interval. NaN where nobody answered or
        the denominator adds up to zero.

    Raises
    ------
    InputError
        As for :func:`mean`.

    References
    ----------
    Cochran, W. G. (1977). Sampling Techniques, 3rd ed., equation 6.13.
    """
    numbers, base, level = _checked(numerator, design, where, answered, confidence, "numerator")
    divisors = numbers_of_base(denominator, "denominator", design.n, base.inside)
    if base.rows == 0:
        return empty_estimate(base, level, "t")
    below = mean_in_base(divisors, base)
    if below == 0:
        return _without_ratio(base, level)
    value = mean_in_base(numbers, base) / below
    residuals = (numbers - value * divisors) / below
    variance = variance_of_mean(residuals, base)
    precision = precision_of_mean(variance, weighted_spread(residuals, value, base), base)
    df = base.counts.degrees_of_freedom
    return estimate_with_t(value, variance, df, precision, base, level)


def _checked(
    values: ArrayLike,
    design: SampleDesign,
    where: ArrayLike | None,
    answered: ArrayLike | None,
    confidence: float,
    name: str = "values",
) -> tuple[Floats, AnsweredBase, float]:
    level = as_confidence(confidence)
    base = answered_base(design, where, answered)
    return numbers_of_base(values, name, design.n, base.inside), base, level


def _without_ratio(base: AnsweredBase, confidence: float) -> Estimate:
    nothing = empty_estimate(base, confidence, "t")
    return Estimate(
        value=math.nan,
        standard_error=math.nan,
        interval=nothing.interval,
        degrees_of_freedom=base.counts.degrees_of_freedom,
        base=base.rows,
        weighted_base=base.size,
        design_effect=math.nan,
        effective_base=math.nan,
        equivalent_base=math.nan,
        cautions=(*base.cautions, caution.DENOMINATOR_ZERO),
    )


def _refuse_unknown_universe(design: SampleDesign) -> None:
    if design.relative_weights:
        raise InputError(
            "design",
            "a sample whose weights are relative",
            "must say how large the universe is before a total can be given",
            "give population_size, or weights that add up to the universe",
        )
