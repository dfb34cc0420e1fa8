"""Rails as SVG, HTML and image."""

from __future__ import annotations

import base64
import re
import xml.etree.ElementTree as ET

import pytest

from app.charts.palette import DARK, LIGHT
from app.charts.rail_svg import HATCH_ID, pattern_defs, percent, rail_html, rail_image, rail_svg
from tests.support.frozen_examples import empty_rail, shown_rail

HOSTILE = "<img src=x onerror=alert(1)> & \"quotes\" 'too'"


def _classes(svg: str) -> list[str]:
    return [e.get("class") for e in ET.fromstring(svg).iter() if e.get("class")]


@pytest.mark.parametrize("low", [0.05, 0.2, 0.38, 0.8])
def test_the_solid_is_as_wide_as_the_low_end(low):
    svg = ET.fromstring(rail_svg(shown_rail(low + 0.1, low, low + 0.15)))
    solid = next(e for e in svg if e.get("class") == "hr-solid")
    hatch = next(e for e in svg if e.get("class") == "hr-hatch")
    assert float(solid.get("width").rstrip("%")) == pytest.approx(100 * low)
    assert float(hatch.get("x").rstrip("%")) == pytest.approx(100 * low)
    assert float(hatch.get("width").rstrip("%")) == pytest.approx(15)
    stroke = next(e for e in svg if e.get("class") == "hr-stroke")
    assert stroke.get("x1") == stroke.get("x2") == percent(low + 0.1)


def test_states_differ_without_colour():
    shown = _classes(rail_svg(shown_rail(0.4, 0.3, 0.5)))
    assert shown.count("hr-crossed") == 0
    assert "hr-stroke" in shown
    held = _classes(rail_svg(empty_rail("held back")))
    assert held == ["hr-rail-picture", "hr-rail"]
    hidden = _classes(rail_svg(empty_rail("hidden", state="hidden")))
    assert hidden.count("hr-crossed") == 2
    dashed = _classes(rail_svg(shown_rail(0.07, 0.03, 0.1, axis=(-0.2, 0.2), state="not counted")))
    assert "hr-hatch hr-dashed" in dashed


def test_the_picture_says_what_it_shows_and_escapes_it():
    svg = rail_svg(shown_rail(0.4, 0.3, 0.5, text=HOSTILE))
    root = ET.fromstring(svg)
    assert root.get("role") == "img"
    assert root.find("title").text == HOSTILE
    assert "<img" not in svg
    html = rail_html(shown_rail(0.4, 0.3, 0.5, text=HOSTILE))
    assert ET.fromstring(html).get("aria-label") == HOSTILE


def test_the_svg_carries_no_style_and_no_colour_of_its_own():
    svg = rail_svg(shown_rail(0.4, 0.3, 0.5)) + pattern_defs()
    assert "style" not in svg
    assert "#" not in svg.replace(f"url(#{HATCH_ID})", "")


def test_the_hatch_is_defined_under_the_name_the_rails_use():
    pattern = ET.fromstring(pattern_defs()).find("defs/pattern")
    assert pattern.get("id") == HATCH_ID
    assert f"url(#{HATCH_ID})" in rail_svg(shown_rail(0.4, 0.3, 0.5))


def test_plain_html_has_the_same_lengths_as_the_svg():
    html = rail_html(shown_rail(0.42, 0.38, 0.46))
    assert re.search(r'hr-box-solid" style="left:0%;width:38%"', html)
    assert re.search(r'hr-box-hatch" style="left:38%;width:8%"', html)
    assert "hr-box-stroke" not in rail_html(empty_rail("held back"))


@pytest.mark.parametrize("palette", [LIGHT, DARK])
def test_the_image_carries_its_colours(palette):
    address = rail_image(shown_rail(0.42, 0.38, 0.46), palette)
    head, _, data = address.partition(",")
    svg = base64.b64decode(data).decode()
    assert head == "data:image/svg+xml;base64"
    assert palette.figure in svg
    assert ET.fromstring(svg).tag.endswith("svg")
