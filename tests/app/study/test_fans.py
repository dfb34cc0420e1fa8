"""Both panels of the fan: bars that add up, coded ends, the printed interval, true notes."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.charts.fan_geometry import fan_geometry
from app.study.fans import MOST_BARS, MOST_POINTS, fan_of
from app.study.figure_requests import FigureRequest, Statistic
from app.study.figures import compute_figure
from app.study.questions import QuestionKind
from app.study.sampling_plan import SamplingMethod
from app.study.sentences import describe
from tests.support.studies import (
    chance,
    choice,
    data_of,
    garden_data,
    number,
    question,
    ratings,
    yes_no,
)

NB = "\u00a0"
AVERAGE = FigureRequest("Q1", Statistic.AVERAGE)
YES = FigureRequest("Q4", Statistic.SHARE, ("Yes",))
SPEND = FigureRequest("Q5", Statistic.AVERAGE)


def fan(data, asked, **more):
    return fan_of(data, compute_figure(data, asked), **more)


def numbers(values, plan=None):
    return data_of({"Q5": values}, [number()], plan)


def test_a_scale_has_a_bar_for_every_point():
    found = fan(ratings([5, 6, 6, 7] * 10), AVERAGE)
    assert [bar.label for bar in found.bars] == [str(i) for i in range(11)]
    assert [bar.part for bar in found.bars][5:8] == [0.25, 0.5, 0.25]
    assert [bar.text for bar in found.bars][4:8] == ["0", "25", "50", "25"]
    assert (found.axis_low, found.axis_high, found.share) == (-0.5, 10.5, False)
    assert (found.left_title, found.left_note) == ("What 40 said", "answers, %")


def test_a_fine_scale_is_binned_over_its_whole_length():
    codes = [str(i) for i in range(101)]
    slider = question("Q1", QuestionKind.SCALE, codes)
    values = np.random.default_rng(3).integers(0, 101, 300).astype(float)
    found = fan(data_of({"Q1": values}, [slider]), AVERAGE)
    assert len(found.bars) <= MOST_BARS < MOST_POINTS
    assert found.axis_low == 0
    assert found.axis_high >= 100
    assert sum(bar.part for bar in found.bars) == pytest.approx(1)


@settings(max_examples=60, deadline=None)
@given(st.lists(st.floats(-1e6, 1e6), min_size=2, max_size=60))
def test_bars_of_numbers_hold_everybody_once(values):
    found = fan(numbers(values), SPEND)
    assert sum(bar.part for bar in found.bars) == pytest.approx(1)
    assert len(found.bars) <= MOST_BARS + 1
    edges = [bar.low for bar in found.bars] + [found.bars[-1].high]
    assert all(b > a for a, b in pairwise(edges))
    assert found.axis_low <= found.value <= found.axis_high


def test_both_ends_are_coded():
    """One spends nothing, one a fortune: neither is told by the end of an axis."""
    values = [3.0, *range(100, 200), 99_000.0]
    found = fan(numbers(values), SPEND)
    for bar in found.bars[1:-1]:
        here = sum(bar.low <= v < bar.high for v in values)
        assert bar.part * len(values) == pytest.approx(here)
    texts = [text for _, text in found.ticks]
    assert texts[0].startswith("under ")
    assert texts[-1].endswith(" and more")
    assert not any("99" in text for text in texts)
    last = found.bars[-1]
    assert last.part * len(values) == sum(v >= last.low for v in values)
    first = found.bars[0]
    assert first.part * len(values) == sum(v < first.high for v in values)


def test_ticks_stand_where_they_say():
    for key in ("Q5", "Q6", "Q11", "Q12", "MINUTES"):
        for place, text in fan(garden_data(), FigureRequest(key, Statistic.AVERAGE)).ticks:
            said = text.removeprefix("under ").removesuffix(" and more").replace(",", "")
            assert float(said) == pytest.approx(place)


def test_equal_numbers_have_one_bar_that_holds_them():
    found = fan(numbers([250.0] * 40), SPEND)
    assert [bar.part for bar in found.bars if bar.part] == [1.0]
    assert found.curve == ()
    assert not found.hatched
    assert found.notes == ("The answers do not vary, so there is no curve to draw.",)


def test_a_share_is_one_column():
    found = fan(yes_no(168, 232), YES)
    assert found.share
    assert found.bars == ()
    assert (found.axis_low, found.axis_high, found.factor) == (0, 1, 1)
    assert (found.left_title, found.left_note) == ("168 of 400", "answered \u201cYes\u201d")
    assert (found.value_text, found.low_text, found.high_text) == (
        f"42{NB}%",
        f"37{NB}%",
        f"47{NB}%",
    )


def test_a_total_of_people_is_a_column_under_an_axis_of_units():
    data = garden_data()
    figure = compute_figure(data, FigureRequest("Q7", Statistic.TOTAL, ("Q7_1",)))
    found = fan_of(data, figure)
    assert found.share
    assert found.factor == pytest.approx(1184)
    share = compute_figure(data, FigureRequest("Q7", Statistic.SHARE, ("Q7_1",)))
    assert found.value / found.factor == pytest.approx(share.estimate.value)
    geometry = fan_geometry(found)
    assert geometry.left_value == pytest.approx(share.estimate.value)
    assert geometry.left_band[0] == pytest.approx(found.low / 1184)


def test_the_right_axis_of_a_total_is_the_left_one_times_the_universe():
    data = garden_data()
    total = fan(data, FigureRequest("Q6", Statistic.TOTAL))
    mean = fan(data, FigureRequest("Q6", Statistic.AVERAGE))
    assert total.bars == mean.bars
    assert total.value == pytest.approx(total.factor * mean.value)
    assert total.low == pytest.approx(total.factor * mean.low)
    geometry = fan_geometry(total)
    assert geometry.left_value == pytest.approx(fan_geometry(mean).left_value)


@pytest.mark.parametrize("plan", [chance(), chance(900), chance(900, replacement=True)])
@pytest.mark.parametrize("what", ["average", "share"])
def test_the_curve_stands_on_the_figure_and_is_as_wide_as_its_error(plan, what):
    if what == "average":
        data, asked = ratings([2, 5, 6, 6, 7, 8, 9, 10] * 12, plan), AVERAGE
    else:
        data, asked = yes_no(100, 140, plan), YES
    figure = compute_figure(data, asked)
    curve = fan_of(data, figure).curve
    values = np.array([p.value for p in curve])
    heights = np.array([p.height for p in curve])
    mean = float(values @ heights / heights.sum())
    spread = math.sqrt(float((values - mean) ** 2 @ heights / heights.sum()))
    assert mean == pytest.approx(figure.estimate.value, abs=0.01 * spread)
    assert spread == pytest.approx(figure.estimate.standard_error, rel=0.01)
    assert (np.diff(values) > 0).all()


def test_a_small_group_that_is_nearly_all_there_is_has_a_curve():
    """5 of 99 asked of 100: the plug-in universe is the sample itself and cannot vary."""
    data = data_of(
        {"Q1": [float(i % 11) for i in range(99)], "area": ["N"] * 5 + ["S"] * 94},
        [ratings([1]).questions[0], choice("area", "N", "S")],
        chance(100),
    )
    found = fan(data, FigureRequest("Q1", Statistic.AVERAGE, (), "area", "N"))
    assert len(found.curve) > 0
    assert all(math.isfinite(p.value) for p in found.curve)


def test_the_curve_is_hatched_only_where_both_arms_agree():
    even = fan(yes_no(200, 200), YES)
    assert even.hatched
    assert len(even.notes) == 1
    uneven = fan(yes_no(3, 57), YES)  # Wilson 1.7 to 13.7 %
    assert not uneven.hatched
    assert uneven.notes[-1] == (
        "The curve assumes the universe looks exactly like the sample; the interval does not, so "
        "it reaches further up."
    )
    assert fan(yes_no(57, 3), YES).notes[-1].endswith("further down.")


def test_nobody_chose_it():
    found = fan(yes_no(0, 40), YES)
    assert (found.value_text, found.low_text, found.high_text) == (
        "0 of 40",
        "0 of 40",
        f"9{NB}%",
    )
    assert found.notes == ("The answers do not vary, so there is no curve to draw.",)


def test_the_endless_interval_is_there_only_where_it_differs():
    assert fan(yes_no(100, 100), YES).endless_low is None
    finite = fan(yes_no(100, 100, chance(400)), YES)
    assert finite.endless_low < finite.low < finite.high < finite.endless_high
    assert finite.endless_text == f"endless universe: 43 to 57{NB}%"


@pytest.mark.parametrize("method", [SamplingMethod.QUOTA, SamplingMethod.NOT_SURE])
def test_what_was_not_drawn_by_chance_is_not_said_to_be_repeated(method):
    found = fan(yes_no(100, 100, chance(method=method)), YES)
    assert found.right_title == "If a chance sample like this were repeated"


def test_the_step_of_the_column_rules_all_its_texts():
    data = garden_data()
    figure = compute_figure(data, AVERAGE)
    found = fan_of(data, figure, step=1.0)
    assert "." not in found.value_text + found.low_text + found.high_text + found.endless_text
    assert found.alternative == describe(data, figure, step=1.0).sentence
    assert found.hatched == fan_of(data, figure).hatched


def test_the_decimal_comma_reaches_every_text():
    data = data_of({"Q5": [0.5, 1.5, 2.5, 3.5] * 10}, [number()], decimal_mark=",")
    found = fan(data, SPEND)
    assert all("." not in text for _, text in found.ticks)
    assert "," in found.value_text
