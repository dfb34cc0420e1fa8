"""Lines of text, bars and the start of the stroke."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.charts.fan_geometry import fan_geometry
from app.charts.fan_panels import (
    apart,
    bar_heights,
    bar_lengths,
    bar_texts,
    left_texts,
    right_titles,
    shortened,
    stroke_start,
    wrapped,
)
from tests.support.frozen_examples import mean_fan, share_fan, total_fan


def test_lines_hold_every_word_and_no_break_spaces():
    text = "have closed a branch in the last twelve\u00a0months"
    lines = wrapped(text, 14)
    assert " ".join(lines) == text
    assert all(len(line) <= 14 for line in lines)
    assert wrapped("") == []


def test_too_many_lines_end_in_an_ellipsis():
    lines = shortened("one two three four five six seven eight nine ten", 10, 2)
    assert len(lines) == 2
    assert lines[-1].endswith("\u2026")
    assert shortened("one two", 10, 2) == ["one two"]


def test_bars_are_as_long_as_their_parts():
    fan = mean_fan()
    lengths = bar_lengths(fan)
    ratios = [bar.part / length for bar, length in zip(fan.bars, lengths, strict=True)]
    assert ratios == pytest.approx([ratios[0]] * len(ratios))
    assert max(lengths) < 0.75  # the number stands beside


def test_bars_nobody_chose_have_no_length():
    fan = mean_fan()
    fan = replace(fan, bars=tuple(replace(bar, part=0.0) for bar in fan.bars))
    assert set(bar_lengths(fan)) == {0.0}


def test_bars_lie_at_their_values():
    fan = mean_fan()
    geometry = fan_geometry(fan)
    middles = [(foot + top) / 2 for foot, top in bar_heights(fan, geometry)]
    values = [geometry.left.low + m * geometry.left.length for m in middles]
    assert values == pytest.approx(list(range(11)))


def test_the_stroke_starts_after_the_bar_it_would_cross():
    fan = mean_fan()
    geometry = fan_geometry(fan)
    start = stroke_start(fan, geometry)
    assert start > bar_lengths(fan)[7]  # 6.95 lies in the bar of 7
    assert stroke_start(replace(fan, bars=()), geometry) == 0


def test_the_enlargement_has_its_own_line_above_the_right_panel():
    fan = total_fan()
    title, note = right_titles(fan, fan_geometry(fan))
    assert " ".join(title) == fan.right_title
    assert note[-1].startswith("enlarged ")
    assert fan.right_note.startswith(note[0])


def test_ticks_and_labels_stand_at_their_heights():
    fan = share_fan()
    places = left_texts(fan, fan_geometry(fan))
    assert [height for height, _ in places] == pytest.approx([0, 0.25, 0.5, 0.75, 1])


def test_texts_that_would_touch_give_way_to_the_weightier():
    assert apart([0.10, 0.12, 0.30], [1.0, 2.0, 1.0]) == {1, 2}
    assert apart([i / 100 for i in range(101)], [1.0] * 101) == set(range(0, 101, 5))
    assert apart([], []) == set()


def test_eleven_bars_keep_their_labels_and_numbers():
    fan = mean_fan()
    geometry = fan_geometry(fan)
    assert bar_texts(fan, geometry) == [bar.text for bar in fan.bars]
    assert [text for _, text in left_texts(fan, geometry)] == [bar.label for bar in fan.bars]
