"""Freezing: what is held back leaves nothing behind, and no bar tells a single answer."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.sharing.frozen_readouts import (
    SMALLEST_BAR,
    Draft,
    FigureError,
    freeze,
    guarded_fan,
    headline_of,
    moment_words,
)
from app.sharing.readout_page import render_page
from app.study.figure_requests import FigureRequest, Statistic
from app.study.figures import compute_figure
from app.study.frozen import FrozenReadout
from app.study.pictures import Bar
from app.study.records import from_json, to_json
from app.study.sentences import describe
from app.study.study import HouseLimit
from estimators import METHODS_VERSION
from tests.support.frozen_examples import mean_fan
from tests.support.studies import (
    MOMENT,
    chance,
    choice,
    data_of,
    garden_data,
    kept,
    number,
    ratings,
    scale,
    yes_no,
)

NB = "\u00a0"
DRAFT = Draft("Spring wave", 3, MOMENT)
YES = FigureRequest("Q4", Statistic.SHARE, ("Yes",))
AVERAGE = FigureRequest("Q1", Statistic.AVERAGE)
SPEND = FigureRequest("Q5", Statistic.AVERAGE)


def frozen(data, *items):
    return freeze(data, tuple(kept(i) if isinstance(i, FigureRequest) else i for i in items), DRAFT)


def numbers_in(readout):
    """Every number anywhere in the frozen text."""
    text = to_json(readout).replace("\u2212", "-").replace(",", " ")
    return {float(n) for n in re.findall(r"-?\d+(?:\.\d+)?(?:e-?\d+)?", text)}


def traces(data, request):
    """The numbers of a figure, as computed and as printed in any step."""
    figure = compute_figure(data, request)
    estimate = figure.estimate
    found = {estimate.value, estimate.interval.low, estimate.interval.high, estimate.standard_error}
    words = describe(data, figure).words
    printed = {float(w.replace(",", "")) for w in (words.value, words.low, words.high)}
    return found | {round(x, 6) for x in found} | printed


def wide_data():
    """40 answers about spend, so unequal that the average is held back; all about 7,000."""
    values = np.random.default_rng(11).lognormal(8, 1.6, 40).round(2)
    return data_of({"Q5": values}, [number()])


def test_a_readout_goes_through_text_and_page_unchanged():
    readout = frozen(garden_data(), AVERAGE, replace(SPEND, statistic=Statistic.TOTAL))
    assert from_json(FrozenReadout, to_json(readout)) == readout
    page = render_page(readout, style_href=None)
    assert "395 of 1,184" in page
    assert (readout.study, readout.title, readout.number) == ("Kiosks", "Spring wave", 3)
    assert readout.frozen_at == "12 March 2026, 9:52 UTC"
    assert readout.base_line == f"395 of 1,184{NB}garden centres answered"
    assert readout.methods_version == METHODS_VERSION


def test_moments_are_read_as_written():
    assert moment_words(MOMENT) == "12 March 2026, 9:52 UTC"
    assert moment_words(MOMENT.replace(hour=0, minute=5)) == "12 March 2026, 0:05 UTC"


def test_an_unknown_universe_has_no_size_in_the_base_line():
    assert frozen(yes_no(30, 30), YES).base_line == "60 kiosks answered"


def test_nothing_of_a_figure_held_back_is_left_behind():
    data = wide_data()
    readout = frozen(data, SPEND)
    section = readout.figures[0]
    assert section.headline == "Question Q5?"
    assert section.sentence == "This figure is held back: too wide."
    assert section.fan is None
    row = section.rows[0]
    assert (row.value, row.between, row.verdict, row.answers) == ("", "", "hold back", "40")
    assert row.note == "held back: too wide"
    assert row.rail.state == "held back"
    assert (row.rail.axis_low, row.rail.axis_high) == (0.0, 1.0)
    assert readout.in_short == ()
    assert readout.held_back == ("all: too wide (Question Q5?).",)
    assert not numbers_in(readout) & traces(data, SPEND)


@pytest.mark.parametrize(
    "headline", ["proposed", "Kiosks spend {value}", "Up to {high} spent!", "Spend: {low}, say"]
)
def test_a_typed_headline_cannot_tell_what_is_held_back(headline):
    data = wide_data()
    text = describe(data, compute_figure(data, SPEND))
    words = {"value": text.words.value, "low": text.words.low, "high": text.words.high}
    typed = text.headline if headline == "proposed" else headline.format(**words)
    readout = frozen(data, kept(SPEND, headline=typed))
    assert readout.figures[0].headline == "Question Q5?"
    assert not numbers_in(readout) & traces(data, SPEND)


def test_a_headline_in_words_cannot_either():
    data = yes_no(14, 14)
    assert frozen(data, kept(YES, headline="Half say yes")).figures[0].headline == "Question Q4?"
    plain = frozen(data, kept(YES, headline="Who says yes?")).figures[0].headline
    assert plain == "Who says yes?"


def split_data():
    """North has 60 answers, West 12; West's numbers must not show."""
    north = [float(i % 3 + 5) for i in range(60)]
    west = [1.37, 9.91] * 6
    return data_of(
        {"Q5": [*north, *west], "area": ["North"] * 60 + ["West"] * 12},
        [number(), choice("area", "North", "West")],
    )


