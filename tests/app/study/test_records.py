"""What the codec writes it reads back as the same value."""

from __future__ import annotations

import dataclasses
import importlib
import json
import math
import types
import typing
from datetime import UTC, datetime
from enum import Enum

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.study.figure_requests import FigureRequest, Statistic
from app.study.frozen import FrozenReadout
from app.study.pictures import Rail
from app.study.questions import MissingReason, Question, QuestionKind
from app.study.records import from_json, from_record, to_json, to_record
from app.study.sampling_plan import SamplingPlan
from app.study.study import Study

MODULES = ("study", "questions", "sampling_plan", "figure_requests", "frozen", "pictures")
KINDS = [
    value
    for name in MODULES
    for value in vars(importlib.import_module(f"app.study.{name}")).values()
    if dataclasses.is_dataclass(value) and value.__module__ == f"app.study.{name}"
]
PLAIN = {
    str: st.text(max_size=12),
    int: st.integers(-(10**12), 10**12),
    float: st.floats(allow_nan=False),
    bool: st.booleans(),
    datetime: st.datetimes(timezones=st.just(UTC)),
}


def values_of(kind) -> st.SearchStrategy:
    if kind in PLAIN:
        return PLAIN[kind]
    arguments = typing.get_args(kind)
    if typing.get_origin(kind) in (typing.Union, types.UnionType):
        return st.one_of(*(st.none() if a is type(None) else values_of(a) for a in arguments))
    if typing.get_origin(kind) is tuple and arguments[-1] is Ellipsis:
        return st.lists(values_of(arguments[0]), max_size=2).map(tuple)
    if typing.get_origin(kind) is tuple:
        return st.tuples(*map(values_of, arguments))
    if issubclass(kind, Enum):
        return st.sampled_from(kind)
    hints = typing.get_type_hints(kind)
    return st.builds(kind, **{f.name: values_of(hints[f.name]) for f in dataclasses.fields(kind)})


def test_the_list_of_kinds_is_not_empty() -> None:
    assert {Study, Question, SamplingPlan, FigureRequest, FrozenReadout, Rail} <= set(KINDS)


@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.__name__)
def test_every_dataclass_is_read_back_as_it_was(kind) -> None:
    @settings(max_examples=25, deadline=None)
    @given(values_of(kind))
    def check(value) -> None:
        text = to_json(value)
        assert from_json(kind, text) == value
        assert to_json(from_json(kind, text)) == text

    check()


def test_parts_come_back_as_the_right_classes() -> None:
    question = Question("q", ("q",), QuestionKind.SCALE, "How satisfied?")
    back = from_json(Question, to_json(question))
    assert type(back.kind) is QuestionKind
    assert type(back.columns) is tuple
    study = Study("a", "b", datetime(2026, 3, 1, tzinfo=UTC), datetime(2026, 3, 2, tzinfo=UTC), 1)
    assert from_json(Study, to_json(study)).changed_at.tzinfo is not None


def test_a_field_of_a_later_release_is_ignored_and_an_absent_one_takes_its_default() -> None:
    record = {"question": "q4", "statistic": "share", "from_a_later_release": [1, 2]}
    assert from_record(FigureRequest, record) == FigureRequest("q4", Statistic.SHARE)


def test_an_unknown_answer_of_an_enum_is_refused() -> None:
    with pytest.raises(ValueError, match="harmonic"):
        from_record(FigureRequest, {"question": "q4", "statistic": "harmonic"})


def test_a_pair_with_three_parts_is_refused() -> None:
    with pytest.raises(ValueError, match="longer"):
        from_record(tuple[str, str], ["a", "b", "c"])


def test_whole_numbers_written_for_floats_come_back_as_floats() -> None:
    read = from_record(FigureRequest, {"question": "q", "statistic": "share", "confidence": 1})
    assert type(read.confidence) is float


def test_numbers_of_numpy_are_written_as_plain_ones() -> None:
    rail = Rail(
        np.float64(0.0), np.float32(0.5), np.int64(3), np.inf, math.nan, np.bool_(True), "shown", ""
    )
    record = to_record(rail)
    assert [type(record[k]) for k in ("axis_low", "axis_high", "value", "solid")] == [
        float,
        float,
        int,
        bool,
    ]
    back = from_json(Rail, to_json(rail))
    assert back.low == math.inf
    assert math.isnan(back.high)


def test_text_stays_readable_in_the_json() -> None:
    question = Question("q", ("q",), QuestionKind.TEXT, "Qu’aimez-vous ? أخبرنا 🌿\n\x00 \"'\\")
    text = to_json(question)
    assert "أخبرنا 🌿" in text
    assert from_json(Question, text) == question
    assert json.loads(text)["missing"] == []


def test_enums_are_written_by_value() -> None:
    assert to_record(MissingReason.DONT_KNOW) == "don't know"
    assert to_record((MissingReason.REFUSED, None)) == ["refused", None]
