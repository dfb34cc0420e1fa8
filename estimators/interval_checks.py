"""The check of a sample against its universe that intervals from a summary share."""

from __future__ import annotations

from estimators.array_checks import as_count


def sampling_fraction(n: int, population_size: int | None, *, replacement: bool) -> float:
    """Give the part of the universe that was drawn, 0 where no correction applies.

    Parameters
    ----------
    n : int
        Answers.
    population_size : int or None
        Units in the universe; None for an endless one.
    replacement : bool
        Whether a unit could be drawn more than once.

    Returns
    -------
    float
        n / population_size, or 0.

    Raises
    ------
    InputError
        If the universe is not a whole number, or smaller than a sample without replacement.
    """
    if population_size is None:
        return 0.0
    size = as_count(population_size, "population_size", least=1 if replacement else n)
    return 0.0 if replacement else n / size
