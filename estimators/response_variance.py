"""Variance where some of the people asked did not answer, and weights follow from counts.

Who answers is one more random draw: within a stratum where rows were drawn one by one, within a
cluster where members were drawn from clusters. The variance is that of the sample asked, had all
answered, plus that of the draw of the answers from it.

References
----------
Särndal, C.-E., Swensson, B., Wretman, J. (1992). Model Assisted Survey Sampling, result 15.6.1
(response homogeneity groups).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from estimators.array_checks import Bools, Floats
from estimators.design_counts import BaseCounts
from estimators.design_variance import variance_of_sum
from estimators.sampling_stages import SamplingStages, counts_by, sums_by


@dataclass(frozen=True, slots=True, eq=False)
class _Groups:
    """Response groups of a base; G groups.

    Parameters
    ----------
    asked, answered : (G,) float
        Rows of the base in each group, and those with an answer.
    centres : (G,) float
        Mean residual of the answers.
    spreads : (G,) float
        Variance of the residuals of the answers, divisor rows - 1; pooled where one answered.
    weights : (G,) float
        Weight of each row of the group.
    """

    asked: Floats
    answered: Floats
    centres: Floats
    spreads: Floats
    weights: Floats


def variances_of_both_phases(
    residuals: Floats,
    others: Floats,
    weights: Floats,
    masks: tuple[Bools | None, Bools],
    stages: SamplingStages,
    asked: BaseCounts,
) -> tuple[float, float]:
    """Estimate the variance of the sample asked, and that of who of it answered.

    Parameters
    ----------
    residuals : (n,) float
        Linearised values, zero where there is no answer.
    others : (n,) float
        Contributions that do not depend on the answer, such as those of the size of the base.
    weights : (n,) float
        Weights of the rows, equal within each response group.
    masks : tuple of ((n,) bool or None, (n,) bool)
        Who the figure is about, and who of them answered.
    stages : SamplingStages
        Strata, clusters and response groups.
    asked : BaseCounts
        Counts of the base as if all had answered.

    Returns
    -------
    tuple of (drawn, answered)
        Two variances to be added, the first for all who were asked.
    """
    where, inside = masks
    group = stages.response_group
    groups, deviations = _measured(residuals, weights, where, inside, stages)
    stretch = np.sqrt(np.maximum(groups.asked - 1, 0) / np.maximum(groups.answered - 1, 1))
    values = groups.centres[group] + deviations * stretch[group]
    if where is not None:
        values = np.where(where, values, 0.0)
    drawn = variance_of_sum(others + weights * values, weights, stages, asked)
    later, unseen = _shares_of_phases(stages, asked, len(groups.asked))
    squares = groups.weights**2 * groups.spreads
    lonely = (groups.answered == 1) & (groups.asked > 1)
    drawn += float((unseen * squares * (groups.asked - 1))[lonely].sum())
    silent = groups.asked * (groups.asked - groups.answered) / np.maximum(groups.answered, 1)
    return drawn, float((later * squares * silent).sum())


def _measured(
    residuals: Floats, weights: Floats, where: Bools | None, inside: Bools, stages: SamplingStages
) -> tuple[_Groups, Floats]:
    """Count and average the groups, and give the deviations of the answers from their group."""
    group = stages.response_group
    size = stages.response_groups
    asked, answered = counts_by(group, where, size), counts_by(group, inside, size)
    centres = sums_by(group, residuals, size) / np.maximum(answered, 1)
    deviations = np.where(inside, residuals - centres[group], 0.0)
    squares = sums_by(group, deviations * deviations, size)
    pairs = np.maximum(answered - 1, 0)
    spreads = np.where(pairs > 0, squares / np.maximum(pairs, 1), 0.0)
    lonely = (answered == 1) & (asked > 1)
    if lonely.any():
        spreads = np.where(lonely, _pooled(residuals, squares, pairs, inside), spreads)
    of_group = np.zeros(size)
    of_group[group] = weights
    return _Groups(asked, answered, centres, spreads, of_group), deviations


def _pooled(residuals: Floats, squares: Floats, pairs: Floats, inside: Bools) -> float:
    """Variance within groups, pooled; that of all answers where every group has one."""
    if pairs.any():
        return float(squares.sum() / pairs.sum())
    found = residuals[inside]
    return float(np.var(found, ddof=1)) if len(found) > 1 else 0.0


def _shares_of_phases(
    stages: SamplingStages, asked: BaseCounts, size: int
) -> tuple[Floats | float, Floats]:
    """(G,) how much of the draw of answers is still to be added, and of the draw of rows.

    Totals of drawn clusters already vary with who answered in them, all but the part f of it.
    """
    group = stages.response_group
    of_group = np.zeros(size, np.intp)
    of_group[group] = stages.row_units
    fraction = asked.fractions[stages.unit_stratum[of_group]]
    if stages.unit is None:
        return 1.0, 1 - fraction
    mixed = sums_by(group, (of_group[group] != stages.row_units).astype(float), size)
    alone = mixed == 0  # the group is one cluster
    later = np.where(alone, fraction, 1.0)
    unseen = 1 - asked.row_fractions[of_group]
    return later, np.where(alone, fraction * unseen, 1 - fraction)
