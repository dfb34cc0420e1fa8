"""Whether a column of small whole numbers is a scale, and where that scale ends."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np

from app.study.column_profiles import ColumnProfile, leading_numbers
from app.study.number_format import write_plain
from app.study.question_hints import asks_for_number, asks_which, told_ends
from app.study.questions import Answer, Question, QuestionKind
from app.study.several_answers import column_stem

_WHOLE = re.compile(r"-?\d+")


def scale_ends(clean: ColumnProfile, text: str) -> tuple[int, int] | None:
    """Return the lowest and highest point of the scale a column holds, or None.

    Parameters
    ----------
    clean : ColumnProfile
        Of a column of numbers, without codes for no answer.
    text : str
        The question text; may name the ends, "(0 to 10)".
    """
    numbers = clean.numbers
    if not clean.distinct or not bool((numbers == np.round(numbers)).all()):
        return None
    low, high = int(numbers[0]), int(numbers[-1])
    told = told_ends(text)
    if told is not None and told[0] <= low and high <= told[1]:
        return told
    if asks_for_number(text) or asks_which(text):
        return None
    return _usual_ends(low, high, clean.distinct)


def _usual_ends(low: int, high: int, distinct: int) -> tuple[int, int] | None:
    """Return the ends where at least five points, nearly all of them used, lie within 0 to 10."""
    points = high - low + 1
    if low < 0:
        return (low, high) if low == -high and high <= 5 and points >= 5 else None
    if high > 10 or points < 5 or distinct < max(4, round(0.6 * points)):
        return None
    return min(low, 1), high


def labelled_points(profile: ColumnProfile) -> tuple[str, ...]:
    """Return the points of a scale of which only some carry words, "10 - very good"; or nothing.

    Parameters
    ----------
    profile : ColumnProfile
        Of a column of text, without words for no answer.
    """
    if not 5 <= profile.distinct <= 11 or np.isfinite(profile.numbers).sum() < 3:
        return ()
    numbers = leading_numbers(tuple(profile.texts))
    order = np.argsort(numbers, kind="stable")
    if not bool((np.diff(numbers[order]) == 1).all()) or numbers.min() not in (0, 1):
        return ()
    return tuple(profile.texts[i] for i in order.tolist())


def share_scale_ends(
    questions: tuple[Question, ...], texts: dict[str, str]
) -> tuple[Question, ...]:
    """Return the questions with the same scale in all columns of one grid.

    Parameters
    ----------
    questions : tuple of Question
        As guessed column by column.
    texts : dict of str to str
        Question texts by column.
    """
    grids: dict[str, list[Question]] = {}
    for question in questions:
        if question.kind is QuestionKind.SCALE and _points(question):
            grids.setdefault(column_stem(question.columns[0], texts), []).append(question)
    widened = {
        question.key: _widened(question, grid)
        for stem, grid in grids.items()
        if stem and len(grid) > 1
        for question in grid
    }
    return tuple(widened.get(question.key, question) for question in questions)


def _points(question: Question) -> list[int]:
    """Return the points as whole numbers; none where some carry words."""
    left_out = {proposal.code for proposal in question.proposals}
    codes = [a.code for a in question.answers if a.code not in left_out]
    return [int(code) for code in codes] if all(map(_WHOLE.fullmatch, codes)) else []


def _widened(question: Question, grid: list[Question]) -> Question:
    """Return the question on the scale of its grid; a code that is a point of it is no doubt."""
    low = min(min(_points(q)) for q in grid)
    high = max(max(_points(q)) for q in grid)
    own = _points(question)
    if (own[0], own[-1]) == (low, high) or high - low > 10:
        return question
    codes = [str(point) for point in range(low, high + 1)]
    left_out = [a for a in question.answers[len(own) :] if a.code not in codes]
    said = question.evidence.partition("; read as")[0]
    ends = f"{write_plain(low)} to {write_plain(high)}"
    return replace(
        question,
        answers=(*(Answer(code, code) for code in codes), *left_out),
        proposals=tuple(p for p in question.proposals if p.code not in codes),
        evidence=f"{said}; read as {ends} like its neighbours",
    )
