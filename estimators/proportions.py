"""Shares of everyone or of a subgroup."""

from __future__ import annotations

import math

from numpy.typing import ArrayLike

from estimators import cautions as caution
from estimators.array_checks import as_confidence, as_zero_or_one
from estimators.linearized_values import (
    AnsweredBase,
    answered_base,
    residuals_of_mean,
    share_in_base,
    variance_of_mean,
)
from estimators.precision import (
    Precision,
    correction,
    empty_estimate,
    precision_of_mean,
    stand_in_effect,
)
from estimators.proportion_intervals import check_method, share_interval
from estimators.results import Caution, Estimate
from estimators.sample_designs import SampleDesign
from estimators.share_evidence import ShareEvidence


def proportion(
    chosen: ArrayLike,
    design: SampleDesign,
    *,
    where: ArrayLike | None = None,
    answered: ArrayLike | None = None,
    confidence: float = 0.95,
    method: str = "wilson",
) -> Estimate:
    """Estimate the share that chose an answer, of everyone or of a subgroup.

    Parameters
    ----------
    chosen : (n,) bool, or 0 and 1
        Whether each row chose the answer; what stands outside the base does not matter.
    design : SampleDesign
        How the n rows were drawn.
    where : (n,) bool, optional
        Who the figure is about.
    answered : (n,) bool, optional
        Who of them gave an answer. The others are taken to be like those who did, within their
        stratum, or within their cluster where clusters were drawn and no weights are given.
    confidence : float
        Between 0 and 1.
    method : str
        A name in :data:`estimators.proportion_intervals.METHOD_NAMES`.

    Returns
    -------
    Estimate
        In parts of one. NaN where nobody answered.

    Raises
    ------
    InputError
        If arrays do not fit the design, an entry inside the base is neither 0 nor 1, or the
        method is unknown or does not fit the sample.

    References
    ----------
    Wilson, E. B. (1927). Journal of the American Statistical Association 22, 209-212.
    Korn, E. L., Graubard, B. I. (1998). Survey Methodology 24, 193-201 (degrees of freedom).
    Dean, N., Pagano, M. (2015). Journal of Survey Statistics and Methodology 3, 484-503.
    """
    level = as_confidence(confidence)
    check_method(method)
    base = answered_base(design, where, answered)
    flags = as_zero_or_one(chosen, "chosen", design.n, base.inside)
    if base.rows == 0:
        return empty_estimate(base, level, method)
    share = share_in_base(flags, base)
    residuals = residuals_of_mean(flags, share, base)
    variance = variance_of_mean(residuals, base)
    precision = precision_of_mean(variance, share * (1 - share), base)
    evidence = _evidence(share, precision, base)
    return Estimate(
        value=share,
        standard_error=_standard_error(variance, base),
        interval=share_interval(evidence, method=method, confidence=level),
        degrees_of_freedom=base.counts.degrees_of_freedom,
        base=base.rows,
        weighted_base=base.size,
        design_effect=precision.design_effect,
        effective_base=precision.effective_base,
        equivalent_base=precision.equivalent_base,
        cautions=_cautions(precision, base),
        most_units=None if math.isnan(most := _most_units(base)) else int(most),
    )


def _evidence(share: float, precision: Precision, base: AnsweredBase) -> ShareEvidence:
    """Say what the sample knows about the share, for the methods of intervals."""
    census = base.counts.is_census
    return ShareEvidence(
        share=share,
        base=base.rows,
        equivalent_base=math.nan if precision.no_variation else precision.equivalent_base,
        sampling_fraction=1.0 if census else correction(base),
        degrees_of_freedom=base.counts.degrees_of_freedom,
        stand_in_effect=stand_in_effect(base),
        universe=_most_units(base),
        simple_random=_is_simple_sample_of_everyone(base),
    )


def _most_units(base: AnsweredBase) -> float:
    """Units the base can have at most; NaN where rows speak for different numbers of units."""
    design = base.design
    if design.population_size is None or design.replacement:
        return math.nan
    part_of_census = base.counts.is_census and base.asked < design.n
    if part_of_census or not base.equal_weights:
        return math.nan
    return float(design.population_size - design.n + base.asked)


def _is_simple_sample_of_everyone(base: AnsweredBase) -> bool:
    design = base.design
    return base.asked == design.n and design.is_simple and design.stages.is_corrected


def _standard_error(variance: float, base: AnsweredBase) -> float:
    if base.counts.degrees_of_freedom <= 0 and not variance > 0:
        return math.nan
    return math.sqrt(max(variance, 0.0))


def _cautions(precision: Precision, base: AnsweredBase) -> tuple[Caution, ...]:
    notes = list(base.cautions)
    if base.counts.degrees_of_freedom <= 0:
        notes.append(caution.NO_DEGREES_OF_FREEDOM)
    if precision.no_variation:
        notes.append(caution.NO_VARIATION)
    return tuple(notes)
