"""P-values adjusted for the number of comparisons made at once."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.array_checks import Floats
from estimators.errors import InputError


def adjust_p_values(p_values: ArrayLike, method: str = "holm") -> NDArray[np.float64]:
    """Adjust the p-values of one family of comparisons, such as all cells of a table.

    Parameters
    ----------
    p_values : (...) float
        P-values between 0 and 1, in any shape. NaN stands for a comparison that could not be
        made: it stays NaN and does not count.
    method : str
        Against any false alarm: bonferroni; holm, never larger; hochberg, for comparisons that
        are independent or go together. Against too large a part of false alarms among those
        called real: benjamini_hochberg, for the same; benjamini_yekutieli, whatever the
        dependence.

    Returns
    -------
    (...) float
        In the shape and order of the input: the smallest level at which each comparison would be
        called real.

    Raises
    ------
    InputError
        If a value does not lie between 0 and 1, or the method is unknown.

    References
    ----------
    Holm, S. (1979). Scandinavian Journal of Statistics 6, 65-70.
    Hochberg, Y. (1988). Biometrika 75, 800-802.
    Benjamini, Y., Hochberg, Y. (1995). Journal of the Royal Statistical Society B 57, 289-300.
    Benjamini, Y., Yekutieli, D. (2001). Annals of Statistics 29, 1165-1188.

    Examples
    --------
    >>> adjust_p_values([0.01, 0.04, 0.03, 0.005], "holm").round(3).tolist()
    [0.03, 0.06, 0.06, 0.02]
    """
    if method not in ADJUSTMENTS:
        raise InputError(
            "method",
            repr(method),
            "must be the name of an adjustment",
            "choose one of " + ", ".join(ADJUSTMENTS),
        )
    given = _checked(p_values)
    adjusted = np.full(given.shape, np.nan)
    known = ~np.isnan(given)
    if known.any():
        family = given[known]
        order = np.argsort(family, kind="stable")
        found = np.empty(len(family))
        found[order] = np.minimum(ADJUSTMENTS[method](family[order]), 1.0)
        adjusted[known] = found
    return adjusted


def _bonferroni(rising: Floats) -> Floats:
    return len(rising) * rising


def _holm(rising: Floats) -> Floats:
    return np.maximum.accumulate(_left(rising) * rising)


def _hochberg(rising: Floats) -> Floats:
    return _least_from_above(_left(rising) * rising)


def _benjamini_hochberg(rising: Floats) -> Floats:
    m = len(rising)
    return _least_from_above(m / np.arange(1, m + 1) * rising)


def _benjamini_yekutieli(rising: Floats) -> Floats:
    harmonic = float((1 / np.arange(1, len(rising) + 1)).sum())  # theorem 1.3
    return harmonic * _benjamini_hochberg(rising)


ADJUSTMENTS: dict[str, Callable[[Floats], Floats]] = {
    "bonferroni": _bonferroni,
    "holm": _holm,
    "hochberg": _hochberg,
    "benjamini_hochberg": _benjamini_hochberg,
    "benjamini_yekutieli": _benjamini_yekutieli,
}


def _left(rising: Floats) -> Floats:
    """(m,) how many comparisons are left from each p-value upwards: m, m-1, ... 1."""
    return np.arange(len(rising), 0, -1, dtype=float)


def _least_from_above(steps: Floats) -> Floats:
    """(m,) smallest of each entry and all that follow."""
    return np.asarray(np.minimum.accumulate(steps[::-1])[::-1], dtype=np.float64)


def _checked(p_values: ArrayLike) -> Floats:
    try:
        given = np.asarray(p_values, dtype=np.float64)
    except (TypeError, ValueError) as error:
        raise InputError(
            "p_values", repr(p_values), "must hold numbers only", "write a missing one as NaN"
        ) from error
    wrong = (given < 0) | (given > 1)
    if wrong.any():
        raise InputError(
            "p_values", given[wrong][0], "must lie between 0 and 1", "write 5 percent as 0.05"
        )
    return given
