"""Variance and degrees of freedom of the difference of two means of one sample.

Both means are linearised in one pass, so that people on both sides, pairs of answers and clusters
that reach into both sides count for what they are.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from estimators.array_checks import Bools, Floats
from estimators.design_variance import variance_of_sum
from estimators.linearized_values import (
    AnsweredBase,
    mean_in_base,
    residuals_of_mean,
    variance_of_mean,
)
from estimators.precision import precision_of_mean, weighted_spread

_EXACT = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class Side:
    """One side of a difference: a mean and what it is worth by itself.

    Parameters
    ----------
    base : AnsweredBase
        Who it is about and who of them answered.
    values : (n,) float
        Answers, zero outside the base.
    mean : float
        Their weighted mean.
    residuals : (n,) float
        Answers minus the mean, zero outside the base.
    spread : float
        Weighted variance of the answers, divisor the sum of the weights.
    variance : float
        Of the mean.
    """

    base: AnsweredBase
    values: Floats
    mean: float
    residuals: Floats
    spread: float
    variance: float

    @property
    def is_share(self) -> bool:
        """Whether every answer is 0 or 1."""
        return bool(((self.values == 0) | (self.values == 1)).all())

    @property
    def does_not_vary(self) -> bool:
        """Whether the variance is zero though not everybody was asked."""
        return precision_of_mean(self.variance, self.spread, self.base).no_variation

    @property
    def contributions(self) -> Floats:
        """(n,) what each row adds to the mean: weight times residual over the size of the base."""
        return self.base.weights * self.residuals / self.base.size

    @property
    def inside(self) -> Bools:
        """(n,) rows with an answer on this side."""
        if self.base.inside is None:
            return np.ones(self.base.design.n, dtype=bool)
        return self.base.inside


def side_of(values: Floats, base: AnsweredBase) -> Side:
    """Work out one side.

    Parameters
    ----------
    values : (n,) float
        Answers, zero outside the base.
    base : AnsweredBase
        A base with at least one answer.
    """
    mean = mean_in_base(values, base)
    residuals = residuals_of_mean(values, mean, base)
    spread = weighted_spread(residuals, mean, base)
    return Side(base, values, mean, residuals, spread, variance_of_mean(residuals, base))


def variance_of_difference(
    first: Side, second: Side, both: AnsweredBase
) -> tuple[float, float, float]:
    """Work out how far a difference of two means of one sample may be off.

    Parameters
    ----------
    first, second : Side
        The two sides, about different rows.
    both : AnsweredBase
        The rows of either side.

    Returns
    -------
    tuple of (variance, degrees_of_freedom, design_effect)
        The design effect is the variance relative to simple random sampling without replacement
        of the same rows.

    Notes
    -----
    Each column of linearised values is first scaled so that alone it gives the variance of its
    mean, which carries the factor for subgroups and the missing answers of its side. The variance
    of the difference is then v1 + v2 - 2 r sqrt(v1 v2), r the correlation of the two columns over
    repeats of the survey.
    """
    columns, rest = [], 0.0
    for side in (first, second):
        alone = _variance(side.contributions, both)
        rest += 0.0 if alone > 0 else side.variance
        scale = math.sqrt(max(side.variance, 0.0) / alone) if alone > 0 else 0.0
        columns.append(side.contributions * scale)
    column = columns[0] - columns[1]
    if math.isnan(first.variance + second.variance):
        return math.nan, 0.0, math.nan
    variance = _variance(column, both) + rest
    df = _degrees_of_freedom(first, second, both, column)
    return variance, df, _design_effect(variance, first, second, both)


def satterthwaite(variances: Sequence[float], degrees: Sequence[float]) -> float:
    """Degrees of freedom of a sum of independent variances.

    Parameters
    ----------
    variances, degrees : sequence of float
        The variances and the degrees of freedom of each; infinite in a census.

    Returns
    -------
    float
        The smallest of the degrees where nothing varies or one of them is 0.

    References
    ----------
    Satterthwaite, F. E. (1946). Biometrics Bulletin 2, 110-114.
    Welch, B. L. (1947). Biometrika 34, 28-35.
    """
    total = sum(variances)
    if min(degrees) <= 0 or not 0 < total < math.inf:
        return min(degrees)
    loss = sum((v / total) ** 2 / df for v, df in zip(variances, degrees, strict=True))
    return 1 / loss if loss > 0 else math.inf


def _variance(column: Floats, both: AnsweredBase) -> float:
    return variance_of_sum(column, both.row_weights, both.design.stages, both.counts)


def _degrees_of_freedom(first: Side, second: Side, both: AnsweredBase, column: Floats) -> float:
    """Satterthwaite's over the rows of one side alone, of both, and of the other alone.

    Each of these parts has its share of the degrees of freedom of its side, so that two groups
    apart keep their own and a small part of a whole keeps its few. The rows of either side
    together cannot have fewer.
    """
    degrees = [side.base.counts.degrees_of_freedom for side in (first, second)]
    masks = first.inside, second.inside
    units = [_units(mask, both) for mask in masks]
    parts = []
    for mask, sides in (
        (masks[0] & ~masks[1], (0,)),
        (masks[1] & ~masks[0], (1,)),
        (masks[0] & masks[1], (0, 1)),
    ):
        if mask.any():
            share = min(degrees[j] * _units(mask, both) / units[j] for j in sides)
            parts.append((_variance(np.where(mask, column, 0.0), both), share))
    if len(parts) == 2 and not (masks[0] & masks[1]).any():
        parts = [(side.variance, df) for side, df in zip((first, second), degrees, strict=True)]
    found = satterthwaite(*zip(*parts, strict=True))
    return min(found, both.counts.degrees_of_freedom)


def _units(mask: Bools, both: AnsweredBase) -> int:
    """How many drawn units have such rows."""
    unit = both.design.stages.unit
    return int(np.count_nonzero(mask)) if unit is None else len(np.unique(unit[mask]))


def _design_effect(variance: float, first: Side, second: Side, both: AnsweredBase) -> float:
    """Variance over that of a simple random sample whose rows gave the same answers."""
    if both.counts.is_census:
        return 1.0
    if min(first.base.rows, second.base.rows) < 2:
        return math.nan
    column = _simple_column(first) - _simple_column(second)
    simple = float(column @ column)
    if simple <= 0:
        return math.nan
    effect = variance / simple
    return 1.0 if abs(effect - 1) < _EXACT else effect


def _simple_column(side: Side) -> Floats:
    """(n,) square roots of what each row adds to the variance of a simple random sample."""
    base, rows = side.base, side.base.rows
    relative = np.sqrt(base.weights * (rows / base.size))
    scale = math.sqrt(max(1 - base.part_asked, 0.0) / (rows * (rows - 1)))
    return side.residuals * relative * scale
