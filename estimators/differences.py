"""Differences of two means or shares: of one sample, whatever the overlap, or of two samples."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike

from estimators import cautions as caution
from estimators.array_checks import Bools, as_confidence, as_mask, numbers_of_base
from estimators.difference_results import (
    difference_with_t,
    merged,
    no_difference,
    of_one_side,
)
from estimators.errors import InputError
from estimators.linearized_differences import Side, satterthwaite, side_of, variance_of_difference
from estimators.linearized_values import AnsweredBase, answered_base
from estimators.precision import precision_of_mean
from estimators.proportion_intervals import METHOD_NAMES
from estimators.proportions import proportion
from estimators.results import Difference, Estimate
from estimators.sample_designs import SampleDesign
from estimators.share_differences import difference_of_shares

_NO_DIFFERENCE = 1e-13  # a difference this small next to both means is rounding noise


def difference(
    first: ArrayLike,
    second: ArrayLike,
    design: SampleDesign,
    *,
    first_where: ArrayLike | None = None,
    second_where: ArrayLike | None = None,
    answered: ArrayLike | None = None,
    confidence: float = 0.95,
) -> Difference:
    """Estimate how far the mean of one group or answer lies above that of another.

    The same answers with two masks compare two groups, which may overlap or lie one inside the
    other; two answers with the same mask compare what the same people said.

    Parameters
    ----------
    first, second : (n,) float
        Answers of both sides; zeros and ones for shares. What stands outside a side's base does
        not matter.
    design : SampleDesign
        How the n rows were drawn.
    first_where, second_where : (n,) bool, optional
        Who each side is about; everyone where not given.
    answered : (n,) bool, optional
        Who gave an answer: to both questions where two are compared. The others are taken to be
        like those who did, as in :func:`estimators.means_and_totals.mean`.
    confidence : float
        Between 0 and 1.

    Returns
    -------
    Difference
        First minus second, in the unit of the answers. The interval is a t interval; for two
        shares of which one does not vary, square-and-add of their two default intervals. NaN
        where nobody answered on one side.

    Raises
    ------
    InputError
        If arrays do not fit the design or a value inside a base is not a finite number.

    References
    ----------
    Woodruff, R. S. (1971). Journal of the American Statistical Association 66, 411-414.
    Satterthwaite, F. E. (1946). Biometrics Bulletin 2, 110-114 (degrees of freedom).
    Newcombe, R. G. (1998). Statistics in Medicine 17, 873-890, method 10 (square-and-add).

    Examples
    --------
    >>> yes = np.repeat([1, 0, 1, 0], [45, 55, 30, 70])
    >>> men = np.arange(200) < 100
    >>> found = difference(yes, yes, SampleDesign.simple_random(200),
    ...                    first_where=men, second_where=~men)
    >>> round(found.value, 2), round(found.half_width, 3), round(found.p_value, 3)
    (0.15, 0.134, 0.029)
    """
    level = as_confidence(confidence)
    masks = (
        as_mask(first_where, "first_where", design.n),
        as_mask(second_where, "second_where", design.n),
    )
    bases = _bases(design, masks, answered)
    numbers = [
        numbers_of_base(values, name, design.n, base.inside)
        for values, name, base in zip((first, second), ("first", "second"), bases, strict=False)
    ]
    if min(base.rows for base in bases[:2]) == 0:
        nobody = (*design.cautions, caution.NOBODY_IN_BASE)
        return no_difference((bases[2].rows, bases[2].size), level, nobody)
    sides = side_of(numbers[0], bases[0]), side_of(numbers[1], bases[1])
    if first is second and bases[0] is bases[1]:
        return _with_itself(sides[0], level)
    found = _paired(*sides, level) if bases[0] is bases[1] else _of_groups(*sides, bases[2], level)
    if not _rests_on_intervals(*sides):
        return found
    return _from_intervals(found, sides, answered, level)


def difference_of(
    first: Estimate, second: Estimate, *, confidence: float = 0.95, correlation: float = 0.0
) -> Difference:
    """Estimate the difference of two figures of independent samples, such as two waves.

    Parameters
    ----------
    first, second : Estimate or Difference
        Two figures in the same unit; of two differences, how far one exceeds the other.
    confidence : float
        Between 0 and 1; those of the figures do not matter.
    correlation : float
        Between the two figures over repeats of both surveys: 0 for independent samples; where
        some people are in both and cannot be matched, at most their share of the larger sample.

    Returns
    -------
    Difference
        First minus second. The interval is a t interval; for two shares of which one does not
        vary, square-and-add of their two default intervals.

    Raises
    ------
    InputError
        If one of the figures is no estimate, or the correlation does not lie between -1 and 1.

    References
    ----------
    Welch, B. L. (1947). Biometrika 34, 28-35.
    Newcombe, R. G. (1998). Statistics in Medicine 17, 873-890, method 10 (square-and-add).
    Kish, L. (1965). Survey Sampling, chapter 12 (partly the same people).
    """
    level = as_confidence(confidence)
    _check_figures(first, second, correlation)
    counts = first.base + second.base, first.weighted_base + second.weighted_base
    notes = merged(of_one_side(first.cautions), of_one_side(second.cautions))
    if math.isnan(first.value) or math.isnan(second.value):
        return no_difference(counts, level, notes)
    shared = first.standard_error * second.standard_error * correlation
    variances = first.standard_error**2, second.standard_error**2
    variance = max(sum(variances) - 2 * shared, 0.0) if correlation else sum(variances)
    degrees = first.degrees_of_freedom, second.degrees_of_freedom
    found = difference_with_t(
        value=_snapped(first.value - second.value, first.value, second.value),
        variance=variance,
        degrees_of_freedom=satterthwaite(variances, degrees),
        confidence=level,
        counts=counts,
        design_effect=_joint_effect(first, second),
        cautions=notes,
    )
    shares = first.interval.method in METHOD_NAMES and second.interval.method in METHOD_NAMES
    if not shares or caution.NO_VARIATION not in (*first.cautions, *second.cautions):
        return found
    interval, p_value = difference_of_shares(first, second, level, correlation)
    return replace(found, interval=interval, p_value=p_value)


def _bases(
    design: SampleDesign, masks: tuple[Bools | None, Bools | None], answered: ArrayLike | None
) -> tuple[AnsweredBase, AnsweredBase, AnsweredBase]:
    """Find the base of each side and of either; one and the same where the masks agree."""
    whole = [mask is None or bool(mask.all()) for mask in masks]
    first = answered_base(design, masks[0], answered)
    if all(whole) or (masks[0] is not None and np.array_equal(masks[0], masks[1])):  # type: ignore[arg-type]
        return first, first, first
    second = answered_base(design, masks[1], answered)
    either = None if any(whole) else np.logical_or(masks[0], masks[1])  # type: ignore[arg-type]
    return first, second, answered_base(design, either, answered)


def _paired(first: Side, second: Side, confidence: float) -> Difference:
    """Two answers of the same people: the mean of what each says first minus second."""
    column = side_of(first.values - second.values, first.base)
    precision = precision_of_mean(column.variance, column.spread, column.base)
    notes = [caution.NO_VARIATION] if precision.no_variation else []
    return difference_with_t(
        value=_snapped(column.mean, first.mean, second.mean),
        variance=column.variance,
        degrees_of_freedom=column.base.counts.degrees_of_freedom,
        confidence=confidence,
        counts=(column.base.rows, column.base.size),
        design_effect=math.nan if precision.no_variation else precision.design_effect,
        cautions=(*column.base.cautions, *notes),
    )


def _of_groups(first: Side, second: Side, both: AnsweredBase, confidence: float) -> Difference:
    """Two groups, apart or overlapping."""
    variance, df, effect = variance_of_difference(first, second, both)
    still = df > 0 and (first.does_not_vary or second.does_not_vary)
    return difference_with_t(
        value=_snapped(first.mean - second.mean, first.mean, second.mean),
        variance=variance,
        degrees_of_freedom=df,
        confidence=confidence,
        counts=(both.rows, both.size),
        design_effect=effect,
        cautions=merged(
            both.cautions,
            first.base.cautions,
            second.base.cautions,
            (caution.NO_VARIATION_ON_ONE_SIDE,) if still else (),
        ),
    )


def _with_itself(side: Side, confidence: float) -> Difference:
    """Take a figure from itself: zero, whatever the sample."""
    found = difference_with_t(
        value=0.0,
        variance=0.0,
        degrees_of_freedom=math.inf,
        confidence=confidence,
        counts=(side.base.rows, side.base.size),
        design_effect=math.nan,
        cautions=side.base.cautions,
    )
    return replace(found, degrees_of_freedom=side.base.counts.degrees_of_freedom)


def _rests_on_intervals(first: Side, second: Side) -> bool:
    """Whether these are two shares of which one does not vary."""
    shares = first.is_share and second.is_share
    return shares and (first.does_not_vary or second.does_not_vary)


def _from_intervals(
    found: Difference, sides: tuple[Side, Side], answered: ArrayLike | None, confidence: float
) -> Difference:
    """Put interval and test by square-and-add in the place of those by t."""
    first, second = (
        proportion(side.values, side.base.design, where=side.base.where, answered=answered)
        for side in sides
    )
    interval, p_value = difference_of_shares(first, second, confidence)
    return replace(
        found,
        interval=interval,
        p_value=p_value,
        cautions=merged(of_one_side(found.cautions), (caution.NO_VARIATION_ON_ONE_SIDE,)),
    )


def _joint_effect(first: Estimate, second: Estimate) -> float:
    """Variance of the difference over that of two simple random samples of the same bases."""
    parts = [(figure.standard_error**2, figure.design_effect) for figure in (first, second)]
    simple = sum(variance / effect for variance, effect in parts if effect > 0)
    if simple > 0 and all(effect > 0 for _, effect in parts):
        return sum(variance for variance, _ in parts) / simple
    census = math.isinf(first.degrees_of_freedom) and math.isinf(second.degrees_of_freedom)
    return 1.0 if census and simple == 0 else math.nan


def _snapped(value: float, first: float, second: float) -> float:
    """Zero where two means differ by rounding only."""
    return 0.0 if abs(value) <= _NO_DIFFERENCE * max(abs(first), abs(second)) else value


def _check_figures(first: Estimate, second: Estimate, correlation: float) -> None:
    for name, figure in (("first", first), ("second", second)):
        if not isinstance(figure, Estimate):
            raise InputError(
                name,
                f"a {type(figure).__name__}",
                "must be an estimate or a difference",
                "pass what mean, total, proportion or difference gave back",
            )
    if not -1 <= correlation <= 1:
        raise InputError(
            "correlation", correlation, "must lie between -1 and 1", "use 0 for separate samples"
        )
