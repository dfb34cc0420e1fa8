"""Variance of any statistic of weights by replicates, and where its replicates fall."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from concurrent.futures import ThreadPoolExecutor
from typing import Literal, get_args

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.array_checks import Floats, numbers_of_base
from estimators.errors import InputError
from estimators.means_and_totals import ratio, total
from estimators.quantiles import quantile
from estimators.replicate_weights import Changes, ReplicateWeights
from estimators.sampling_distributions import SamplingDistribution
from estimators.sampling_stages import sums_by

Figure = Literal["mean", "total", "ratio", "quantile"]

_ROUNDING = 1e-6  # shares of the weights held in single precision may miss a probability by this


def replicate_sums(values: ArrayLike, replicates: ReplicateWeights) -> Floats:
    """Sum the values times the weights of every replicate: one matrix product for each block.

    Parameters
    ----------
    values : (n, k) float
        k columns; rows outside the base do not matter. Smallest error for columns with mean 0.
    replicates : ReplicateWeights
        Of the n rows.

    Returns
    -------
    (R, k) float
        Weighted sums; those of the bootstrap in single precision relative to the sum of
        absolute values.

    Raises
    ------
    InputError
        If the rows do not fit the design or a value inside the base is not a finite number.
    """
    columns = np.asarray(values)
    if columns.ndim != 2:
        raise InputError(
            "values",
            f"an array of shape {columns.shape}",
            "must have one row for each respondent and one column for each sum",
            "reshape one column to (n, 1)",
        )
    numbers, inside = columns.astype(np.float64, copy=False), replicates.base.inside
    plain = inside is None and len(numbers) == replicates.base.design.n
    if not (plain and np.isfinite(numbers).all()):
        n = replicates.base.design.n
        checked = [
            numbers_of_base(c, f"values[:, {k}]", n, inside) for k, c in enumerate(columns.T)
        ]
        numbers = np.stack(checked, axis=1)
    return _summed(numbers, replicates.weights, replicates)


def replicate_estimates(
    statistic: Callable[[Floats], ArrayLike], replicates: ReplicateWeights
) -> Floats:
    """Compute a statistic with the weights of every replicate.

    Parameters
    ----------
    statistic : callable
        From (n,) weights to a number or an array.
    replicates : ReplicateWeights
        Of the n rows.

    Returns
    -------
    (R, ...) float
        The statistic for each replicate.

    Raises
    ------
    InputError
        If there is no replicate, because nothing of a census can be left out.
    """
    if replicates.replicates == 0:
        raise InputError(
            "replicates",
            "none, as in a census",
            "must hold at least one",
            "take the variance to be zero",
        )
    found = [
        np.asarray(statistic(weights), dtype=np.float64)
        for block in replicates.blocks()
        for weights in block
    ]
    return np.stack(found)


def replicate_variance(
    estimates: ArrayLike, value: ArrayLike, replicates: ReplicateWeights
) -> Floats:
    """Variance of a statistic from its replicates.

    Parameters
    ----------
    estimates : (R, ...) float
        From :func:`replicate_estimates` or :func:`replicate_sums`, or computed from these.
    value : (...) float
        The statistic of the sample itself.
    replicates : ReplicateWeights
        The replicates.

    Returns
    -------
    (...) float
        Sum of scales times squared deviations from the value. Of a total; for a mean, share or
        ratio of a subgroup multiply by ``replicates.base.counts.subgroup_factor``.

    Raises
    ------
    InputError
        If there is not one estimate for each replicate.

    References
    ----------
    Wolter, K. M. (2007). Introduction to Variance Estimation, 2nd ed., equations 4.5.3 and 5.2.
    """
    found = np.asarray(estimates, dtype=np.float64)
    if found.ndim == 0 or len(found) != replicates.replicates:
        raise InputError(
            "estimates",
            f"an array of shape {found.shape}",
            f"must hold one estimate for each of the {replicates.replicates:,} replicates",
            "pass what replicate_estimates or replicate_sums gave",
        )
    deviations = found - np.asarray(value, dtype=np.float64)
    return np.asarray(np.tensordot(replicates.scales, deviations**2, axes=1))


def replicate_distribution(
    values: ArrayLike,
    replicates: ReplicateWeights,
    *,
    figure: Figure = "mean",
    denominator: ArrayLike | None = None,
    probability: float = 0.5,
) -> SamplingDistribution:
    """Show where a figure falls when the survey is repeated by the bootstrap.

    Parameters
    ----------
    values : (n,) float
        Answers; 0 and 1 for a share.
    replicates : ReplicateWeights
        Made with the method bootstrap, for the base of the figure.
    figure : {"mean", "total", "ratio", "quantile"}
        What is estimated; a share is a mean of zeros and ones.
    denominator : (n,) float, optional
        What a ratio is divided by.
    probability : float
        Of a quantile; 0.5 for the median.

    Returns
    -------
    SamplingDistribution
        Every replicate has the same probability; ``exact`` is False and ``error`` is the largest
        Monte Carlo standard error of a cumulative probability. Deviations of means, shares,
        ratios and quantiles of a subgroup carry the root of its factor k(c-1)/((k-1)c).

    Raises
    ------
    InputError
        If the replicates are of the jackknife, the figure is unknown or has no value, or as the
        estimator of that figure.

    References
    ----------
    Rao, J. N. K., Wu, C. F. J., Yue, K. (1992). Survey Methodology 18, 209-217.
    """
    _check_distribution(replicates, figure, denominator)
    if figure == "quantile":
        return _distribution(_quantiles(values, probability, replicates))
    if figure == "total":
        return _distribution(_totals(values, replicates))
    below = np.ones(replicates.base.design.n) if denominator is None else denominator
    return _distribution(_ratios(values, below, replicates))


def _summed(numbers: Floats, weights: Floats, replicates: ReplicateWeights) -> Floats:
    """(R, k) sums of the (n, k) numbers times weights, changed as each replicate says."""
    kind = np.float32 if replicates.method == "bootstrap" else np.float64
    columns = _weighted(numbers, weights, replicates, kind)
    found = np.empty((replicates.replicates, columns.shape[1]), kind)
    start = 0
    for changes in _one_ahead(replicates.changes()):
        np.matmul(changes, columns, out=found[start : start + len(changes)])
        start += len(changes)
    return np.asarray(found + weights @ numbers, dtype=np.float64)


def _one_ahead(blocks: Iterator[Changes]) -> Iterator[Changes]:
    """Yield the blocks, each made while the one before is worked on."""
    with ThreadPoolExecutor(max_workers=1) as maker:
        coming = maker.submit(next, blocks, None)
        while (block := coming.result()) is not None:
            coming = maker.submit(next, blocks, None)
            yield block


def _weighted(
    numbers: Floats,
    weights: Floats,
    replicates: ReplicateWeights,
    kind: type[np.float32] | type[np.float64],
) -> NDArray[np.floating]:
    """(K, k) numbers times weights, summed by unit where only units are redrawn."""
    stages = replicates.base.design.stages
    columns = np.empty(numbers.shape, kind)
    if stages.unit is None or replicates.rows is not None:
        return np.multiply(numbers, weights[:, None], out=columns, casting="unsafe")
    units = len(stages.unit_stratum)
    sums = [sums_by(stages.unit, weights * column, units) for column in numbers.T]
    return np.stack(sums, axis=1).astype(kind)


def _ratios(values: ArrayLike, denominator: ArrayLike, replicates: ReplicateWeights) -> Floats:
    """(R,) value plus stretched deviation of a ratio; a mean has ones below."""
    base = replicates.base
    numbers = numbers_of_base(values, "values", base.design.n, base.inside)
    below = numbers_of_base(denominator, "denominator", base.design.n, base.inside)
    value = ratio(numbers, below, base.design, where=base.where, answered=base.inside).value
    if math.isnan(value):
        raise InputError("denominator", "a sum of zero", "must not add up to zero", "check it")
    sums = _summed(np.stack([numbers - value * below, below], 1), base.weights, replicates)
    return value + sums[:, 0] / sums[:, 1] * math.sqrt(base.counts.subgroup_factor)


def _totals(values: ArrayLike, replicates: ReplicateWeights) -> Floats:
    """(R,) totals; weights scaled to a universe always add up to it."""
    base = replicates.base
    numbers = numbers_of_base(values, "values", base.design.n, base.inside)
    total(numbers, base.design, where=base.where, answered=base.inside)  # refuses what it refuses
    if not base.design.scaled_weights:
        return _summed(numbers[:, None], base.weights, replicates)[:, 0]
    of_base = np.where(base.weights > 0, numbers, 0.0)
    sums = _summed(np.stack([of_base, np.ones_like(numbers)], 1), base.row_weights, replicates)
    return sums[:, 0] / sums[:, 1] * float(base.row_weights.sum())


def _quantiles(values: ArrayLike, probability: float, replicates: ReplicateWeights) -> Floats:
    """(R,) smallest value whose stretched distribution function reaches the probability."""
    base = replicates.base
    numbers = numbers_of_base(values, "values", base.design.n, base.inside)
    quantile(numbers, probability, base.design, where=base.where, answered=base.inside)
    order = np.argsort(numbers, kind="stable")
    order = order[base.weights[order] > 0]
    ends = np.append(np.diff(numbers[order]) > 0, True)
    shares = np.cumsum(base.weights[order])[ends] / base.size
    stretch = math.sqrt(base.counts.subgroup_factor)
    found = []
    for block in replicates.blocks():
        heights = np.cumsum(block[:, order], axis=1)
        heights = shares + (heights[:, ends] / heights[:, -1:] - shares) * stretch
        found.append(numbers[order][ends][np.argmax(heights >= probability - _ROUNDING, axis=1)])
    return np.concatenate(found)


def _distribution(estimates: Floats) -> SamplingDistribution:
    support, counts = np.unique(estimates, return_counts=True)
    mean = float(estimates.mean())
    deviations = estimates - mean
    spread = math.sqrt(float((deviations**2).mean()))
    return SamplingDistribution(
        support=support,
        probabilities=counts / len(estimates),
        mean=mean,
        standard_deviation=spread,
        skewness=float((deviations**3).mean()) / spread**3 if spread > 0 else math.nan,
        exact=False,
        error=0.5 / math.sqrt(len(estimates)),
    )


def _check_distribution(
    replicates: ReplicateWeights, figure: str, denominator: ArrayLike | None
) -> None:
    if replicates.method != "bootstrap":
        raise InputError(
            "replicates",
            f"those of the {replicates.method}",
            "must come from the bootstrap to show a distribution",
            'make them with method="bootstrap"',
        )
    if figure not in get_args(Figure):
        known = ", ".join(get_args(Figure))
        raise InputError("figure", repr(figure), f"must be one of {known}", "choose one of these")
    if (figure == "ratio") != (denominator is not None):
        raise InputError(
            "denominator",
            "none" if denominator is None else f"one for a {figure}",
            "must be given for a ratio and for nothing else",
            'pass it together with figure="ratio"',
        )
