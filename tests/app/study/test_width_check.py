"""Verdicts at, just below and just above every limit."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from app.study.study import HouseLimit
from app.study.width_check import FigureScale, Outcome, judge, limit_words, width_limit
from estimators import Caution, Estimate, Interval

NB = "\u00a0"
SHARE = FigureScale(True, 0.0, 1.0, True, False)
SCALE = FigureScale(False, 0.0, 10.0, False, True)
NUMBER = FigureScale(False, 0.0, 500.0, True, False)
LIMIT = HouseLimit()  # 10 points, 5 % of a scale, 25 % of a value, note from 70 %, base 30


def figure(value, half_width, base=100, cautions=()):
    interval = Interval(value - half_width, value + half_width, 0.95, "t")
    return Estimate(
        value, half_width / 2, interval, base - 1, base, float(base), 1.0, base, base, cautions
    )


def verdict(value, half_width, scale, base=100, limit=LIMIT, cautions=()):
    return judge(figure(value, half_width, base, cautions), scale, limit)


@pytest.mark.parametrize(
    ("scale", "value", "largest"), [(SHARE, 0.5, 0.1), (SCALE, 5.0, 0.5), (NUMBER, 200.0, 50.0)]
)
@pytest.mark.parametrize(
    ("part", "outcome"),
    [
        (1.0, Outcome.NOTE),
        (1.001, Outcome.HOLD_BACK),
        (0.7, Outcome.NOTE),
        (0.699, Outcome.PUBLISH),
        (0.2, Outcome.PUBLISH),
    ],
)
def test_at_and_around_the_limits(scale, value, largest, part, outcome):
    assert width_limit(figure(value, 0.1), scale, LIMIT) == pytest.approx(largest)
    assert verdict(value, part * largest, scale).outcome is outcome


def test_a_width_on_the_limit_but_for_rounding_stands_on_it():
    assert verdict(0.3, 0.1 + 1e-16, SHARE).outcome is Outcome.NOTE
    assert verdict(0.7, 0.8 - 0.7, SHARE).outcome is Outcome.NOTE


def test_the_smallest_base():
    assert verdict(0.5, 0.01, SHARE, base=30).outcome is Outcome.PUBLISH
    few = verdict(0.5, 0.01, SHARE, base=29)
    assert (few.outcome, few.short) == (Outcome.HOLD_BACK, "too few answers")
    assert few.reason == "29 answers, fewer than the 30 the house asks for"


@pytest.mark.parametrize("half_width", [math.inf, math.nan])
def test_no_interval_no_figure(half_width):
    found = verdict(5.0, half_width, SCALE)
    assert (found.outcome, found.reason) == (Outcome.HOLD_BACK, "no interval can be given")


def test_a_census_is_published():
    assert verdict(5.0, 0.0, SCALE).outcome is Outcome.PUBLISH
    assert verdict(0.0, 0.0, NUMBER).outcome is Outcome.PUBLISH


def test_a_number_around_nought_cannot_meet_a_part_of_its_value():
    assert verdict(0.0, 1.0, NUMBER).outcome is Outcome.HOLD_BACK


@pytest.mark.parametrize(
    ("code", "words"), [("heavy_ties", "says little"), ("no_variation", "says nothing")]
)
def test_where_the_width_tells_nothing_there_is_a_note_instead(code, words):
    found = verdict(7.0, 0.0, SCALE, cautions=(Caution(code, "..."),))
    assert found.outcome is Outcome.NOTE
    assert found.reason.endswith(words)


def test_a_share_that_nobody_chose_is_judged_by_its_width():
    caution = (Caution("no_variation", "..."),)
    assert verdict(0.05, 0.05, SHARE, cautions=caution).outcome is Outcome.PUBLISH
    assert verdict(0.2, 0.2, SHARE, cautions=caution).outcome is Outcome.HOLD_BACK


@pytest.mark.parametrize(
    ("value", "half_width", "scale", "reason"),
    [
        (0.45, 0.151, SHARE, f"±15 over the limit of ±10{NB}points"),
        (0.45, 0.1003, SHARE, f"±10.03 over the limit of ±10{NB}points"),
        (0.45, 0.097, SHARE, f"±9.7, close to the limit of ±10{NB}points"),
        (0.45, 0.04, SHARE, f"±4, limit ±10{NB}points"),
        (6.95, 0.18, SCALE, "±0.18, limit ±0.5"),
        (6.95, 0.504, SCALE, "±0.504 over the limit of ±0.5"),
        (8_570, 2_070, NUMBER, "±2,070, close to the limit of ±2,140"),
        (8.4e6, 2.2e6, NUMBER, f"±2.2{NB}million over the limit of ±2.1{NB}million"),
    ],
)
def test_width_and_limit_are_written_so_that_they_differ(value, half_width, scale, reason):
    assert verdict(value, half_width, scale).reason == reason


def test_the_language_of_numbers():
    found = judge(figure(0.45, 0.097), SHARE, LIMIT, decimal_mark=",")
    assert found.reason == f"±9,7, close to the limit of ±10{NB}points"


def test_the_limit_in_words_says_what_is_judged():
    assert limit_words(LIMIT) == (
        f"house limit: shares within ±10{NB}points, averages on a scale within ±5{NB}% of the "
        f"scale, other figures within ±25{NB}% of their value, at least 30 answers; with a note "
        f"from 70{NB}% of the limit on"
    )
    odd = replace(LIMIT, share_points=7.5, scale_part=0.075, smallest_base=1000)
    words = limit_words(odd, ",")
    assert f"±7,5{NB}points" in words
    assert f"±7,5{NB}% of the scale" in words
    assert "at least 1.000 answers" in words
