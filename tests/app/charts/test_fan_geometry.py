"""The fan's geometry: true thickness, meeting corners, areas of steps, labels apart."""

from __future__ import annotations

import math
from dataclasses import replace
from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.charts.fan_geometry import (
    Span,
    curve_outline,
    end_labels,
    enlarged_text,
    fan_geometry,
    inside_band,
    spread,
    stepped,
    thinned,
)
from app.study.pictures import CurvePoint
from tests.support.frozen_examples import mean_fan, share_fan, small_share_fan, total_fan

FANS = [mean_fan(), share_fan(), small_share_fan(), total_fan()]


@pytest.mark.parametrize("fan", FANS)
def test_the_band_is_true_to_scale_in_both_panels(fan):
    geometry = fan_geometry(fan)
    per_unit = (fan.high - fan.low) / fan.factor
    left = geometry.left_band[1] - geometry.left_band[0]
    right = geometry.right_band[1] - geometry.right_band[0]
    assert left * geometry.left.length == pytest.approx(per_unit)
    assert right * geometry.right.length == pytest.approx(fan.high - fan.low)
    assert right / left == pytest.approx(geometry.enlarged)


@pytest.mark.parametrize("fan", FANS)
def test_the_corners_of_the_fan_are_the_interval_in_either_range(fan):
    geometry = fan_geometry(fan)
    for height, bound in zip(geometry.right_band, (fan.low, fan.high), strict=True):
        assert geometry.right.low + height * geometry.right.length == pytest.approx(bound)
    for height, bound in zip(geometry.left_band, (fan.low, fan.high), strict=True):
        value = geometry.left.low + height * geometry.left.length
        assert value * fan.factor == pytest.approx(bound)


@pytest.mark.parametrize("fan", FANS)
def test_the_right_panel_never_shows_what_the_scale_does_not_have(fan):
    geometry = fan_geometry(fan)
    assert geometry.right.low >= geometry.left.low * fan.factor
    assert geometry.right.high <= geometry.left.high * fan.factor
    assert geometry.enlarged >= 1


def test_infinite_bounds_reach_the_edges_and_have_no_label():
    fan = replace(mean_fan(), low=-math.inf, high=math.inf)
    geometry = fan_geometry(fan)
    assert geometry.left_band == geometry.right_band == (0, 1)
    assert [label.text for label in end_labels(fan, geometry, 0.05)] == ["6.95"]


def test_one_infinite_bound_leaves_the_other_in_its_place():
    fan = replace(mean_fan(), high=math.inf)
    geometry = fan_geometry(fan)
    assert geometry.right_band[1] == 1
    assert geometry.right.low < fan.low < fan.value < geometry.right.high
    assert [label.text for label in end_labels(fan, geometry, 0.05)] == ["6.77", "6.95"]


def test_a_census_shows_the_whole_scale():
    fan = replace(share_fan(), low=0.42, high=0.42, curve=())
    geometry = fan_geometry(fan)
    assert geometry.right == geometry.left
    assert geometry.curve == ()


@pytest.mark.parametrize(
    ("enlarged", "text"),
    [
        (1.0, ""),
        (1.24, ""),
        (1.5, "enlarged 1.5 times"),
        (2.0, "enlarged 2 times"),
        (13.2, "enlarged 13 times"),
    ],
)
def test_the_enlargement_is_said_in_words(enlarged, text):
    assert enlarged_text(enlarged) == text


def test_steps_hold_the_area_of_their_points():
    points = list(small_share_fan().curve)
    corners = stepped(points)
    area = sum(
        (end - start) * height
        for (start, height), (end, _) in zip(corners[::2], corners[1::2], strict=True)
    )
    assert area == pytest.approx(1 / 40)  # probabilities add up to 1, values lie 1/40 apart


def test_steps_on_uneven_values_touch_at_the_middles():
    corners = stepped([CurvePoint(0, 1), CurvePoint(1, 2), CurvePoint(5, 3)])
    assert corners == [(-0.5, 1), (0.5, 1), (0.5, 2), (3, 2), (3, 3), (7, 3)]


def test_thinning_keeps_sums_and_the_limit():
    points = [CurvePoint(float(i), float(i % 7)) for i in range(480)]
    few = thinned(points, 160)
    assert len(few) == 160
    assert 3 * sum(p.height for p in few) == pytest.approx(sum(p.height for p in points))
    assert thinned(points[:100], 160) == points[:100]
    assert thinned([], 160) == []


@pytest.mark.parametrize("fan", FANS)
def test_the_longest_point_of_the_curve_has_length_one(fan):
    outline = curve_outline(fan, fan_geometry(fan).right)
    assert max(length for _, length in outline) == pytest.approx(1)
    heights = [height for height, _ in outline]
    assert heights == sorted(heights)


def test_the_hatched_piece_is_cut_at_the_edges_of_the_band():
    outline = ((0.0, 0.0), (0.5, 1.0), (1.0, 0.0))
    piece = inside_band(outline, (0.25, 0.75))
    assert piece == ((0.25, 0.5), (0.5, 1.0), (0.75, 0.5))


def test_the_hatched_piece_of_a_normal_curve_holds_95_of_100():
    fan = share_fan()
    geometry = fan_geometry(fan)
    piece = inside_band(geometry.curve, geometry.right_band)

    def area(points) -> float:
        return sum((h1 - h0) * (l0 + l1) / 2 for (h0, l0), (h1, l1) in pairwise(points))

    whole = (fan.high - fan.low) / 3.92 * math.sqrt(2 * math.pi) / geometry.right.length
    # the normal distribution holds 0.95 within 1.96 standard errors
    assert area(piece) / whole == pytest.approx(0.95, abs=0.002)


def test_labels_make_room_and_keep_their_order():
    fan = replace(small_share_fan(), low=0.07)
    labels = end_labels(fan, fan_geometry(fan), 0.08)
    heights = [label.height for label in labels]
    assert [label.text for label in labels] == [fan.low_text, fan.value_text, fan.high_text]
    assert all(b - a >= 0.08 - 1e-12 for a, b in pairwise(heights))


def test_an_end_that_prints_as_the_estimate_in_the_same_place_is_written_once():
    fan = replace(share_fan(), value=0.0, low=0.0, high=0.09, value_text="0 %", low_text="0 %")
    assert [label.text for label in end_labels(fan, fan_geometry(fan), 0.08)] == [
        "0 %",
        fan.high_text,
    ]


@given(st.lists(st.floats(0, 1), min_size=1, max_size=5), st.floats(0.01, 0.2))
def test_spread_labels_are_apart_inside_and_unmoved_where_there_is_room(places, gap):
    wanted = sorted(places)
    moved = spread(list(wanted), gap)
    assert len(moved) == len(wanted)
    assert all(-1e-9 <= place <= 1 + 1e-9 for place in moved)
    assert all(b - a >= gap - 1e-9 for a, b in pairwise(moved))
    if all(b - a >= gap for a, b in pairwise(wanted)):
        assert moved == pytest.approx(wanted)


def test_span_keeps_values_inside():
    span = Span(2.0, 6.0)
    assert [span.height_of(v) for v in (0, 2, 3, 6, math.inf)] == [0, 0, 0.25, 1, 1]
