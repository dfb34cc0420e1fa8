"""Interval and test of the difference of two shares, by square-and-add of their own intervals."""

from __future__ import annotations

import math

from estimators.proportion_intervals import share_interval
from estimators.results import Estimate, Interval
from estimators.share_evidence import ShareEvidence

_HALVINGS = 45  # to 1e-12 of the p-value
_SMALLEST = 1e-15  # p-values below cannot be told apart: 1 - p is all that a level can hold
_ROUNDING = 1e-12  # a bound this close to 0 holds 0


def square_and_add(
    first: tuple[float, Interval], second: tuple[float, Interval], correlation: float = 0.0
) -> tuple[float, float]:
    """Join the intervals of two shares to that of their difference.

    Parameters
    ----------
    first, second : tuple of (float, Interval)
        Each share and its interval.
    correlation : float
        Between the two estimated shares.

    Returns
    -------
    tuple of (low, high)
        In parts of one.

    References
    ----------
    Newcombe, R. G. (1998). Statistics in Medicine 17, 873-890, method 10 (independent shares).
    Newcombe, R. G. (1998). Statistics in Medicine 17, 2635-2650, method 10 (paired shares; where
    one does not vary they are not correlated).
    """
    (p, own), (q, other) = first, second
    return (
        p - q - _joined(p - own.low, other.high - q, correlation),
        p - q + _joined(own.high - p, q - other.low, correlation),
    )


def difference_of_shares(
    first: Estimate, second: Estimate, confidence: float, correlation: float = 0.0
) -> tuple[Interval, float]:
    """Give the interval of the first share minus the second, and its p-value.

    Parameters
    ----------
    first, second : Estimate
        Two shares.
    confidence : float
        Between 0 and 1.
    correlation : float
        Between the two estimated shares.

    Returns
    -------
    tuple of (interval, p_value)
        The p-value is the smallest 1 - confidence whose interval leaves out zero, from 1e-15 on.
    """
    low, high = _bounds(first, second, confidence, correlation)
    interval = Interval(low, high, confidence, "square_and_add")
    return interval, _p_value(first, second, correlation)


def _joined(arm: float, other: float, correlation: float) -> float:
    """Arm of a difference from the arms of both shares."""
    return math.sqrt(max(arm**2 - 2 * correlation * arm * other + other**2, 0.0))


def _bounds(
    first: Estimate, second: Estimate, confidence: float, correlation: float
) -> tuple[float, float]:
    """Square-and-add of the default intervals at a level."""
    own, other = (
        (share.value, share_interval(_evidence(share), confidence=confidence))
        for share in (first, second)
    )
    return square_and_add(own, other, correlation)


def _evidence(share: Estimate) -> ShareEvidence:
    """Say what an estimated share remembers of its sample."""
    census = math.isinf(share.equivalent_base)
    return ShareEvidence(
        share=share.value,
        base=share.base,
        equivalent_base=share.equivalent_base,
        sampling_fraction=1.0 if census else 0.0,
        degrees_of_freedom=share.degrees_of_freedom,
        universe=math.nan if share.most_units is None else float(share.most_units),
    )


def _p_value(first: Estimate, second: Estimate, correlation: float) -> float:
    """Invert the interval: halve the scale of log p between 1e-15 and 1."""

    def leaves_out_zero(log_p: float) -> bool:
        low, high = _bounds(first, second, -math.expm1(log_p), correlation)
        return low > _ROUNDING or high < -_ROUNDING

    if first.value == second.value:
        return 1.0
    holds, excludes = math.log(_SMALLEST), math.log1p(-_ROUNDING)
    if leaves_out_zero(holds):
        return _SMALLEST
    if not leaves_out_zero(excludes):
        return 1.0
    for _ in range(_HALVINGS):
        middle = (holds + excludes) / 2
        if leaves_out_zero(middle):
            excludes = middle
        else:
            holds = middle
    return math.exp(excludes)
