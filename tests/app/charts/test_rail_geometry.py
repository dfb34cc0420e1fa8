"""Places of a rail's parts."""

from __future__ import annotations

import math

import pytest

from app.charts.rail_geometry import rail_parts
from tests.support.frozen_examples import empty_rail, shown_rail


def test_parts_of_a_share_lie_where_the_numbers_are():
    parts = rail_parts(shown_rail(0.42, 0.38, 0.46))
    assert parts.solid == pytest.approx((0, 0.38))
    assert parts.hatch == pytest.approx((0.38, 0.46))
    assert parts.stroke == pytest.approx(0.42)
    assert parts.zero is None


def test_a_change_of_unit_moves_nothing():
    share = rail_parts(shown_rail(0.42, 0.38, 0.46))
    points = rail_parts(shown_rail(42, 38, 46, axis=(0.0, 100.0)))
    assert points.solid == pytest.approx(share.solid)
    assert points.hatch == pytest.approx(share.hatch)


def test_a_scale_without_a_natural_zero_has_no_solid():
    parts = rail_parts(shown_rail(6.95, 6.77, 7.13, axis=(0.0, 10.0), solid=False))
    assert parts.solid is None
    assert parts.hatch == pytest.approx((0.677, 0.713))


@pytest.mark.parametrize("sign", [1, -1])
def test_a_difference_is_solid_from_nought_to_the_near_end(sign):
    low, high = sorted((sign * 0.03, sign * 0.11))
    parts = rail_parts(shown_rail(sign * 0.07, low, high, axis=(-0.2, 0.2)))
    near = 0.5 + sign * 0.075
    assert sorted(parts.solid) == pytest.approx(sorted((0.5, near)))
    assert parts.zero == pytest.approx(0.5)


def test_a_difference_whose_interval_holds_nought_is_hatched_only():
    parts = rail_parts(shown_rail(0.04, -0.02, 0.09, axis=(-0.2, 0.2)))
    assert parts.solid is None
    assert parts.hatch == pytest.approx((0.45, 0.725))


def test_infinite_ends_reach_the_ends_of_the_rail():
    parts = rail_parts(shown_rail(0.4, -math.inf, math.inf))
    assert parts.hatch == (0, 1)
    assert parts.solid is None


def test_a_census_has_no_hatch():
    parts = rail_parts(shown_rail(0.4, 0.4, 0.4))
    assert parts.hatch is None
    assert parts.solid == pytest.approx((0, 0.4))


@pytest.mark.parametrize("state", ["held back", "hidden"])
def test_a_rail_without_a_figure_has_no_parts(state):
    parts = rail_parts(shown_rail(0.42, 0.38, 0.46, state=state))
    assert (parts.solid, parts.hatch, parts.stroke, parts.zero) == (None,) * 4
    assert rail_parts(empty_rail("", state=state)) == parts
