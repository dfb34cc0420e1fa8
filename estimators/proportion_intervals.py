"""From what a sample says about a share to its confidence interval.

:func:`share_bounds` is the one way every share takes, single figures and tables alike: it reduces
the evidence to a number of equally precise answers, asks the method, and brings the bounds into
the universe. :func:`proportion_interval` does it for a count.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from estimators.array_checks import as_confidence, as_count
from estimators.errors import InputError
from estimators.hypergeometric_bounds import hypergeometric_bounds
from estimators.interval_checks import sampling_fraction
from estimators.proportion_methods import METHODS, Bounds, Numbers
from estimators.results import Interval
from estimators.share_evidence import ShareEvidence

__all__ = [
    "METHODS",
    "METHOD_NAMES",
    "ShareEvidence",
    "check_method",
    "open_to_whole_counts",
    "proportion_interval",
    "share_bounds",
    "share_interval",
]

METHOD_NAMES = (*METHODS, "hypergeometric")

_WHOLE = 1e-6  # a bound this close to a whole count is that count (part of one unit)
_EXTREME = 1e-12  # a share this close to 0 or 1 is a rounding error away from it


def share_bounds(
    evidence: ShareEvidence, *, method: str = "wilson", confidence: float = 0.95
) -> Bounds:
    """Work out the bounds of one or many shares: the one way every share takes.

    Parameters
    ----------
    evidence : ShareEvidence
        What the sample says.
    method : str
        A name in ``METHOD_NAMES``.
    confidence : float
        Between 0 and 1.

    Returns
    -------
    tuple of (low, high)
        Arrays in the shape of ``evidence.share``; NaN where it is NaN. Without degrees of freedom:
        0 and 1 (cut to what is known), for Wald minus and plus infinity.

    Raises
    ------
    InputError
        If the method is unknown or does not fit the sample, or confidence is not inside 0 to 1.
    """
    check_method(method)
    confidence = as_confidence(confidence)
    if method == "hypergeometric":
        return _exact_finite_bounds(evidence, confidence)
    share = np.asarray(_snapped(evidence.share))
    n_star = _effective_answers(evidence, method, confidence)
    usable = (n_star > 0) & np.isfinite(n_star)
    low, high = METHODS[method](share, np.where(usable, n_star, 1.0), confidence)
    nothing_known = (-np.inf, np.inf) if method == "wald" else (0.0, 1.0)
    certain = (n_star > 0) | np.isnan(share)  # a census, or no share at all
    low = np.where(usable, low, np.where(certain, share, nothing_known[0]))
    high = np.where(usable, high, np.where(certain, share, nothing_known[1]))
    if method == "wald":  # stays what its name promises
        return low, high
    return open_to_whole_counts(low, high, share, evidence.base, evidence.universe)


def share_interval(
    evidence: ShareEvidence, *, method: str = "wilson", confidence: float = 0.95
) -> Interval:
    """Give the interval of one share; see :func:`share_bounds`."""
    low, high = share_bounds(evidence, method=method, confidence=confidence)
    return Interval(float(low), float(high), confidence, method)


def open_to_whole_counts(
    low: Numbers, high: Numbers, share: Numbers, base: Numbers, universe: Numbers
) -> Bounds:
    """Move the bounds outwards to whole numbers of units, and inwards to what has been seen.

    In a universe of N units only the shares 0, 1/N, 2/N ... exist, and the people already asked
    are known: at least those who chose the answer, at most all but those who did not.

    Parameters
    ----------
    low, high : float or (m,) float
        Bounds as if the universe were endless.
    share, base : float or (m,) float
        Estimated share and rows with an answer, each row of equal weight.
    universe : float or (m,) float
        Units the share is taken of; NaN leaves the bounds alone.

    Returns
    -------
    tuple of (low, high)
        The bounds in the universe.
    """
    low, high = _as_floats(low, high)
    units = np.asarray(universe, dtype=float)
    base = np.asarray(base, dtype=float)
    seen = np.rint(np.asarray(share) * base)
    possible = seen, units - (base - seen)
    fewest = np.maximum(np.floor(low * units + _WHOLE), possible[0])
    most = np.minimum(np.ceil(high * units - _WHOLE), possible[1])
    closed = (fewest >= most) & (units > base)  # rounded to one count though some are unseen
    fewest = np.where(closed, np.maximum(most - 1, possible[0]), fewest)
    most = np.where(closed, np.minimum(fewest + 1, possible[1]), most)
    return (
        np.where(np.isnan(units), low, fewest / units),
        np.where(np.isnan(units), high, most / units),
    )


def proportion_interval(  # noqa: PLR0913 - the figures of one count, all but two with a default
    count: float,
    n: int,
    *,
    method: str = "wilson",
    confidence: float = 0.95,
    population_size: int | None = None,
    replacement: bool = False,
    design_effect: float = 1.0,
    degrees_of_freedom: float | None = None,
) -> Interval:
    """Give the confidence interval of a share from a count.

    Parameters
    ----------
    count : float
        Answers that chose it, 0 to n. A count that is not whole is read as a weighted share times
        n: its bounds are neither opened to whole counts nor cut to what has been seen.
    n : int
        Answers in all.
    method : str
        wald, wilson, agresti_coull, jeffreys, clopper_pearson, mid_p, logit, korn_graubard or
        hypergeometric (exact in a finite universe).
    confidence : float
        Between 0 and 1.
    population_size : int, optional
        Units in the universe; None for an endless one.
    replacement : bool
        Whether a unit could be drawn more than once; then the universe's size does not matter.
    design_effect : float
        Variance relative to simple random sampling without replacement of the same n.
    degrees_of_freedom : float, optional
        Behind the variance; n - 1 when not given.

    Returns
    -------
    Interval
        In parts of one. Short of a census its width is never zero, except Wald's.

    Raises
    ------
    InputError
        If an argument cannot be right; the message says which and what to do.

    References
    ----------
    Korn, E. L., Graubard, B. I. (1998). Survey Methodology 24, 193-201 (degrees of freedom).
    Dean, N., Pagano, M. (2015). Journal of Survey Statistics and Methodology 3, 484-503
    (other methods on an effective base).

    Examples
    --------
    >>> interval = proportion_interval(81, 263)
    >>> round(interval.low, 4), round(interval.high, 4)
    (0.2553, 0.3662)
    """
    n = as_count(n, "n")
    _check_count(count, n)
    _check_design(design_effect, degrees_of_freedom)
    fraction = sampling_fraction(n, population_size, replacement=replacement)
    units = None if replacement else population_size
    df = n - 1.0 if degrees_of_freedom is None else float(degrees_of_freedom)
    evidence = ShareEvidence(
        share=count / n,
        base=n,
        equivalent_base=n / (design_effect * (1 - fraction)) if fraction < 1 else math.inf,
        sampling_fraction=fraction,
        degrees_of_freedom=df,
        stand_in_effect=design_effect,
        universe=math.nan if units is None or count % 1 else units,
        simple_random=units is not None and design_effect == 1 and df >= n - 1 and not count % 1,
    )
    return share_interval(evidence, method=method, confidence=confidence)


def check_method(method: str) -> None:
    """Refuse a method that does not exist, by name."""
    if method not in METHOD_NAMES:
        raise InputError(
            "method",
            repr(method),
            "must be the name of a method for shares",
            "choose one of " + ", ".join(METHOD_NAMES),
        )


def _effective_answers(
    evidence: ShareEvidence, method: str, confidence: float
) -> NDArray[np.float64]:
    """Equivalent base x (t_(k-1) / t_df)^2, at most 1; Korn-Graubard at most base/(1-f)."""
    equivalent = evidence.usable_equivalent_base
    rows = np.asarray(evidence.base, dtype=float)
    factor = _degrees_factor(rows - 1, evidence.degrees_of_freedom, confidence)
    n_star = np.where(np.isinf(equivalent), np.inf, np.where(factor > 0, equivalent, 0.0) * factor)
    if method != "korn_graubard":
        return n_star
    unseen = np.maximum(1 - np.asarray(evidence.sampling_fraction), 0.0)
    with np.errstate(divide="ignore"):
        cap = rows / unseen
    return np.asarray(np.minimum(n_star, cap))


def _degrees_factor(
    full: NDArray[np.float64], available: Numbers, confidence: float
) -> NDArray[np.float64]:
    """(t_full / t_available)^2; 1 where nothing is lost and 0 where nothing is available."""
    given = np.asarray(available, dtype=float)
    some = (given > 0) & (given < full)
    upper = (1 + confidence) / 2
    wanted = special.stdtrit(np.where(some, full, 1.0), upper)
    found = special.stdtrit(np.where(some, given, 1.0), upper)
    return np.where(some, (wanted / found) ** 2, np.where(given >= full, 1.0, 0.0))


def _exact_finite_bounds(evidence: ShareEvidence, confidence: float) -> Bounds:
    """Bounds of the hypergeometric method, share by share."""
    if not evidence.simple_random:
        raise InputError(
            "method",
            "'hypergeometric'",
            "must fit the sample: it is exact only for everyone in a simple random sample drawn "
            "without replacement from a universe of known size, with whole counts",
            "choose korn_graubard or wilson here",
        )
    share, base, units = np.broadcast_arrays(evidence.share, evidence.base, evidence.universe)
    low, high = np.full(share.shape, np.nan), np.full(share.shape, np.nan)
    for place in np.ndindex(share.shape):
        if not np.isnan(share[place]):
            rows, universe = int(base[place]), int(units[place])
            count = round(float(share[place]) * rows)
            fewest, most = hypergeometric_bounds(count, rows, universe, confidence)
            low[place], high[place] = fewest / universe, most / universe
    return low, high


def _snapped(share: Numbers) -> NDArray[np.float64]:
    """Remove rounding errors next to 0 and 1 from the share."""
    p = np.asarray(share, dtype=float)
    return np.where(p < _EXTREME, 0.0, np.where(p > 1 - _EXTREME, 1.0, p))


def _as_floats(*numbers: ArrayLike) -> list[NDArray[np.float64]]:
    return [np.asarray(number, dtype=float) for number in numbers]


def _check_count(count: float, n: int) -> None:
    if not 0 <= count <= n:
        raise InputError(
            "count", count, f"must lie between 0 and n = {n}", "give the answers that chose it"
        )


def _check_design(design_effect: float, degrees_of_freedom: float | None) -> None:
    if not (math.isfinite(design_effect) and design_effect > 0):
        raise InputError(
            "design_effect", design_effect, "must be a positive number", "use 1 if none is known"
        )
    if degrees_of_freedom is not None and not degrees_of_freedom >= 0:
        raise InputError(
            "degrees_of_freedom",
            degrees_of_freedom,
            "must not be negative",
            "use the number of clusters minus the number of strata",
        )
