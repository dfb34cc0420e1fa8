"""The sampling fraction of a summary."""

from __future__ import annotations

import pytest

from estimators.errors import InputError
from estimators.interval_checks import sampling_fraction


def test_sampling_fraction_is_zero_where_no_correction_applies():
    assert sampling_fraction(10, None, replacement=False) == 0
    assert sampling_fraction(10, 4, replacement=True) == 0
    assert sampling_fraction(10, 40, replacement=False) == 0.25


@pytest.mark.parametrize("population_size", [9, 10.5, float("nan"), "many"])
def test_wrong_universes_are_refused(population_size):
    with pytest.raises(InputError, match="population_size must be a whole number of 10 or more"):
        sampling_fraction(10, population_size, replacement=False)
