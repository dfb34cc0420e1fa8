"""What is read from the cells, against counting the cells one by one in plain Python."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.study.question_values import read_values
from app.study.questions import Answer, MissingCode, MissingReason, Question, QuestionKind

DONT_KNOW = MissingCode("99", MissingReason.DONT_KNOW)
REFUSED = MissingCode("98", MissingReason.REFUSED)
NOT_ASKED = MissingCode("-1", MissingReason.NOT_ASKED)
SCALE_CODES = tuple(str(i) for i in range(11))


def asked_as(kind, codes=(), missing=(), columns=("Q1",)):
    answers = tuple(Answer(code, code) for code in codes)
    return Question("Q1", columns, kind, "Text", answers=answers, missing=tuple(missing))


def read(kind, values, codes=(), missing=()):
    return read_values(asked_as(kind, codes, missing), pd.DataFrame({"Q1": values}))


def test_a_scale_with_its_missing_codes():
    values = read(
        QuestionKind.SCALE,
        [5, 10, 99, np.nan, 98, -1, 0],
        SCALE_CODES,
        (DONT_KNOW, REFUSED, NOT_ASKED),
    )
    nan = np.nan
    np.testing.assert_array_equal(values.numbers, [5, 10, nan, nan, nan, nan, 0])
    assert values.codes.tolist() == [5, 10, -1, -1, -1, -1, 0]
    assert values.answered.tolist() == [True, True, False, False, False, False, True]
    assert values.asked.tolist() == [True, True, True, True, True, False, True]
    assert np.flatnonzero(values.reasons[MissingReason.DONT_KNOW]).tolist() == [2]
    assert np.flatnonzero(values.reasons[MissingReason.NO_ANSWER]).tolist() == [3]
    assert np.flatnonzero(values.reasons[MissingReason.REFUSED]).tolist() == [4]
    assert np.flatnonzero(values.reasons[MissingReason.NOT_ASKED]).tolist() == [5]
    assert values.chosen.sum(axis=0).tolist() == [1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1]


def test_the_same_scale_in_text_reads_alike():
    numbers = [5, 10, 99, np.nan, 0]
    texts = ["5", "10", "99", None, " 0 "]
    first = read(QuestionKind.SCALE, numbers, SCALE_CODES, (DONT_KNOW,))
    second = read(QuestionKind.SCALE, texts, SCALE_CODES, (DONT_KNOW,))
    for name in ("numbers", "codes", "chosen", "answered", "asked"):
        np.testing.assert_array_equal(getattr(first, name), getattr(second, name))


def test_a_scale_with_words_at_its_ends():
    codes = ("0 - bad", "1", "2 - good")
    values = read(QuestionKind.SCALE, ["0 - bad", "1", "2 - good", "1"], codes)
    assert values.numbers.tolist() == [0, 1, 2, 1]
    assert values.codes.tolist() == [0, 1, 2, 1]


def test_labels_with_words_for_no_answer():
    missing = (MissingCode("Don't know", MissingReason.DONT_KNOW),)
    values = read(QuestionKind.CHOICE, ["No", "Yes", "Don't know", ""], ("Yes", "No"), missing)
    assert values.codes.tolist() == [1, 0, -1, -1]
    assert values.answered.tolist() == [True, True, False, False]
    assert np.isnan(values.numbers).all()


def test_an_answer_the_question_does_not_list_counts_as_no_answer():
    values = read(QuestionKind.CHOICE, ["Yes", "Perhaps"], ("Yes",))
    assert values.answered.tolist() == [True, False]
    assert values.reasons[MissingReason.NO_ANSWER].tolist() == [False, True]


def test_a_number_with_refusals_as_words_and_decimal_commas():
    missing = (MissingCode("refused", MissingReason.REFUSED),)
    values = read(QuestionKind.NUMBER, ["12,5", "refused", "3", "about five"], (), missing)
    np.testing.assert_array_equal(values.numbers, [12.5, np.nan, 3, np.nan])
    assert values.reasons[MissingReason.REFUSED].tolist() == [False, True, False, False]
    assert values.answered.tolist() == [True, False, True, False]
    assert values.chosen.shape == (4, 0)


def test_an_infinite_number_is_no_answer():
    values = read(QuestionKind.NUMBER, [1.0, np.inf, -np.inf])
    assert values.answered.tolist() == [True, False, False]


def test_open_proposals_are_not_applied():
    values = read(QuestionKind.NUMBER, [1.0, 99999.0])
    assert values.answered.all()


def test_text_is_answered_where_something_stands():
    values = read(QuestionKind.TEXT, ["good", " ", None, "k. A."])
    assert values.answered.tolist() == [True, False, False, True]
    assert np.isnan(values.numbers).all()


def test_blanks_count_as_not_asked_where_the_question_says_so():
    missing = (MissingCode("", MissingReason.NOT_ASKED),)
    values = read(QuestionKind.CHOICE, ["Yes", None, ""], ("Yes",), missing)
    assert values.asked.tolist() == [True, False, False]


def several(frame, missing=(), answers=None):
    columns = tuple(frame)
    question = asked_as(QuestionKind.SEVERAL, answers or columns, missing, columns)
    return read_values(question, pd.DataFrame(frame))


def test_several_answers_in_zeros_and_ones():
    values = several({"A": [1, 0, np.nan, 0], "B": [1, np.nan, np.nan, 1]})
    assert values.chosen.tolist() == [[True, True], [False, False], [False, False], [False, True]]
    assert values.answered.tolist() == [True, True, False, True]
    assert values.reasons[MissingReason.NO_ANSWER].tolist() == [False, False, True, False]
    assert (values.codes == -1).all()


@pytest.mark.parametrize(
    ("first", "second"),
    [
        ([1, 2, 2], [2, 1, 2]),
        (["Yes", "No", "No"], ["no", "ja", "nein"]),
        (["TRUE", "FALSE", "FALSE"], ["FALSE", "TRUE", "FALSE"]),
        ([True, False, False], [False, True, False]),
        (["1", "0", "0"], ["0", "1", "0"]),
    ],
)
def test_other_ways_to_say_yes_and_no(first, second):
    values = several({"A": first, "B": second})
    assert values.chosen.tolist() == [[True, False], [False, True], [False, False]]
    assert values.answered.all()


@pytest.mark.parametrize(
    ("first", "second"),
    [
        ([1, np.nan, np.nan], [np.nan, 1, np.nan]),
        ([1, np.nan, np.nan], [np.nan, 2, np.nan]),
        (["Elm", None, ""], ["", "Oak", None]),
        (["x", None, None], [None, "x", None]),
    ],
)
def test_blanks_for_not_chosen(first, second):
    values = several({"A": first, "B": second})
    assert values.chosen.tolist() == [[True, False], [False, True], [False, False]]
    assert values.answered.tolist() == [True, True, False]


def test_codes_in_the_cells_of_several_answers():
    values = several({"A": [1, 99, 99, -1], "B": [0, 99, 1, -1]}, (DONT_KNOW, NOT_ASKED))
    assert values.answered.tolist() == [True, False, True, False]
    assert values.reasons[MissingReason.DONT_KNOW].tolist() == [False, True, False, False]
    assert values.asked.tolist() == [True, True, True, False]
    assert not values.reasons[MissingReason.NO_ANSWER].any()


def test_an_option_that_is_no_answer():
    frame = {"A": [1, 0, 1, 0], "B": [0, 0, 0, 0], "DK": [0, 1, 1, 0]}
    missing = (MissingCode("DK", MissingReason.DONT_KNOW),)
    values = several(frame, missing, answers=("A", "B"))
    assert values.chosen.shape == (4, 2)
    assert values.reasons[MissingReason.DONT_KNOW].tolist() == [False, True, False, False]
    assert values.answered.tolist() == [True, False, True, True]


def test_all_arrays_are_read_only():
    values = read(QuestionKind.CHOICE, ["Yes", "No"], ("Yes", "No"))
    arrays = (values.numbers, values.codes, values.chosen, values.answered, values.asked)
    for array in (*arrays, *values.reasons.values()):
        assert not array.flags.writeable
    assert set(values.reasons) == set(MissingReason)


CELLS = st.lists(st.sampled_from([0, 1, 2, 5, 10, 98, 99, -1, None]), min_size=1, max_size=40)


@given(CELLS)
def test_every_row_is_answered_or_has_exactly_one_reason(cells):
    missing = (DONT_KNOW, REFUSED, NOT_ASKED)
    values = read(QuestionKind.SCALE, pd.array(cells, dtype="Float64"), SCALE_CODES, missing)
    marks = np.vstack([values.answered, *values.reasons.values()])
    assert (marks.sum(axis=0) == 1).all()
    assert values.answered.tolist() == [c is not None and 0 <= c <= 10 for c in cells]
    kept = [float(c) for c in cells if c is not None and 0 <= c <= 10]
    assert values.numbers[values.answered].tolist() == kept
    assert values.chosen.sum() == len(kept)


@given(st.lists(st.tuples(*[st.sampled_from([0, 1, 99, None])] * 3), min_size=1, max_size=30))
def test_several_answers_row_by_row(rows):
    frame = {
        name: pd.array(cells, dtype="Float64")
        for name, cells in zip("ABC", zip(*rows, strict=True), strict=True)
    }
    values = several(frame, (DONT_KNOW,))
    for i, row in enumerate(rows):
        said = [cell for cell in row if cell in (0, 1)]
        assert values.answered[i] == bool(said)
        assert values.chosen[i].tolist() == [cell == 1 for cell in row]
        assert values.reasons[MissingReason.DONT_KNOW][i] == (not said and 99 in row)
        assert values.reasons[MissingReason.NO_ANSWER][i] == (row == (None, None, None))
