"""Every so-many-th unit of an ordered list: neighbours tell how far a figure may be off.

One systematic sample holds a single random start, so no variance can be estimated without a model.
Here units that follow each other are compared, two by two, as if each pair had been drawn at
random from its stretch of the list. This counts what the order of the list gains.

References
----------
Wolter, K. M. (2007). Introduction to Variance Estimation, 2nd ed., section 8.2, estimator v3
(successive differences that do not overlap).
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike

from estimators.array_checks import Codes, as_numbers, frozen
from estimators.errors import InputError
from estimators.sampling_stages import SamplingStages, stages_of_rows


def systematic_stages(order: ArrayLike, population_size: int) -> SamplingStages:
    """Return stages in which two rows that follow each other in the list form a stratum.

    Parameters
    ----------
    order : (n,) float
        Place of each row in the list; only which comes first matters.
    population_size : int
        Units on the list.

    Raises
    ------
    InputError
        If a place is missing or taken twice.
    """
    places = _places(order)
    n = len(places)
    pair = np.minimum(places // 2, max(n // 2 - 1, 0))  # an odd one joins the last pair
    there = np.bincount(pair).astype(np.float64) * (population_size / n)
    stages = stages_of_rows(pair, there, ())
    # Who answers is a matter of chance over the whole list, not within two neighbours.
    return replace(stages, response_group=frozen(np.zeros(n, np.intp)))


def _places(order: ArrayLike) -> Codes:
    """(n,) 0 for the first row of the list, 1 for the next."""
    numbers = as_numbers(order, "order", np.size(order))
    if not np.isfinite(numbers).all():
        row = int(np.flatnonzero(~np.isfinite(numbers))[0])
        raise InputError(
            "order",
            f"{numbers[row]} in row {row}",
            "must be a finite number for every row",
            "give the place of that row in the list",
        )
    kinds, places = np.unique(numbers, return_inverse=True)
    if len(kinds) < len(numbers):
        twice = int(np.flatnonzero(np.bincount(places) > 1)[0])
        raise InputError(
            "order",
            f"{kinds[twice]:g} in two rows",
            "must give every row a place of its own",
            "number the rows in the order of the list",
        )
    return places.astype(np.intp)
