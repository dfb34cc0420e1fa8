"""A figure goes into the address and comes back the same, whatever its codes look like."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.study.figure_requests import FigureRequest, Statistic
from app.study.questions import Answer, QuestionKind
from app.widgets import address
from app.widgets.figure_address import first_question, from_address, to_address
from tests.support.studies import choice, data_of, garden_data, number, question, ratings, yes_no

CODES = ("[x]", "a|b", '["a|b"]', "", "Ä ö/ü?&=%", "日本", "1", "[", "a, b", "\u202e", " lead")
HOSTILE = data_of(
    {"Q4": ["a|b"] * 4, "area": ["N"] * 4},
    [
        replace(choice("Q4", "x"), answers=tuple(Answer(c, c) for c in CODES)),
        choice("area", "N", "S"),
    ],
)


@pytest.fixture
def bar(monkeypatch):
    """The address, as the platform hands it over: only texts, and nothing where it is empty."""
    values = {}
    monkeypatch.setattr(address, "read", lambda name, default="": values.get(name, default))
    return values


def back(bar, data, request):
    bar.clear()
    bar.update({k: v for k, v in to_address(request).items() if v})
    return from_address(data)


@pytest.mark.parametrize("code", [c for c in CODES if c])
def test_one_hostile_code(bar, code):
    asked = FigureRequest("Q4", Statistic.SHARE, (code,))
    assert back(bar, HOSTILE, asked) == asked


def test_several_hostile_codes(bar):
    asked = FigureRequest("Q4", Statistic.TOTAL, CODES, confidence=0.99, missing_counted=True)
    assert back(bar, HOSTILE, asked) == asked


def test_an_empty_code_alone(bar):
    asked = FigureRequest("Q4", Statistic.SHARE, ("",))
    assert back(bar, HOSTILE, asked) == asked


@given(st.data())
def test_any_choice_of_codes(data):
    values = {}
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(address, "read", lambda name, default="": values.get(name, default))
        codes = data.draw(st.permutations(CODES))[: data.draw(st.integers(2, len(CODES)))]
        asked = FigureRequest(
            "Q4",
            Statistic.SHARE,
            tuple(codes),
            "area",
            data.draw(st.sampled_from(["N", "S"])),
            data.draw(st.sampled_from([0.9, 0.95, 0.99])),
            data.draw(st.sampled_from(["wilson", "wald"])),
            data.draw(st.booleans()),
            "area",
        )
        assert back(values, HOSTILE, asked) == asked


def test_every_figure_of_the_sample_study(bar):
    data = garden_data()
    for asked in (
        FigureRequest("Q1", Statistic.MEDIAN),
        FigureRequest("Q5", Statistic.TOTAL, split_by="REGION"),
        FigureRequest("Q7", Statistic.SHARE, ("Q7_2", "Q7_1"), "SIZE", "very large"),
    ):
        assert back(bar, data, asked) == asked


@pytest.mark.parametrize(
    "wrong",
    [
        {"q": "Q9"},
        {"q": "Q4", "s": "median"},
        {"q": "Q4", "a": "Maybe"},
        {"q": "Q4", "a": '["Maybe", 3]'},
        {"q": "Q4", "a": "[" * 5000},
        {"q": "Q4", "a": "[1"},
        {"q": "Q4", "level": "0.8"},
        {"q": "Q4", "level": "much"},
        {"q": "Q4", "method": "guess"},
        {"q": "Q4", "g": "nowhere", "ga": "N"},
        {"q": "Q4", "by": "nowhere"},
    ],
)
def test_what_is_not_there_is_mended(bar, wrong):
    bar.update(wrong)
    assert from_address(yes_no(3, 3)) == FigureRequest("Q4", Statistic.SHARE, ("Yes",))


def test_an_average_does_not_count_who_did_not_know(bar):
    bar.update({"q": "Q1", "dk": "1", "a": "5"})
    assert from_address(ratings([1, 2])) == FigureRequest("Q1", Statistic.AVERAGE)


def test_the_figure_a_study_opens_with():
    rating, brands = ratings([1]).questions[0], question("Q7", QuestionKind.SEVERAL, ("A", "B"))
    columns = {"Q4": ["Yes"], "Q1": [5.0], "A": [1.0], "B": [0.0], "Q5": [2.0]}
    data = data_of(columns, [choice("Q4", "Yes"), number(), brands, rating])
    assert first_question(data).key == "Q1"
    assert first_question(replace(data, questions=data.questions[:3])).key == "Q7"
    only_text = question("Q14", QuestionKind.TEXT)
    assert first_question(replace(data, questions=(only_text,))) is None
    by_area = replace(data.plan, strata_column="Q4")
    assert first_question(replace(data, questions=data.questions[:2], plan=by_area)).key == "Q5"
