"""Checks that every interval and sampling distribution shares, each message naming its argument."""

from __future__ import annotations

import math

from estimators.errors import InputError


def check_confidence(confidence: float) -> None:
    """Refuse a confidence level that is not strictly between 0 and 1.

    Parameters
    ----------
    confidence : float
        As given by the caller.

    Raises
    ------
    InputError
        If it is outside.
    """
    if not 0 < confidence < 1:
        raise InputError(
            "confidence", confidence, "must lie between 0 and 1", "write 95 percent as 0.95"
        )


def check_n(n: float) -> None:
    """Refuse a number of answers or draws that is not whole and at least 1.

    Parameters
    ----------
    n : int
        As given by the caller.

    Raises
    ------
    InputError
        If it is not.
    """
    if not (math.isfinite(n) and n >= 1 and n % 1 == 0):
        raise InputError(
            "n", n, "must be a whole number, 1 or more", "give the number of answers in the sample"
        )


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
    least = 1 if replacement else n
    if not (
        math.isfinite(population_size) and population_size >= least and population_size % 1 == 0
    ):
        raise InputError(
            "population_size",
            population_size,
            f"must be a whole number, {least} or more",
            "correct it, or say that units were drawn with replacement",
        )
    return 0.0 if replacement else n / population_size
