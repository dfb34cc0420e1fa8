"""Variance of an estimated sum: strata, clusters, two stages and a finite universe at once.

References
----------
Cochran, W. G. (1977). Sampling Techniques, 3rd ed., equation 11.24 (two stages).
Särndal, C.-E., Swensson, B., Wretman, J. (1992). Model Assisted Survey Sampling, result 4.3.1.
"""

from __future__ import annotations

import numpy as np

from estimators.array_checks import Floats
from estimators.design_counts import BaseCounts
from estimators.sampling_stages import SamplingStages, sums_by


def variance_of_sum(
    contributions: Floats, row_weights: Floats, stages: SamplingStages, counts: BaseCounts
) -> float:
    """Estimate the variance of the sum of weighted contributions.

    Parameters
    ----------
    contributions : (n,) float
        Weight times linearised value of each row, in the unit of the estimate; zero outside the
        base and for rows asked in vain.
    row_weights : (n,) float
        The weights in them; of rows outside the base too.
    stages : SamplingStages
        Strata, clusters and what the universe has of them.
    counts : BaseCounts
        Units and fractions of the base.

    Returns
    -------
    float
        Variance, in the square of the unit of the estimate.
    """
    totals = contributions
    if stages.unit is not None:
        totals = sums_by(stages.row_units, contributions, len(stages.rows_drawn))
    variance = _between_units(totals, stages, counts)
    if stages.unit is not None and counts.fractions.any():
        variance += _within_units(contributions, totals, row_weights, stages, counts)
    return variance


def _between_units(totals: Floats, stages: SamplingStages, counts: BaseCounts) -> float:
    """Sum over strata of (1-f) n/(n-1) times the squared deviations of unit totals."""
    units, strata = counts.units, len(counts.units)
    sums = sums_by(stages.unit_stratum, totals, strata)
    centres = sums / np.maximum(units, 1)
    single = (units == 1) & (counts.members > 0)
    if single.any():
        centres = np.where(single, sums.sum() / units[counts.members > 0].sum(), centres)
    deviations = totals - centres[stages.unit_stratum]
    if counts.kept_units is not None:
        deviations[~counts.kept_units] = 0.0
    squares = sums_by(stages.unit_stratum, deviations * deviations, strata)
    factor = np.where(units > 1, units / np.maximum(units - 1, 1), 1.0)
    return float(((1 - counts.fractions) * factor * squares).sum())


def _within_units(
    contributions: Floats,
    totals: Floats,
    row_weights: Floats,
    stages: SamplingStages,
    counts: BaseCounts,
) -> float:
    """Sum over units of f (1-g) m/(m-1) times the squared deviations of their rows."""
    unit, rows = stages.row_units, counts.rows
    size = len(rows)
    deviations = contributions - (totals / np.maximum(rows, 1))[unit]
    if counts.kept is not None:
        deviations[~counts.kept] = 0.0
    squares = sums_by(unit, deviations * deviations, size)
    spread = squares * rows / np.maximum(rows - 1, 1)
    alone = rows == 1
    if alone.any():
        spread = np.where(alone, _pooled(deviations, row_weights, stages, counts), spread)
    unseen = np.maximum(1 - counts.row_fractions, 0.0)
    return float((counts.fractions[stages.unit_stratum] * unseen * spread).sum())


def _pooled(
    deviations: Floats, row_weights: Floats, stages: SamplingStages, counts: BaseCounts
) -> Floats:
    """(C,) squared weight of a unit's row times the variance of values pooled over its stratum."""
    size, strata = len(counts.rows), len(counts.units)
    values = np.divide(
        deviations, row_weights, out=np.zeros_like(deviations), where=row_weights > 0
    )
    squares = sums_by(stages.row_units, values * values, size)
    pairs = sums_by(stages.unit_stratum, np.maximum(counts.rows - 1, 0), strata)
    pooled = sums_by(stages.unit_stratum, squares, strata) / np.maximum(pairs, 1)
    seen = row_weights if counts.kept is None else row_weights * counts.kept
    weight = sums_by(stages.row_units, seen, size)
    return weight * weight * pooled[stages.unit_stratum]
