"""Medians and other quantiles of everyone or of a subgroup."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from estimators import cautions as caution
from estimators.array_checks import Bools, Floats, as_confidence, numbers_of_base
from estimators.errors import InputError
from estimators.linearized_values import (
    AnsweredBase,
    answered_base,
    residuals_of_mean,
    share_in_base,
    variance_of_mean,
)
from estimators.precision import Precision, empty_estimate, precision_of_mean, t_quantile
from estimators.results import Caution, Estimate, Interval
from estimators.sample_designs import SampleDesign

_ROUNDING = 1e-12  # sums of weights may miss a probability by this much


@dataclass(frozen=True, slots=True, eq=False)
class _Steps:
    """The weighted distribution function: sorted distinct values and what lies at or below."""

    values: Floats
    shares: Floats

    def quantile(self, probability: float) -> float:
        """Smallest value with at least this share at or below it; infinite beyond 0 and 1."""
        if probability <= 0:
            return -math.inf
        if probability > 1 + _ROUNDING:
            return math.inf
        place = int(np.searchsorted(self.shares, probability - _ROUNDING))
        return float(self.values[min(place, len(self.values) - 1)])

    def jump(self, value: float) -> float:
        """Share of exactly this value."""
        place = int(np.searchsorted(self.values, value))
        return float(self.shares[place] - (self.shares[place - 1] if place else 0.0))


def quantile(
    values: ArrayLike,
    probability: float,
    design: SampleDesign,
    *,
    where: ArrayLike | None = None,
    answered: ArrayLike | None = None,
    confidence: float = 0.95,
) -> Estimate:
    """Estimate a quantile of everyone or of a subgroup, such as the median.

    Parameters
    ----------
    values : (n,) float
        Answers; what stands outside the base does not matter.
    probability : float
        Strictly between 0 and 1; 0.5 for the median.
    design, where, answered, confidence
        As for :func:`estimators.means_and_totals.mean`.

    Returns
    -------
    Estimate
        Smallest answer with at least this share of the universe at or below it, with Woodruff's
        interval; the standard error is the half-width over the t quantile. An end is infinite
        where the base is too small for it. NaN where nobody answered.

    Raises
    ------
    InputError
        If the probability is not inside 0 to 1, arrays do not fit the design, or a value inside
        the base is not a finite number.

    References
    ----------
    Woodruff, R. S. (1952). Journal of the American Statistical Association 47, 635-646.
    """
    level = as_confidence(confidence)
    _check_probability(probability)
    base = answered_base(design, where, answered)
    numbers = numbers_of_base(values, "values", design.n, base.inside)
    if base.rows == 0:
        return empty_estimate(base, level, "woodruff")
    steps = _steps(numbers, base)
    value = steps.quantile(probability)
    error, precision = _error_of_share(numbers <= value, probability, base)
    df = base.counts.degrees_of_freedom
    reach = 0.0 if base.counts.is_census else t_quantile(df, level) * error
    interval = Interval(*_limits(steps, probability, reach), level, "woodruff")
    return Estimate(
        value=value,
        standard_error=interval.half_width / t_quantile(df, level) if df > 0 else math.nan,
        interval=interval,
        degrees_of_freedom=df,
        base=base.rows,
        weighted_base=base.size,
        design_effect=precision.design_effect,
        effective_base=precision.effective_base,
        equivalent_base=precision.equivalent_base,
        cautions=_cautions(base, interval, tied=steps.jump(value) > reach > 0),
    )


def _steps(numbers: Floats, base: AnsweredBase) -> _Steps:
    found = numbers if base.inside is None else numbers[base.inside]
    weights = base.weights if base.inside is None else base.weights[base.inside]
    distinct, code = np.unique(found, return_inverse=True)
    shares = np.cumsum(np.bincount(code, weights)) / base.size
    return _Steps(distinct, shares)


def _error_of_share(
    below: Bools, probability: float, base: AnsweredBase
) -> tuple[float, Precision]:
    """Give the standard error of the share at or below the quantile, and what it is worth."""
    flags = np.where(True if base.inside is None else base.inside, below, 0.0)
    share = share_in_base(flags, base)
    variance = variance_of_mean(residuals_of_mean(flags, share, base), base)
    precision = precision_of_mean(variance, share * (1 - share), base)
    if precision.no_variation:  # at the largest answer the share is 1 and has no variance
        variance = probability * (1 - probability) / precision.equivalent_base
    return math.sqrt(max(variance, 0.0)), precision


def _limits(steps: _Steps, probability: float, reach: float) -> tuple[float, float]:
    if math.isinf(reach) or math.isnan(reach):
        return -math.inf, math.inf
    return steps.quantile(probability - reach), steps.quantile(probability + reach)


def _cautions(base: AnsweredBase, interval: Interval, *, tied: bool) -> tuple[Caution, ...]:
    notes = list(base.cautions)
    if base.counts.degrees_of_freedom <= 0:
        notes.append(caution.NO_DEGREES_OF_FREEDOM)
    elif math.isinf(interval.half_width):
        notes.append(caution.BEYOND_THE_ANSWERS)
    if tied:
        notes.append(caution.HEAVY_TIES)
    return tuple(notes)


def _check_probability(probability: float) -> None:
    if not 0 < probability < 1:
        raise InputError(
            "probability", probability, "must lie between 0 and 1", "write the median as 0.5"
        )