def test_nothing_of_a_row_held_back_is_left_behind():
    data = split_data()
    asked = replace(SPEND, split_by="area")
    readout = frozen(data, asked)
    rows = {row.who: row for row in readout.figures[0].rows}
    assert rows["West"].note == "held back: too few answers"
    assert rows["North"].value
    west = traces(data, replace(SPEND, group_question="area", group_answer="West"))
    shown = traces(data, SPEND) | traces(
        data, replace(SPEND, group_question="area", group_answer="North")
    )
    telling = {number for number in west - shown if number != round(number)}
    assert len(telling) >= 4
    assert numbers_in(readout) & telling == set()
    axis = {(r.rail.axis_low, r.rail.axis_high) for r in rows.values()}
    widest = max(compute_figure(data, SPEND).scale.high, *(rows["North"].rail.high,))
    assert len(axis) == 1
    assert axis.pop()[1] <= widest * 1.25
    assert readout.held_back == (f"West: too few answers ({readout.figures[0].headline}).",)


def test_a_handful_of_people_is_hidden_whatever_the_house_allows():
    data = data_of(
        {"Q4": ["Yes", "No"] * 20 + ["Yes"] * 3, "area": ["N"] * 40 + ["S"] * 3},
        [choice("Q4", "Yes", "No"), choice("area", "N", "S", "E")],
        limit=HouseLimit(share_points=99, smallest_base=1, scale_part=9, number_part=9),
    )
    rows = {r.who: r for r in frozen(data, replace(YES, split_by="area")).figures[0].rows}
    south = rows["S"]
    assert (south.value, south.answers, south.verdict) == ("", "under 5", "hidden")
    assert south.note == "hidden to protect respondents"
    assert south.rail.state == "hidden"
    assert rows["E"].note == "held back: too few to show"
    alone = frozen(data, replace(YES, group_question="area", group_answer="S")).figures[0]
    assert alone.sentence == "This figure is hidden to protect respondents."
    assert (alone.fan, alone.base_line) == (None, "fewer than 5 answered")
    page = render_page(frozen(data, replace(YES, split_by="area")), style_href=None)
    assert "hidden to protect respondents" in page


def test_one_hidden_group_cannot_be_worked_out_from_the_others():
    data = data_of(
        {
            "Q4": ["Yes", "No"] * 40 + ["Yes"] * 3,
            "area": ["N"] * 44 + ["W"] * 36 + ["S"] * 3,
        },
        [choice("Q4", "Yes", "No"), choice("area", "N", "W", "S")],
        limit=HouseLimit(share_points=50, smallest_base=1),
    )
    rows = {r.who: r for r in frozen(data, replace(YES, split_by="area")).figures[0].rows}
    assert [who for who, row in rows.items() if row.value] == ["all", "N"]
    assert rows["W"].note == rows["S"].note == "hidden to protect respondents"
    assert (rows["W"].answers, rows["S"].answers) == ("36", "under 5")


def test_headline_sentence_table_and_fan_are_rounded_alike():
    data = garden_data()
    item = kept(replace(AVERAGE, split_by="REGION"))
    section = frozen(data, item).figures[0]
    row = section.rows[0]
    low, high = row.between.split(" to ")
    assert f"between {low} and {high}." in section.sentence
    assert section.headline.startswith(f"Average {row.value}: ")
    assert section.headline == headline_of(data, item)
    assert (section.fan.value_text, section.fan.low_text) == (row.value, low)
    assert section.fan.alternative == section.sentence


def test_heads_and_axes():
    data = garden_data()
    heads = {
        "share": ("%", "0", f"100{NB}%"),
        "average": ("average", "0", "10"),
        "total": ("total, million", "0", ""),
        "median": ("median", "0", ""),
    }
    asked = (
        FigureRequest("Q7", Statistic.SHARE, ("Q7_1",)),
        AVERAGE,
        replace(SPEND, statistic=Statistic.TOTAL),
        replace(SPEND, statistic=Statistic.MEDIAN),
    )
    sections = frozen(data, *asked).figures
    for section, head in zip(sections, heads.values(), strict=True):
        assert (section.column_head, section.axis_low_text, section.axis_high_text) == head


