"""From a variance to what is said about it: interval, design effect, effective bases."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from scipy import special

from estimators import cautions as caution
from estimators.array_checks import Floats
from estimators.linearized_values import AnsweredBase
from estimators.results import Estimate, Interval

_NO_VARIATION = 1e-14  # a variance this small next to that of a simple sample is rounding noise
_EXACT = 1e-9
_CLUSTER_LIKENESS = 0.05  # likeness assumed within clusters where the answers show none


@dataclass(frozen=True, slots=True)
class Precision:
    """How much a variance is worth.

    Parameters
    ----------
    equivalent_base : float
        Answers of a simple random sample from an endless universe that would be as precise.
    design_effect : float
        Variance relative to simple random sampling without replacement of the same base.
    effective_base : float
        Base over design effect.
    no_variation : bool
        The variance is zero though not everybody was asked; the rest rests on a stand-in.
    """

    equivalent_base: float
    design_effect: float
    effective_base: float
    no_variation: bool = False


def precision_of_mean(variance: float, spread: float, base: AnsweredBase) -> Precision:
    """Compare the variance of a mean with that of a simple random sample.

    Parameters
    ----------
    variance : float
        Of the estimate; NaN where unknown.
    spread : float
        Weighted variance of the values, divisor the sum of the weights.
    base : AnsweredBase
        The base.
    """
    rows = base.rows
    if base.counts.is_census:
        return Precision(math.inf, 1.0, float(rows))
    if math.isnan(variance) or spread <= 0 or variance < _NO_VARIATION * spread / rows:
        return Precision(*_stand_in(base), no_variation=True)
    equivalent = spread * rows / ((rows - 1) * variance)
    left, unseen = 1 - correction(base), 1 - base.part_asked
    if left > 0 and abs(equivalent * left / rows - 1) < _EXACT:  # free of rounding
        equivalent = rows / left
    effect = rows / (equivalent * unseen) if unseen > 0 else math.inf
    return Precision(equivalent, effect, rows / effect)


def precision_of_total(variance: float, values: Floats, base: AnsweredBase) -> Precision:
    """Compare the variance of a total with that of a simple random sample of all rows.

    Parameters
    ----------
    variance : float
        Of the total.
    values : (n,) float
        Answers, zero outside the base.
    base : AnsweredBase
        The base.
    """
    simple = _variance_of_simple_total(values, base)
    if base.counts.is_census:
        return Precision(math.inf, 1.0, float(base.rows))
    if math.isnan(variance) or simple <= 0 or variance < _NO_VARIATION * simple:
        return Precision(*_stand_in(base), no_variation=True)
    effect = variance / simple
    unseen = 1 - base.part_asked
    equivalent = base.rows / (effect * unseen) if unseen > 0 else math.inf
    return Precision(equivalent, effect, base.rows / effect)


def stand_in_effect(base: AnsweredBase) -> float:
    """Loss by unequal weights and clusters, for a base whose answers show no variation."""
    weights = base.weights
    loss = base.rows * float(weights @ weights) / base.size**2
    if base.equal_weights:
        loss = 1.0
    per_unit = base.rows / float(base.counts.members.sum())
    return loss * (1 + (per_unit - 1) * _CLUSTER_LIKENESS)


def weighted_spread(residuals: Floats, scale: float, base: AnsweredBase) -> float:
    """Weighted variance with divisor the sum of the weights, from residuals about the mean.

    Exactly zero where the residuals are rounding noise next to the scale of the answers.
    """
    spread = float(np.dot(base.weights, residuals * residuals)) / base.size
    return 0.0 if spread <= (_NO_VARIATION * scale) ** 2 else spread


def correction(base: AnsweredBase) -> float:
    """Part of the universe asked where that takes error away: not when drawn with replacement."""
    return base.part_asked if base.counts.fractions.any() else 0.0


def t_quantile(degrees_of_freedom: float, confidence: float) -> float:
    """Two-sided quantile of the t distribution; infinite without degrees of freedom."""
    if degrees_of_freedom <= 0:
        return math.inf
    upper = (1 + confidence) / 2
    if math.isinf(degrees_of_freedom):
        return float(special.ndtri(upper))
    return float(special.stdtrit(degrees_of_freedom, upper))


def t_interval(
    value: float, standard_error: float, degrees_of_freedom: float, confidence: float
) -> Interval:
    """Return the value plus and minus t standard errors; without bounds where nothing is known."""
    if degrees_of_freedom <= 0 or math.isnan(standard_error):
        return Interval(-math.inf, math.inf, confidence, "t")
    half = t_quantile(degrees_of_freedom, confidence) * standard_error
    return Interval(value - half, value + half, confidence, "t")


def estimate_with_t(
    value: float,
    variance: float,
    degrees_of_freedom: float,
    precision: Precision,
    base: AnsweredBase,
    confidence: float,
) -> Estimate:
    """Put together an estimate with a t interval and its cautions."""
    if degrees_of_freedom <= 0 and not variance > 0:
        variance = math.nan
    error = math.sqrt(variance) if variance >= 0 else math.nan
    notes = list(base.cautions)
    if degrees_of_freedom <= 0:
        notes.append(caution.NO_DEGREES_OF_FREEDOM)
    elif precision.no_variation:
        notes.append(caution.NO_VARIATION)
    return Estimate(
        value=value,
        standard_error=error,
        interval=t_interval(value, error, degrees_of_freedom, confidence),
        degrees_of_freedom=degrees_of_freedom,
        base=base.rows,
        weighted_base=base.size,
        design_effect=precision.design_effect,
        effective_base=precision.effective_base,
        equivalent_base=precision.equivalent_base,
        cautions=tuple(notes),
    )


def empty_estimate(base: AnsweredBase, confidence: float, method: str) -> Estimate:
    """Return the figure of a base in which nobody answered: not a number."""
    nan = math.nan
    return Estimate(
        value=nan,
        standard_error=nan,
        interval=Interval(nan, nan, confidence, method),
        degrees_of_freedom=nan,
        base=0,
        weighted_base=0.0,
        design_effect=nan,
        effective_base=nan,
        equivalent_base=nan,
        cautions=(*base.design.cautions, caution.NOBODY_IN_BASE),
    )


def _stand_in(base: AnsweredBase) -> tuple[float, float, float]:
    """Equivalent base, design effect and effective base where the answers do not vary."""
    effect = stand_in_effect(base)
    unseen = 1 - correction(base)
    equivalent = base.rows / (effect * unseen) if unseen > 0 else math.inf
    full = 1 - base.part_asked
    against_simple = base.rows / (equivalent * full) if full > 0 else 1.0
    return equivalent, against_simple, base.rows / against_simple


def _variance_of_simple_total(values: Floats, base: AnsweredBase) -> float:
    """Variance of the total in a simple random sample that would give as many answers."""
    kept = base.counts.kept
    weights = base.row_weights if kept is None else base.row_weights[kept]
    numbers = values if kept is None else values[kept]
    size, rows = float(weights.sum()), base.design.n * base.rows / base.asked
    if rows <= 1 or size <= 0:
        return 0.0
    centre = float(weights @ numbers) / size
    spread = float(weights @ (numbers - centre) ** 2) / size
    return (1 - base.part_asked) * size**2 * spread / (rows - 1)
