"""Colours: contrast ratios against the table of the look, and variables for style sheets."""

from __future__ import annotations

import tomllib
from dataclasses import fields
from pathlib import Path

import pytest

from app.charts.palette import (
    DARK,
    LIGHT,
    PRINT,
    contrast,
    css_variables,
    css_variables_by_scheme,
)

ROOT = Path(__file__).parents[3]


def test_contrast_of_black_on_white_is_the_largest_there_is():
    # W3C (2023), WCAG 2.2, definition of contrast ratio: 1 to 21
    assert contrast("#000000", "#FFFFFF") == pytest.approx(21.0)
    assert contrast("#2C6570", "#2C6570") == pytest.approx(1.0)


def test_contrast_does_not_depend_on_the_order():
    assert contrast("#93470F", "#FAF8F3") == contrast("#FAF8F3", "#93470F")


@pytest.mark.parametrize("palette", [LIGHT, DARK, PRINT])
@pytest.mark.parametrize("name", ["ink", "soft", "people", "figure", "problem", "link"])
def test_text_colours_reach_the_ratio_for_text_on_page_and_panel(palette, name):
    # W3C (2023), WCAG 2.2, success criterion 1.4.3: 4.5 to 1
    for ground in (palette.page, palette.panel):
        assert contrast(getattr(palette, name), ground) >= 4.5


@pytest.mark.parametrize("palette", [LIGHT, DARK, PRINT])
def test_lines_of_controls_reach_the_ratio_for_marks(palette):
    # W3C (2023), WCAG 2.2, success criterion 1.4.11: 3 to 1
    assert contrast(palette.line, palette.page) >= 3
    assert contrast(palette.line, palette.panel) >= 3


@pytest.mark.parametrize("palette", [LIGHT, DARK, PRINT])
def test_text_on_the_band_and_on_the_primary_button_can_be_read(palette):
    assert contrast(palette.ink, palette.band_on_page) >= 4.5
    assert contrast(palette.soft, palette.band_on_page) >= 4.5
    assert contrast(palette.page, palette.figure) >= 4.5


def test_the_band_on_the_page_lies_half_way():
    assert DARK.band_on_page == "#402E1C"  # by hand: (107+21)/2, (66+25)/2, (29+27)/2


def test_variables_name_every_token_once():
    text = css_variables(LIGHT)
    for field in fields(LIGHT):
        assert text.count(f"--hr-{field.name}:") == 1
    assert f"--hr-page:{LIGHT.page};" in text
    assert f"--hr-page:light-dark({LIGHT.page},{DARK.page});" in css_variables_by_scheme()


@pytest.mark.parametrize(("part", "palette"), [("light", LIGHT), ("dark", DARK)])
def test_the_theme_of_the_screens_has_the_same_colours(part, palette):
    config = tomllib.loads((ROOT / ".streamlit" / "config.toml").read_text(encoding="utf-8"))
    theme = config["theme"][part]
    assert theme["primaryColor"] == palette.figure
    assert theme["backgroundColor"] == palette.page
    assert theme["secondaryBackgroundColor"] == palette.panel
    assert theme["textColor"] == palette.ink
    assert theme["linkColor"] == palette.link
    assert theme["borderColor"] == palette.line
    assert theme["redTextColor"] == palette.problem
    known = {getattr(palette, field.name) for field in fields(palette)}
    colours = {v for v in theme.values() if isinstance(v, str) and v.startswith("#")}
    assert colours <= known
