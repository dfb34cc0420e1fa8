"""Rows that are kept, rows that are set aside."""

from __future__ import annotations

import numpy as np

from tests.support.studies import choice, data_of, number

QUESTIONS = [choice("Q4", "Yes", "No"), number()]


def test_who_answered_nothing_at_all_is_set_aside():
    data = data_of({"Q4": ["Yes", None, None], "Q5": [np.nan, np.nan, 3.0]}, QUESTIONS)
    assert (data.received, data.set_aside, len(data.answers)) == (3, 1, 2)
    assert data.answers.index.tolist() == [0, 1]
    assert data.built.design.n == 2


def test_where_nobody_answered_all_rows_stay():
    data = data_of({"Q4": [None, None], "Q5": [np.nan, np.nan]}, QUESTIONS)
    assert (data.set_aside, len(data.answers), data.built.design.n) == (0, 2, 2)


def test_questions_by_key():
    data = data_of({"Q4": ["Yes"], "Q5": [1.0]}, QUESTIONS)
    assert data.question("Q5") is data.questions[1]
    assert data.question("Q6") is None
