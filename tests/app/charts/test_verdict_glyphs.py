"""The four marks."""

from __future__ import annotations

import xml.etree.ElementTree as ET

import pytest

from app.charts.verdict_glyphs import GLYPHS, glyph_html, glyph_svg, verdict_html


@pytest.mark.parametrize("draw", [glyph_svg, glyph_html])
def test_the_four_marks_differ_in_shape(draw):
    assert len({draw(verdict) for verdict in GLYPHS}) == 4
    assert len({glyph.mark for glyph in GLYPHS.values()}) == 4


@pytest.mark.parametrize("verdict", list(GLYPHS))
def test_marks_are_twelve_pixels_and_silent(verdict):
    svg = ET.fromstring(glyph_svg(verdict))
    assert (svg.get("width"), svg.get("height"), svg.get("aria-hidden")) == ("12", "12", "true")


@pytest.mark.parametrize("svg", [True, False])
def test_a_word_always_stands_beside_the_mark(svg):
    for verdict, glyph in GLYPHS.items():
        assert glyph.word in verdict_html(verdict, svg=svg)
    assert "&lt;b&gt;" in verdict_html("publish", word="<b>", svg=svg)


def test_the_note_fills_half_of_what_publish_fills():
    def inked(verdict: str) -> float:
        rects = ET.fromstring(glyph_svg(verdict)).findall("rect[@class='hr-glyph-fill']")
        return sum(float(r.get("width")) * float(r.get("height")) for r in rects)

    assert inked("publish") == 2 * inked("publish with a note") > 0
    assert inked("hold back") == inked("hidden") == 0
