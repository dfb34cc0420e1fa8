"""Listing every sample that differs, against listing every sample."""

from __future__ import annotations

import numpy as np
import pytest

from estimators.listed_sums import listed_means, listing_is_short
from tests.support import slow_sums

TINY = [
    ([1, 2, 4, 7, 8], [1, 1, 2, 3, 1]),
    ([-2, 0, 5], [2, 3, 1]),
    ([3, 3000], [4, 2]),
]


@pytest.mark.parametrize(("values", "counts"), TINY)
@pytest.mark.parametrize("replacement", [False, True])
def test_every_sample(values, counts, replacement):
    units = np.repeat(values, counts).tolist()
    for n in range(1, 5 if replacement else len(units) + 1):
        means, probabilities = listed_means(
            np.array(values, dtype=float), np.array(counts), n, replacement=replacement
        )
        exact = slow_sums.every_sample(units, n, replacement=replacement)
        np.testing.assert_allclose(means, [total / n for total in exact], rtol=1e-15)
        np.testing.assert_allclose(probabilities, [float(p) for p in exact.values()], rtol=1e-13)


def test_equal_sums_of_decimals_are_one_sum():
    # 0.1 + 0.2 and 0.3 + 0.0 differ in binary
    means, probabilities = listed_means(
        np.array([0.0, 0.1, 0.2, 0.3]), np.ones(4, dtype=int), 2, replacement=False
    )
    np.testing.assert_allclose(means, [0.05, 0.1, 0.15, 0.2, 0.25], rtol=1e-15)
    np.testing.assert_allclose(probabilities, np.array([1, 1, 2, 1, 1]) / 6, rtol=1e-14)


def test_length_of_the_list_decides():
    few, many = np.array([5, 5, 5]), np.array([5000, 5000, 5000])
    assert listing_is_short(3, few, 7, replacement=False)
    assert listing_is_short(3, few, 14, replacement=False)  # one is left out
    assert not listing_is_short(3, many, 7000, replacement=False)
    assert not listing_is_short(3, many, 100_000, replacement=True)
