"""The base of a figure, and the values that turn a mean, a ratio or a total into a plain sum.

The variance of any of these estimates is the variance of the sum of its linearised values
(Woodruff, R. S. (1971). Journal of the American Statistical Association 66, 411-414), so that
:mod:`estimators.design_variance` needs to know sums only.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from estimators.array_checks import Bools, Codes, Floats, as_mask
from estimators.cautions import GROUP_WITHOUT_ANSWERS, answers_missing
from estimators.design_counts import BaseCounts, count_base
from estimators.design_variance import variance_of_sum
from estimators.response_variance import variances_of_both_phases
from estimators.results import Caution
from estimators.sample_designs import SampleDesign
from estimators.sampling_stages import counts_by, sums_by

_SAME = 1e-12


@dataclass(frozen=True, slots=True, eq=False)
class AnsweredBase:
    """Who a figure is about and who of them answered, with the weights that follow.

    Parameters
    ----------
    design : SampleDesign
        The sample.
    where : (n,) bool or None
        Who the figure is about; None for everyone.
    inside : (n,) bool or None
        Who of them answered; None for everyone.
    weights : (n,) float
        Weights of those who answered, speaking for those who did not as well; else zero.
    row_weights : (n,) float
        The same, and the weight of the design for rows that give no answer to the figure.
    size : float
        Sum of the weights: units of the universe the figure speaks for.
    rows : int
        Rows that answered.
    asked : int
        Rows the figure is about.
    equal_weights : bool
        Whether all who answered have the same weight.
    counts : BaseCounts
        Units, strata and fractions.
    """

    design: SampleDesign
    where: Bools | None
    inside: Bools | None
    weights: Floats
    row_weights: Floats
    size: float
    rows: int
    asked: int
    equal_weights: bool
    counts: BaseCounts

    @property
    def follows_response(self) -> bool:
        """Whether answers are missing and the rows of a response group all weigh the same.

        The draw of the answers can then be told from the draw of the rows.
        """
        return self.rows < self.asked and _weighs_groups_alike(self.design)

    @property
    def universe_is_known(self) -> bool:
        """Whether it is known what part of the universe was asked."""
        design = self.design
        counted = design.population_size is not None or design.stages.is_corrected
        return counted and not design.relative_weights

    @property
    def part_asked(self) -> float:
        """Rows over the units they speak for; 0 where the universe is unknown."""
        if not self.universe_is_known or self.size <= 0:
            return 0.0
        design = self.design
        if design.is_simple and design.stages.is_corrected:  # the same, free of rounding
            return float(self.counts.fractions[0])
        return min(self.rows / self.size, 1.0)

    @property
    def cautions(self) -> tuple[Caution, ...]:
        """What has to be known about the sample and the base."""
        notes = [*self.design.cautions, *self.counts.cautions]
        if self.rows < self.asked:
            notes.append(answers_missing(self.asked, self.rows))
            asked, answered = _asked_and_answered(self.design, self.where, self.inside)
            if ((asked > 0) & (answered == 0)).any():
                notes.append(GROUP_WITHOUT_ANSWERS)
        return tuple(notes)


def answered_base(
    design: SampleDesign, where: ArrayLike | None, answered: ArrayLike | None
) -> AnsweredBase:
    """Find the base of a figure and its weights.

    Parameters
    ----------
    design : SampleDesign
        The sample.
    where : (n,) bool, optional
        Who the figure is about.
    answered : (n,) bool, optional
        Who gave an answer; does not matter outside ``where``.

    Raises
    ------
    InputError
        If a mask has other rows than the design or is not true or false.
    """
    about = as_mask(where, "where", design.n)
    gave = as_mask(answered, "answered", design.n)
    if design.has_zero_weights:  # such a row speaks for nobody
        about = design.weights > 0 if about is None else about & (design.weights > 0)
    inside = about if gave is None else (gave if about is None else about & gave)
    weights, row_weights = _weights_of_answers(design, about, inside)
    rows = design.n if inside is None else int(np.count_nonzero(inside))
    found = weights if inside is None else weights[inside]
    return AnsweredBase(
        design=design,
        where=about,
        inside=inside,
        weights=weights,
        row_weights=row_weights,
        size=float(weights.sum()),
        rows=rows,
        asked=design.n if about is None else int(np.count_nonzero(about)),
        equal_weights=bool(rows > 0 and np.ptp(found) <= _SAME * found[0]),
        counts=count_base(design.stages, about, inside),
    )


def mean_in_base(values: Floats, base: AnsweredBase) -> float:
    """Return the weighted mean of the base, in two passes so that few digits are lost."""
    found = values if base.inside is None else values[base.inside]
    if base.equal_weights:
        centre = float(found.mean())
        return centre + float((found - centre).mean())
    weights = base.weights if base.inside is None else base.weights[base.inside]
    centre = float(weights @ found) / base.size
    return centre + float(weights @ (found - centre)) / base.size


def share_in_base(flags: Floats, base: AnsweredBase) -> float:
    """Return the weighted share of ones in the base; zeros and ones only."""
    if base.equal_weights:
        return float(np.count_nonzero(flags)) / base.rows
    return min(float(base.weights @ flags) / base.size, 1.0)


def residuals_of_mean(values: Floats, mean: float, base: AnsweredBase) -> Floats:
    """(n,) values minus their mean, zero outside the base."""
    if base.inside is None:
        return values - mean
    return np.where(base.inside, values - mean, 0.0)


def variance_of_mean(residuals: Floats, base: AnsweredBase) -> float:
    """Variance of the weighted mean of the base whose residuals are given.

    Carries the factor for subgroups, and is NaN where one unit is all there is to go by.
    """
    if base.follows_response:
        drawn, later = _both_phases(residuals / base.size, np.zeros(base.design.n), base)
        return drawn * _counts_of_asked(base).subgroup_factor + later
    contributions = base.weights * residuals / base.size
    variance = variance_of_sum(contributions, base.row_weights, base.design.stages, base.counts)
    return variance * base.counts.subgroup_factor


def variance_of_total(residuals: Floats, mean: float, base: AnsweredBase) -> float:
    """Variance of the size of the base times its mean.

    The answers vary over both random steps, being drawn and answering; the size of the base over
    the first alone, because those who did not answer are known to belong to it.
    """
    size = _contributions_of_size(mean, base)
    if base.follows_response:
        return sum(_both_phases(residuals, size, base))
    stages, counts, weights = base.design.stages, base.counts, base.design.weights
    answers = base.weights * residuals
    if base.rows == base.asked:
        return variance_of_sum(answers + size, weights, stages, counts)
    asked = _counts_of_asked(base)
    both = variance_of_sum(answers, base.row_weights, stages, counts)
    drawn = variance_of_sum(answers + size, weights, stages, asked)
    return max(both + drawn - variance_of_sum(answers, weights, stages, asked), 0.0)


def _both_phases(residuals: Floats, others: Floats, base: AnsweredBase) -> tuple[float, float]:
    """Variance of the draw of those asked, and of the draw of the answers from them."""
    design, inside = base.design, base.inside
    if inside is None:
        inside = np.ones(design.n, dtype=bool)
    # Where a group gave no answer at all the others speak for it.
    spoken = design.weights * _asked_per_answer(design, base.where, inside) @ inside
    weights = design.weights * (base.size / spoken)
    return variances_of_both_phases(
        residuals, others, weights, (base.where, inside), design.stages, _counts_of_asked(base)
    )


def _counts_of_asked(base: AnsweredBase) -> BaseCounts:
    return count_base(base.design.stages, base.where, base.where)


def _contributions_of_size(mean: float, base: AnsweredBase) -> Floats:
    """(n,) what each row adds to the total by belonging to the base with the mean answer."""
    weights = base.design.weights
    size = weights * mean if base.where is None else np.where(base.where, weights * mean, 0.0)
    if base.design.scaled_weights:  # the weights always add up to the universe
        size = size - weights * (mean * base.size / float(weights.sum()))
    return size


def _weights_of_answers(
    design: SampleDesign, where: Bools | None, inside: Bools | None
) -> tuple[Floats, Floats]:
    """(n,) weights of those who answered, and the same with the weights of rows outside."""
    weights = design.weights
    if inside is None:
        return weights, weights
    if inside is where:
        return np.where(inside, weights, 0.0), weights
    weights = weights * _asked_per_answer(design, where, inside)
    counted = np.where(inside, weights, 0.0)
    asked = design.weights.sum() if where is None else design.weights @ where
    if counted.any():
        counted = counted * (asked / counted.sum())
    return counted, np.where(inside, counted, design.weights)


def _asked_per_answer(design: SampleDesign, where: Bools | None, inside: Bools) -> Floats:
    """(n,) weight asked over weight that answered, in the group where response is random."""
    asked, answered = _asked_and_answered(design, where, inside)
    ratio = np.divide(asked, answered, out=np.ones_like(asked), where=answered > 0)
    return ratio[_response_group(design)]


def _asked_and_answered(
    design: SampleDesign, where: Bools | None, inside: Bools | None
) -> tuple[Floats, Floats]:
    """(G,) what each response group has in the base, and what of it answered.

    Counted in rows; in weights where rows of one group may weigh differently.
    """
    group = _response_group(design)
    size = int(group.max()) + 1
    if design.weights_given:
        here, heard = (
            design.weights if mask is None else design.weights * mask for mask in (where, inside)
        )
        return sums_by(group, here, size), sums_by(group, heard, size)
    return counts_by(group, where, size), counts_by(group, inside, size)


def _response_group(design: SampleDesign) -> Codes:
    """(n,) group within which not answering is a matter of chance.

    The stratum, or the cluster where members were drawn from clusters by known numbers.
    """
    return design.stages.stratum if design.weights_given else design.stages.response_group


def _weighs_groups_alike(design: SampleDesign) -> bool:
    """Whether the rows of a response group all have the same weight."""
    if not design.weights_given:
        return True
    stratum = design.stages.stratum
    first = np.zeros(len(design.stages.units_drawn))
    first[stratum] = design.weights
    apart = np.abs(design.weights - first[stratum])
    return design.stages.unit is None and bool((apart <= _SAME * design.weights).all())
