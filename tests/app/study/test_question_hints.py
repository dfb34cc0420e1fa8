from __future__ import annotations

import pytest

from app.study.question_hints import (
    asks_for_number,
    asks_for_rating,
    asks_which,
    told_ends,
    told_meanings,
)


@pytest.mark.parametrize(
    ("text", "ends"),
    [
        ("How satisfied are you? (0 to 10)", (0, 10)),
        ("Rate us from 1 - 5", (1, 5)),
        ("The fee is fair (1 = not at all, 5 = fully)", (1, 5)),
        ("Skala von 1 bis 7", (1, 7)),
        ("From -3 to 3", (-3, 3)),
        ("In the years 2019 to 2024", None),
        ("Which of 18 to 24 shops?", None),
        ("Satisfaction", None),
    ],
)
def test_ends_of_a_scale(text, ends):
    assert told_ends(text) == ends


def test_what_a_question_asks_for():
    assert asks_for_number("How many people work here?")
    assert not asks_for_number("How many points (0 to 10) do you give?")
    assert asks_for_rating("How likely are you to recommend us?")
    assert asks_which("In which region do you work?")
    assert not asks_which("Which rating on a scale do you give?")


def test_meanings_of_codes():
    assert told_meanings("Are you a member? (1 = yes, 2 = no, 9: no answer)") == {
        "1": "yes",
        "2": "no",
        "9": "no answer",
    }
