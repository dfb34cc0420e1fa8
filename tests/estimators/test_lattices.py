"""Values as whole-number positions."""

from __future__ import annotations

import numpy as np
import pytest

from estimators.lattices import decimal_numerators, exact_lattice, grid_lattice
from estimators.universes import Universe


def _values(lattice):
    return lattice.mean_of(lattice.positions, 1)


@pytest.mark.parametrize(
    ("values", "positions"),
    [
        ([1, 2, 5], [0, 1, 4]),
        ([10, 30, 70], [0, 1, 3]),  # common divisor 20
        ([0.1, 0.2, 0.3, 0.7], [0, 1, 2, 6]),
        ([-1.5, -0.1, 0, 2.2], [0, 14, 15, 37]),
        ([1e6, 1e6 + 0.25], [0, 1]),
        ([1 / 3, 2 / 3, 1, 5 / 3], [0, 1, 2, 4]),  # no short decimals
        ([0.1, 0.2, 0.1 + 0.2], [0, 1, 2]),  # a rounding error beside short decimals
    ],
)
def test_known_lattices(values, positions):
    lattice = exact_lattice(Universe(values, np.ones(len(values))))
    assert lattice.positions.tolist() == positions
    assert lattice.moved == 0
    np.testing.assert_allclose(_values(lattice), values, rtol=1e-12)


def test_decimal_values_come_back_to_the_last_digit():
    values = np.round(np.arange(-30, 40) * 0.07, 2)
    lattice = exact_lattice(Universe(values, np.ones(values.size)))
    np.testing.assert_array_equal(_values(lattice), np.unique(values))


def test_irregular_values_have_no_lattice(rng_values=(0.0, 1.0, 2**0.5, np.pi)):
    assert exact_lattice(Universe(rng_values, [1, 1, 1, 1])) is None


def test_numerators_are_whole():
    assert decimal_numerators(np.array([0.25, -3.0, 1e3])) == ([25, -300, 100000], 100)


def test_grid_keeps_the_mean_and_says_how_far_units_moved():
    values, counts = np.array([0.0, 1.0, 2**0.5, 10.0]), np.array([3, 1, 5, 2])
    lattice = grid_lattice(Universe(values, counts), 7)
    moved = np.repeat(values, counts) - np.repeat(_values(lattice), lattice.counts)
    assert moved.sum() == pytest.approx(0, abs=1e-12)
    assert lattice.moved == pytest.approx(np.sqrt((moved**2).mean()), rel=1e-12)
