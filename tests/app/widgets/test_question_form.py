"""A question as typed by a person: understood, or refused in one sentence."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.study.questions import (
    Answer,
    MissingCode,
    MissingReason,
    Proposal,
    Question,
    QuestionKind,
)
from app.widgets.question_form import as_lines, edited
from tests.support.studies import choice, question, scale

ASKED = choice("Q4", "1", "2")
NEEDS = "needs a code, an equals sign and words: write it like 1 = Yes."
ANSWERS = "1 = Yes\n2 = No"


def typed(question_=ASKED, text="Do you?", kind=QuestionKind.CHOICE, answers=ANSWERS, missing=""):
    return edited(question_, text, kind, answers, missing)


def test_what_is_typed_is_taken():
    changed = typed(text="  Do   you? ", missing="99=Don\u2019t know\n\n = not asked")
    assert changed.text == "Do you?"
    assert changed.answers == (Answer("1", "Yes"), Answer("2", "No"))
    assert changed.missing == (
        MissingCode("99", MissingReason.DONT_KNOW),
        MissingCode("", MissingReason.NOT_ASKED),
    )


def test_what_is_shown_comes_back_unchanged():
    odd = (Answer("a=b", "x = y"), Answer("1", "two\nlines"), Answer("2", " 3=4 "))
    asked = replace(ASKED, answers=odd)
    lines = as_lines([(a.code, a.label) for a in odd])
    assert lines == "a=b = x = y\n1 = two lines\n2 = 3=4"
    assert typed(asked, answers=lines).answers == (
        Answer("a=b", "x = y"),
        Answer("1", "two lines"),
        Answer("2", "3=4"),
    )
    blank = MissingCode("", MissingReason.NOT_ASKED)
    lines = as_lines([(blank.code, blank.reason.value)])
    assert typed(missing=lines).missing == typed(missing=lines.strip()).missing == (blank,)


@pytest.mark.parametrize(
    ("more", "sentence"),
    [
        ({"text": "  "}, "The question has no text: type how it was asked."),
        (
            {"answers": "1 = Yes\nNo"},
            f"Line 2 of the answers, \u201cNo\u201d, {NEEDS}",
        ),
        (
            {"answers": "1 ="},
            f"Line 1 of the answers, \u201c1 =\u201d, {NEEDS}",
        ),
        (
            {"answers": "= Yes"},
            f"Line 1 of the answers, \u201c= Yes\u201d, {NEEDS}",
        ),
        (
            {"missing": "99"},
            f"Line 1 of the codes, \u201c99\u201d, {NEEDS}",
        ),
        (
            {"missing": "99 = dunno"},
            "99 = dunno: \u201cdunno\u201d is no reason; use one of don't know, refused, not "
            "asked, no answer.",
        ),
        (
            {"answers": "1 = Yes\n1 = No"},
            "The code 1 stands twice among the answers: keep one line.",
        ),
        (
            {"missing": "99 = refused\n99 = don't know"},
            "The code 99 stands twice among the codes that are no answers: keep one line.",
        ),
        (
            {"missing": "= refused\n= not asked"},
            "The line without a code stands twice among the codes that are no answers: keep one "
            "line.",
        ),
        (
            {"missing": "2 = refused"},
            "2 is an answer and a missing code: take it out of one list.",
        ),
        (
            {"answers": ""},
            "A question with answers to choose from needs at least one: type them.",
        ),
        (
            {
                "question_": question("Q7", QuestionKind.SEVERAL, ("A", "B")),
                "kind": QuestionKind.SEVERAL,
                "answers": "A = Ale\nC = Cider",
            },
            "C is no column of this question: keep the codes.",
        ),
    ],
)
def test_what_is_not_understood_is_said(more, sentence):
    with pytest.raises(ValueError) as refusal:
        typed(**more)
    assert str(refusal.value) == sentence


def open_question() -> Question:
    about_code = Proposal("99", MissingReason.DONT_KNOW, None, "99 stands apart.", "")
    about_kind = Proposal("", None, QuestionKind.NUMBER, "Many numbers.", "")
    return replace(scale(), missing=(), proposals=(about_code, about_kind))


def test_typing_settles_the_proposals_it_answers():
    asked = open_question()
    same = edited(asked, asked.text, asked.kind, "", "")
    assert same.proposals == asked.proposals
    code = edited(asked, asked.text, asked.kind, "", "99 = refused\n= not asked")
    assert [p.code for p in code.proposals] == [""]
    kind = edited(asked, asked.text, QuestionKind.NUMBER, "", "")
    assert [p.code for p in kind.proposals] == ["99"]
