from __future__ import annotations

import pytest

from app.study.missing_words import is_chosen, is_not_chosen, reason_of_word
from app.study.questions import MissingReason


@pytest.mark.parametrize(
    ("word", "reason"),
    [
        ("Don't know", MissingReason.DONT_KNOW),
        ("DON’T KNOW ", MissingReason.DONT_KNOW),
        ("[don't know]", MissingReason.DONT_KNOW),
        ("Weiß nicht", MissingReason.DONT_KNOW),
        ("weiss nicht", MissingReason.DONT_KNOW),
        ("ne sait pas", MissingReason.DONT_KNOW),
        ("Refused", MissingReason.REFUSED),
        ("Prefer not to say", MissingReason.REFUSED),
        ("verweigert", MissingReason.REFUSED),
        ("not asked", MissingReason.NOT_ASKED),
        ("trifft  nicht zu", MissingReason.NOT_ASKED),
        ("no answer", MissingReason.NO_ANSWER),
        ("k. A.", MissingReason.NO_ANSWER),
        ("k.A.", MissingReason.NO_ANSWER),
        ("n/a", MissingReason.NO_ANSWER),
        ("sin respuesta", MissingReason.NO_ANSWER),
        (".", MissingReason.NO_ANSWER),
    ],
)
def test_words_for_no_answer(word, reason):
    assert reason_of_word(word) is reason


@pytest.mark.parametrize(
    "word", ["None", "NA", "null", "nan", "No", "Yes", "Other", "Refuse", "Known", "", "0"]
)
def test_words_that_are_answers(word):
    assert reason_of_word(word) is None


def test_plain_yes_and_no_in_several_languages():
    assert all(map(is_chosen, ("Yes", "ja", "X", "TRUE", "genannt", "oui")))
    assert all(map(is_not_chosen, ("No", "nein", "FALSE", "not selected", "non")))
    assert not is_chosen("Lindenroot")
    assert not is_not_chosen("Lindenroot")
