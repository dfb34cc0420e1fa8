"""Methods for the interval of a share: one function each, and a table from name to function.

Every method is a function of the share and of ``n_star``, the number of answers of a simple random
sample from an endless universe that would say as much. All of them take numbers or arrays.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

Numbers = float | NDArray[np.float64]
Bounds = tuple[NDArray[np.float64], NDArray[np.float64]]

_MID_P_HALVINGS = 60


def wald(share: Numbers, n_star: Numbers, confidence: float) -> Bounds:
    """Give the textbook interval, share plus and minus z standard errors, neither cut nor mended.

    Parameters
    ----------
    share : float or (m,) float
        Estimated share, 0 to 1.
    n_star : float or (m,) float
        Answers of an equally precise simple random sample; positive, need not be whole.
    confidence : float
        Between 0 and 1.

    Returns
    -------
    tuple of (low, high)
        Same shape as the input; may lie outside 0 to 1.

    References
    ----------
    Newcombe, R. G. (1998). Statistics in Medicine 17, 857-872, method 1.
    """
    p, n = _as_floats(share, n_star)
    half = _z(confidence) * np.sqrt(p * (1 - p) / n)
    return p - half, p + half


def wilson(share: Numbers, n_star: Numbers, confidence: float) -> Bounds:
    """Give the score interval without continuity correction.

    Parameters and returns are those of :func:`wald`; the bounds lie in 0 to 1.

    References
    ----------
    Wilson, E. B. (1927). Journal of the American Statistical Association 22, 209-212.
    Newcombe, R. G. (1998). Statistics in Medicine 17, 857-872, method 3.
    """
    p, n = _as_floats(share, n_star)
    z2 = _z(confidence) ** 2 / n
    high = (p + z2 / 2 + np.sqrt(z2 * (p * (1 - p) + z2 / 4))) / (1 + z2)
    low = p**2 / ((1 + z2) * high)  # the product of both roots: no digits cancel
    return _within(p, low, high)


def agresti_coull(share: Numbers, n_star: Numbers, confidence: float) -> Bounds:
    """Give the Wald interval around the centre of the score interval, cut to 0 to 1.

    Parameters and returns are those of :func:`wald`.

    References
    ----------
    Agresti, A., Coull, B. A. (1998). The American Statistician 52, 119-126.
    """
    p, n = _as_floats(share, n_star)
    z = _z(confidence)
    wider = n + z**2
    centre = (p * n + z**2 / 2) / wider
    half = z * np.sqrt(centre * (1 - centre) / wider)
    return np.clip(centre - half, 0.0, 1.0), np.clip(centre + half, 0.0, 1.0)


def jeffreys(share: Numbers, n_star: Numbers, confidence: float) -> Bounds:
    """Give the equal-tailed interval of the Beta(1/2, 1/2) prior; 0 at none and 1 at all.

    Parameters and returns are those of :func:`wald`.

    References
    ----------
    Brown, L. D., Cai, T. T., DasGupta, A. (2001). Statistical Science 16, 101-133, section 3.1.2.
    """
    p, n = _as_floats(share, n_star)
    tail = (1 - confidence) / 2
    a, b = p * n + 0.5, (1 - p) * n + 0.5
    return _within(p, special.betaincinv(a, b, tail), special.betaincinv(a, b, 1 - tail))


def clopper_pearson(share: Numbers, n_star: Numbers, confidence: float) -> Bounds:
    """Give the exact binomial interval; counts that are not whole go through the beta function.

    Parameters and returns are those of :func:`wald`.

    References
    ----------
    Clopper, C. J., Pearson, E. S. (1934). Biometrika 26, 404-413.
    """
    p, n = _as_floats(share, n_star)
    tail = (1 - confidence) / 2
    low = _beta_quantile(p * n, (1 - p) * n + 1, tail)
    high = _beta_quantile(p * n + 1, (1 - p) * n, 1 - tail)
    return _within(p, low, high)


def korn_graubard(share: Numbers, n_star: Numbers, confidence: float) -> Bounds:
    """Give the exact binomial interval on an effective base that the degrees of freedom reduced.

    The reduction and the cap at base/(1-f) are made by :func:`share_bounds`, as they need the
    sample. Parameters and returns are those of :func:`wald`.

    References
    ----------
    Korn, E. L., Graubard, B. I. (1998). Survey Methodology 24, 193-201.
    """
    return clopper_pearson(share, n_star, confidence)


def mid_p(share: Numbers, n_star: Numbers, confidence: float) -> Bounds:
    """Give the exact binomial interval that counts half of the probability of what was seen.

    Parameters and returns are those of :func:`wald`.

    References
    ----------
    Newcombe, R. G. (1998). Statistics in Medicine 17, 857-872, method 6.
    """
    p, n = np.broadcast_arrays(*_as_floats(share, n_star))
    tail = (1 - confidence) / 2
    low = _mid_p_low(p * n, (1 - p) * n, tail)
    high = 1 - _mid_p_low((1 - p) * n, p * n, tail)
    return _within(p, low, high)


def logit(share: Numbers, n_star: Numbers, confidence: float) -> Bounds:
    """Give the Wald interval of the log odds; at none and at all the exact binomial one.

    Parameters and returns are those of :func:`wald`.

    References
    ----------
    Brown, L. D., Cai, T. T., DasGupta, A. (2001). Statistical Science 16, 101-133, section 4.2.
    """
    p, n = np.broadcast_arrays(*_as_floats(share, n_star))
    inner = np.where((p > 0) & (p < 1), p, 0.5)
    centre = special.logit(inner)
    half = _z(confidence) / np.sqrt(n * inner * (1 - inner))
    exact_low, exact_high = clopper_pearson(p, n, confidence)
    low = np.where(inner == p, special.expit(centre - half), exact_low)
    high = np.where(inner == p, special.expit(centre + half), exact_high)
    return _as_given(low, high)


METHODS: dict[str, Callable[[Numbers, Numbers, float], Bounds]] = {
    "wald": wald,
    "wilson": wilson,
    "agresti_coull": agresti_coull,
    "jeffreys": jeffreys,
    "clopper_pearson": clopper_pearson,
    "mid_p": mid_p,
    "logit": logit,
    "korn_graubard": korn_graubard,
}


def _mid_p_low(
    x: NDArray[np.float64], rest: NDArray[np.float64], tail: float
) -> NDArray[np.float64]:
    """Solve P(X > x) + P(X = x)/2 = tail for the share by halving; 0 where x is 0."""
    low = _beta_quantile(x, rest + 1, tail)
    high = _beta_quantile(x + 1, rest, tail)
    for _ in range(_MID_P_HALVINGS):
        middle = (low + high) / 2
        below = (_beta_tail(x, rest + 1, middle) + _beta_tail(x + 1, rest, middle)) / 2 < tail
        low, high = np.where(below, middle, low), np.where(below, high, middle)
    return (low + high) / 2


def _beta_quantile(
    a: NDArray[np.float64], b: NDArray[np.float64], probability: float
) -> NDArray[np.float64]:
    """Quantile of the beta distribution; 0 where a is 0 and 1 where b is 0."""
    inside = special.betaincinv(np.where(a > 0, a, 1.0), np.where(b > 0, b, 1.0), probability)
    return np.where(a <= 0, 0.0, np.where(b <= 0, 1.0, inside))


def _beta_tail(
    a: NDArray[np.float64], b: NDArray[np.float64], share: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Distribution function of the beta distribution; 1 where a is 0 and 0 where b is 0."""
    inside = special.betainc(np.where(a > 0, a, 1.0), np.where(b > 0, b, 1.0), share)
    return np.where(a <= 0, 1.0, np.where(b <= 0, 0.0, inside))


def _within(share: NDArray[np.float64], low: ArrayLike, high: ArrayLike) -> Bounds:
    """Bounds cut to 0 and 1, exactly 0 at none and exactly 1 at all."""
    return _as_given(
        np.where(share <= 0, 0.0, np.maximum(low, 0.0)),
        np.where(share >= 1, 1.0, np.minimum(high, 1.0)),
    )


def _as_given(low: NDArray[np.float64], high: NDArray[np.float64]) -> Bounds:
    """Return numbers for numbers and arrays for arrays."""
    return low[()], high[()]


def _as_floats(first: Numbers, second: Numbers) -> Bounds:
    return np.asarray(first, dtype=float), np.asarray(second, dtype=float)


def _z(confidence: float) -> float:
    """Two-sided quantile of the normal distribution."""
    return float(special.ndtri((1 + confidence) / 2))
