"""Estimates from published summaries instead of rows."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike

from estimators.array_checks import Floats, as_confidence, as_count, as_numbers
from estimators.errors import InputError
from estimators.linearized_values import AnsweredBase, answered_base
from estimators.precision import estimate_with_t, precision_of_mean
from estimators.results import Estimate
from estimators.sample_designs import SampleDesign


def stratified_mean(
    population_sizes: ArrayLike,
    sample_sizes: ArrayLike,
    means: ArrayLike,
    standard_deviations: ArrayLike,
    *,
    confidence: float = 0.95,
) -> Estimate:
    """Estimate the mean of everyone from the summaries of a stratified random sample.

    Parameters
    ----------
    population_sizes : (h,) array_like of int
        Units of each stratum in the universe.
    sample_sizes : (h,) array_like of int
        Answers from each stratum, drawn without replacement.
    means : (h,) array_like of float
        Mean of the answers of each stratum.
    standard_deviations : (h,) array_like of float
        Of the answers of each stratum, with divisor n - 1, in the unit of the means; not used
        where there is one answer.
    confidence : float
        Between 0 and 1.

    Returns
    -------
    Estimate
        The same as :func:`estimators.means_and_totals.mean` of rows with these summaries, strata
        with one answer and strata asked completely included. Strata are named by their place.

    Raises
    ------
    InputError
        If the lists differ in length, a size is not whole, a stratum has no answer or more
        answers than units, or a mean or standard deviation cannot be right.

    References
    ----------
    Cochran, W. G. (1977). Sampling Techniques, 3rd ed., equation 5.1 and section 5.4 (variance).

    Examples
    --------
    >>> found = stratified_mean([400, 200], [40, 50], [3.1, 4.0], [1.2, 0.9])
    >>> round(found.value, 3), round(found.standard_error, 3), found.degrees_of_freedom
    (3.4, 0.125, 88.0)
    """
    level = as_confidence(confidence)
    units, drawn = _sizes(population_sizes, sample_sizes)
    averages = _finite(means, "means", np.ones(units.size, bool))
    deviations = _finite(standard_deviations, "standard_deviations", drawn > 1)
    _refuse_negative(deviations)
    base = _base(units, drawn)
    value = float(averages[0]) + math.fsum(units * (averages - averages[0])) / math.fsum(units)
    apart = averages - value
    variance = _variance(units, drawn, apart, deviations)
    spread = _spread(units, drawn, apart, deviations)
    precision = precision_of_mean(variance, spread, base)
    df = base.counts.degrees_of_freedom
    return estimate_with_t(value, variance, df, precision, base, level)


def _variance(units: Floats, drawn: Floats, apart: Floats, deviations: Floats) -> float:
    """Variance of the mean; a single answer is judged by its distance from the mean."""
    squares = np.where(drawn > 1, deviations**2, apart**2)
    parts = (units / units.sum()) ** 2 * (1 - drawn / units) * squares / drawn
    return math.fsum(parts)


def _spread(units: Floats, drawn: Floats, apart: Floats, deviations: Floats) -> float:
    """Weighted variance of the answers with divisor the sum of the weights."""
    within = deviations**2 * (drawn - 1) / drawn
    return math.fsum(units * (within + apart**2)) / math.fsum(units)


def _base(units: Floats, drawn: Floats) -> AnsweredBase:
    """Describe the base of rows with these summaries; strata are called 1, 2, 3 ..."""
    names = range(1, units.size + 1)
    sizes = {name: int(there) for name, there in zip(names, units, strict=True)}
    design = SampleDesign.stratified(
        np.repeat(np.array(names), drawn.astype(int)), population_sizes=sizes
    )
    return answered_base(design, None, None)


def _sizes(population_sizes: ArrayLike, sample_sizes: ArrayLike) -> tuple[Floats, Floats]:
    """Whole numbers of units and of answers, at least one answer and no more than units."""
    strata = as_count(np.size(population_sizes), "number of strata")
    units = as_numbers(population_sizes, "population_sizes", strata)
    drawn = as_numbers(sample_sizes, "sample_sizes", strata)
    for place in range(strata):
        answers = as_count(float(drawn[place]), f"sample_sizes[{place}]")
        as_count(float(units[place]), f"population_sizes[{place}]", least=answers)
    return units, drawn


def _finite(given: ArrayLike, name: str, needed: np.ndarray) -> Floats:
    """Numbers, finite where needed and 0 elsewhere."""
    numbers = as_numbers(given, name, needed.size)
    wrong = needed & ~np.isfinite(numbers)
    if wrong.any():
        place = int(np.flatnonzero(wrong)[0])
        raise InputError(
            f"{name}[{place}]", numbers[place], "must be a number", "correct that stratum"
        )
    return np.where(needed, numbers, 0.0)


def _refuse_negative(deviations: Floats) -> None:
    if (deviations < 0).any():
        place = int(np.flatnonzero(deviations < 0)[0])
        raise InputError(
            f"standard_deviations[{place}]",
            deviations[place],
            "must not be negative",
            "correct that stratum",
        )
