"""Exact bounds for a count in a finite universe, from a simple random sample of it."""

from __future__ import annotations

from collections.abc import Callable

from scipy import stats


def hypergeometric_bounds(
    count: int, n: int, population_size: int, confidence: float
) -> tuple[int, int]:
    """Give the fewest and the most units that agree with the sample, each tail tested alone.

    Parameters
    ----------
    count : int
        Sampled units that have the property, 0 to n.
    n : int
        Sampled units, drawn without replacement.
    population_size : int
        Units in the universe, at least n.
    confidence : float
        Between 0 and 1; each tail gets half of what is left.

    Returns
    -------
    tuple of (fewest, most)
        Units of the universe that have the property. Short of a census the two differ: where the
        tests leave a single count, its neighbours that are possible are added.

    References
    ----------
    Buonaccorsi, J. P. (1987). The American Statistician 41, 215-218.
    """
    tail = (1 - confidence) / 2
    least, greatest = count, population_size - (n - count)
    fewest = _first(
        lambda units: bool(stats.hypergeom.sf(count - 1, population_size, units, n) > tail),
        least,
        greatest,
    )
    above = _first(
        lambda units: bool(stats.hypergeom.cdf(count, population_size, units, n) <= tail),
        least,
        greatest + 1,
    )
    most = above - 1
    if fewest == most and n < population_size:
        return max(least, fewest - 1), min(greatest, most + 1)
    return fewest, most


def _first(holds: Callable[[int], bool], low: int, high: int) -> int:
    """Smallest whole number in low..high where a monotone condition holds; high if none before."""
    while low < high:
        middle = (low + high) // 2
        if holds(middle):
            high = middle
        else:
            low = middle + 1
    return low
