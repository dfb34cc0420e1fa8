"""The style sheet of the workspace."""

from __future__ import annotations

import re

from app.charts.palette import DARK, LIGHT
from app.widgets.workspace_style import workspace_style


def test_colours_follow_the_theme_of_the_page():
    style = workspace_style()
    assert f"--hr-figure:light-dark({LIGHT.figure},{DARK.figure});" in style


def test_every_variable_that_is_used_is_set():
    style = workspace_style()
    used = set(re.findall(r"var\((--hr-[a-z-]+)\)", style))
    assert used <= set(re.findall(r"(--hr-[a-z-]+):", style))


def test_braces_are_even_and_nothing_leaves_the_element():
    style = workspace_style()
    assert style.count("{") == style.count("}")
    assert "</" not in style
    assert re.findall(r'url\((?!"data:)', style) == []


def test_the_number_is_clear_of_the_header_and_smaller_on_a_narrow_page():
    style = workspace_style()
    assert "padding-top:64px" in style
    assert "font-size:3.5rem" in style
    assert "font-size:2.75rem" in style
    assert "min-height:44px" in style
