"""The fan as a plotly figure."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.charts.fan_figure import LEFT, RIGHT, fan_config, fan_figure
from app.charts.fan_geometry import fan_geometry
from app.charts.palette import DARK, LIGHT
from tests.support.frozen_examples import mean_fan, share_fan, small_share_fan, total_fan

FANS = [mean_fan(), share_fan(), small_share_fan(), total_fan()]


def _texts(figure) -> str:
    return " | ".join(annotation.text for annotation in figure.layout.annotations)


@pytest.mark.parametrize("fan", FANS)
@pytest.mark.parametrize("palette", [LIGHT, DARK])
def test_panels_and_ranges_are_fixed(fan, palette):
    layout = fan_figure(fan, palette).layout
    assert (layout.xaxis.domain, layout.xaxis2.domain) == ((0.0, 0.38), (0.56, 1.0))
    for axis in (layout.xaxis, layout.xaxis2, layout.yaxis, layout.yaxis2):
        assert axis.fixedrange
        assert tuple(axis.range) == (0, 1)
    assert layout.height == 420
    assert layout.margin.r >= 64


@pytest.mark.parametrize("fan", FANS)
def test_the_band_joins_both_panels_at_the_interval(fan):
    geometry = fan_geometry(fan)
    path = fan_figure(fan, LIGHT).layout.shapes[0].path
    corners = [tuple(map(float, c.split(","))) for c in path.strip("MZ ").split(" L ")]
    assert corners[1] == pytest.approx((LEFT[1], geometry.left_band[0]), abs=1e-5)
    assert corners[2] == pytest.approx((RIGHT[0], geometry.right_band[0]), abs=1e-5)
    assert corners[5] == pytest.approx((RIGHT[0], geometry.right_band[1]), abs=1e-5)
    assert corners[6] == pytest.approx((LEFT[1], geometry.left_band[1]), abs=1e-5)


@pytest.mark.parametrize("fan", FANS)
def test_the_numbers_are_written_as_printed_elsewhere(fan):
    texts = _texts(fan_figure(fan, LIGHT))
    for text in (f"<b>{fan.value_text}</b>", fan.low_text, fan.high_text):
        assert text in texts


def test_the_curve_is_hatched_only_where_both_arms_agree():
    def hatched(fan) -> int:
        return sum(
            trace.xaxis == "x2" and trace.fillpattern.shape == "/"
            for trace in fan_figure(fan, LIGHT).data
            if trace.type == "scatter"
        )

    assert hatched(mean_fan()) == 1
    assert hatched(small_share_fan()) == 0


def test_a_share_is_a_column_solid_to_the_low_end():
    fan = share_fan()
    fills = {trace.fillcolor: trace for trace in fan_figure(fan, LIGHT).data}
    assert max(fills[LIGHT.people].y) == pytest.approx(fan.low)
    assert not any(trace.type == "bar" for trace in fan_figure(fan, LIGHT).data)


def test_the_endless_universe_is_drawn_only_when_asked():
    fan = mean_fan()
    asked = fan_figure(fan, LIGHT, show_endless=True)
    assert "endless" not in _texts(fan_figure(fan, LIGHT))
    assert "6.73 to 7.17" in _texts(asked)
    assert sum(trace.line.dash == "dot" for trace in asked.data if trace.type == "scatter") == 2
    none = replace(fan, endless_low=None, endless_high=None)
    assert "endless" not in _texts(fan_figure(none, LIGHT, show_endless=True))


def test_texts_from_outside_are_escaped():
    fan = replace(mean_fan(), left_title="<a href=x>", right_title="a & b", value_text="<i>7</i>")
    texts = _texts(fan_figure(fan, LIGHT))
    assert "<a" not in texts
    assert "<i>" not in texts
    assert "a &amp; b" in texts


def test_the_estimate_is_stroked_in_both_panels_at_its_height():
    fan = mean_fan()
    geometry = fan_geometry(fan)
    strokes = [s for s in fan_figure(fan, LIGHT).layout.shapes if s.type == "line"]
    assert [s.y0 for s in strokes] == [geometry.left_value, geometry.right_value]
    assert strokes[0].x1 == LEFT[1]


def test_the_picture_is_no_tool():
    assert fan_config()["displayModeBar"] is False


def test_a_census_and_an_endless_interval_can_be_drawn():
    census = replace(share_fan(), low=0.42, high=0.42, curve=())
    unknown = replace(mean_fan(), low=float("-inf"), high=float("inf"), curve=())
    for fan in (census, unknown):
        assert fan_figure(fan, DARK, height=360).layout.height == 360