def test_in_short_says_headline_and_interval_of_the_first_three():
    data = yes_no(168, 232)
    no = replace(YES, answers=("No",))
    readout = frozen(data, kept(YES, headline="Many say yes."), no, kept(YES, headline="Yes?"), no)
    assert readout.in_short == (
        f"Many say yes (37 to 47{NB}%).",
        f"58{NB}% of kiosks answered \u201cNo\u201d: Question Q4 (53 to 63{NB}%).",
        f"Yes? (37 to 47{NB}%).",
    )
    nobody = frozen(yes_no(0, 400), YES).in_short
    assert nobody == (
        f"None of 400 kiosks answered \u201cYes\u201d: Question Q4 (up to 1.0{NB}%).",
    )
    census = frozen(yes_no(20, 22, chance(42)), kept(YES, headline="All asked")).in_short
    assert census == ("All asked.",)


def test_a_note_stands_beside_the_value():
    limit = HouseLimit(share_points=6)
    row = frozen(yes_no(168, 232, limit=limit), YES).figures[0].rows[0]
    assert row.verdict == "publish with a note"
    assert row.note == f"read with care: ±5, close to the limit of ±6{NB}points"


def test_comments_and_questions_are_kept_as_typed():
    section = frozen(yes_no(168, 232), kept(YES, headline=" Yes! ", comment=" Said so. ")).figures[
        0
    ]
    assert (section.headline, section.comment, section.question) == (
        "Yes!",
        "Said so.",
        "Question Q4?",
    )


def test_a_figure_that_is_gone_stops_the_freezing():
    with pytest.raises(FigureError, match="no question Q9"):
        frozen(yes_no(30, 30), replace(YES, question="Q9"))


def test_the_decimal_comma_reaches_the_page():
    data = ratings([5, 6, 7, 8] * 30, chance(4000), decimal_mark=",")
    readout = frozen(data, AVERAGE)
    assert readout.base_line == f"120 of 4.000{NB}kiosks answered"
    assert readout.figures[0].rows[0].value == "6,50"
    assert "4.000" in dict(readout.method_note)["Whom the figures speak for"]


def fan_with(*counts):
    total = sum(counts)
    bars = tuple(
        Bar(i, i + 1, count / total, str(i), str(round(100 * count / total)))
        for i, count in enumerate(counts)
    )
    return replace(mean_fan(), bars=bars), total


def shown_counts(*counts):
    fan, total = fan_with(*counts)
    return [
        None if bar.text == "few" else round(bar.part * total)
        for bar in guarded_fan(fan, total).bars
    ]


def test_one_small_bar_takes_the_next_smallest_with_it():
    assert shown_counts(40, 3, 12, 30) == [40, None, None, 30]
    assert shown_counts(40, 3, 2, 30) == [40, None, None, 30]
    assert shown_counts(40, 5, 0, 30) == [40, 5, 0, 30]
    assert shown_counts(3) == [None]


def test_hidden_bars_have_a_note():
    fan, total = fan_with(40, 3, 12, 30)
    assert guarded_fan(fan, total).notes[-1].startswith("Bars marked \u201cfew\u201d")
    even, total = fan_with(40, 12)
    assert guarded_fan(even, total) is even


@given(st.lists(st.integers(0, 60), min_size=1, max_size=12).filter(any))
def test_no_bar_can_be_worked_out(counts):
    """What is hidden is known together at best: the sum of at least two bars, or all there is."""
    shown = shown_counts(*counts)
    for count, seen in zip(counts, shown, strict=True):
        assert seen is None or seen == count
        assert not (seen and seen < SMALLEST_BAR)
    hidden = [i for i, seen in enumerate(shown) if seen is None]
    assert len(hidden) != 1 or sum(c > 0 for c in counts) == 1


def test_frozen_bars_of_a_real_scale_tell_no_single_answer():
    values = [0.0] + [5.0] * 20 + [6.0] * 20 + [7.0] * 8
    data = data_of({"Q1": values}, [scale()])
    fan = frozen(data, AVERAGE).figures[0].fan
    assert [(b.label, b.text) for b in fan.bars if b.text != "0"] == [
        ("0", "few"),
        ("5", "41"),
        ("6", "41"),
        ("7", "few"),
    ]
