"""Exact bounds of a count against a search through every universe, and a published table."""

from __future__ import annotations

import json
import math
from fractions import Fraction
from pathlib import Path

import pytest

from estimators.hypergeometric_bounds import hypergeometric_bounds

PUBLISHED = Path(__file__).parents[1] / "published_values"
DETECTION = json.loads((PUBLISHED / "intervals_detection.json").read_text(encoding="utf-8"))


def _chance(count, n, size, units):
    return Fraction(
        math.comb(units, count) * math.comb(size - units, n - count), math.comb(size, n)
    )


def _searched(count, n, size, tail):
    """Every number of units that neither tail test rejects, in exact fractions."""
    kept = [
        units
        for units in range(count, size - n + count + 1)
        if sum(_chance(c, n, size, units) for c in range(count, n + 1)) > tail
        and sum(_chance(c, n, size, units) for c in range(count + 1)) > tail
    ]
    return kept[0], kept[-1]


@pytest.mark.parametrize(("n", "size"), [(1, 5), (4, 9), (10, 30), (12, 80)])
@pytest.mark.parametrize("confidence", [0.8, 0.95])
def test_search_through_every_universe_agrees(n, size, confidence):
    tail = Fraction((1 - confidence) / 2)
    for count in range(n + 1):
        assert hypergeometric_bounds(count, n, size, confidence) == _searched(count, n, size, tail)


@pytest.mark.parametrize(
    "case", DETECTION, ids=lambda c: f"{c['units_with']}-{c['population_size']}"
)
def test_published_sample_size_that_finds_at_least_one(case):
    # none among the printed n: the one-sided 95 percent limit is below the number of units sought
    size, units, n = case["population_size"], case["units_with"], case["n"]
    assert hypergeometric_bounds(0, n, size, 0.90)[1] < units
    assert hypergeometric_bounds(0, n - 1, size, 0.90)[1] >= units


def test_one_unit_short_of_a_census_both_possibilities_stay():
    # 99 of 100 seen, all of them with the property: the tests alone would leave 100 units
    assert hypergeometric_bounds(99, 99, 100, 0.95) == (99, 100)
    assert hypergeometric_bounds(98, 99, 100, 0.95) == (98, 99)
    assert hypergeometric_bounds(1, 99, 100, 0.95) == (1, 2)
    assert hypergeometric_bounds(5, 100, 100, 0.95) == (5, 5)


def test_ten_million_units():
    # second opinion: the tail areas at and next to the bounds, summed with exact integers
    fewest, most = hypergeometric_bounds(3, 40, 10**7, 0.95)
    tail = Fraction((1 - 0.95) / 2)

    def at_least(units):
        return 1 - sum(_chance(c, 40, 10**7, units) for c in range(3))

    def at_most(units):
        return sum(_chance(c, 40, 10**7, units) for c in range(4))

    assert at_least(fewest) > tail >= at_least(fewest - 1)
    assert at_most(most) > tail >= at_most(most + 1)
