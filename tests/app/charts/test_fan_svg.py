"""The fan as SVG."""

from __future__ import annotations

import re
import xml.etree.ElementTree as ET
from dataclasses import replace

import pytest

from app.charts.fan_geometry import fan_geometry
from app.charts.fan_svg import PANEL_HEIGHT, fan_svg
from tests.support.frozen_examples import mean_fan, share_fan, small_share_fan, total_fan

FANS = [mean_fan(), share_fan(), small_share_fan(), total_fan()]


def _named(svg: str, name: str) -> list[ET.Element]:
    return [e for e in ET.fromstring(svg).iter() if e.get("class") == name]


@pytest.mark.parametrize("fan", FANS)
def test_the_picture_says_itself_in_words_and_carries_no_style(fan):
    svg = fan_svg(fan)
    root = ET.fromstring(svg)
    assert (root.get("role"), root.find("title").text) == ("img", fan.alternative)
    assert "style" not in svg
    assert "http" not in svg


@pytest.mark.parametrize("fan", FANS)
def test_the_band_is_true_to_scale(fan):
    geometry = fan_geometry(fan)
    left, right = _named(fan_svg(fan), "hr-band")[:2]
    for band, box in ((geometry.left_band, left), (geometry.right_band, right)):
        assert float(box.get("height")) == pytest.approx(
            PANEL_HEIGHT * (band[1] - band[0]), abs=0.11
        )


@pytest.mark.parametrize("fan", FANS)
def test_every_number_is_written_once(fan):
    text = " ".join(" ".join(t.itertext()) for t in ET.fromstring(fan_svg(fan)).iter("text"))
    for number in (fan.value_text, fan.low_text, fan.high_text):
        assert len(re.findall(rf"(?<![\d.]){re.escape(number)}(?![\d.])", text)) == 1


def test_the_hatch_follows_the_agreement_of_the_arms():
    assert len(_named(fan_svg(mean_fan()), "hr-hatch-fill")) == 1
    assert not _named(fan_svg(small_share_fan()), "hr-hatch-fill")


@pytest.mark.parametrize("fan", FANS)
def test_gutters_leave_the_panels_in_order(fan):
    boxes = _named(fan_svg(fan), "hr-band")
    left, right = boxes[0], boxes[1]
    ends = [float(b.get(k).rstrip("%")) for b in (left, right) for k in ("x", "width")]
    assert 0 < ends[0] < ends[0] + ends[1] < ends[2] < ends[2] + ends[3] < 100


def test_texts_from_outside_are_escaped():
    hostile = "<script>x</script>"
    fan = replace(mean_fan(), left_title=hostile, alternative=hostile, value_text=hostile)
    assert "<script" not in fan_svg(fan)


def test_unknown_ends_and_no_curve_can_be_drawn():
    fan = replace(mean_fan(), low=float("-inf"), high=float("inf"), curve=())
    assert not _named(fan_svg(fan), "hr-curve")
    assert len(_named(fan_svg(fan), "hr-fan-end")) == 0
