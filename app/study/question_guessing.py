"""Guess the questions of any fieldwork file: every guess with its evidence, doubts as proposals."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pandas as pd

from app.study.answer_orders import order_labels
from app.study.column_profiles import ColumnProfile, profile_column
from app.study.missing_codes import (
    number_codes,
    number_proposals,
    word_codes,
    word_proposals,
    write_value,
)
from app.study.number_format import write_count, write_plain
from app.study.question_hints import asks_for_number, told_meanings
from app.study.questions import Answer, MissingReason, Proposal, Question, QuestionKind
from app.study.scale_guessing import labelled_points, scale_ends, share_scale_ends
from app.study.several_answers import find_sets, set_question
from app.study.special_columns import guess_special

_FEW = 12  # codes up to this many are a choice
_LABELS = 30  # labels up to this many are a choice
_LABELS_OF_MANY = 200  # more labels are a choice only where each is given often
_TRIED = 200  # values looked at for a pattern
_LONG = 60  # characters: longer texts are written by people
_SEPARATED = re.compile(r"[^;|]+([;|][^;|]+)+")


def guess_questions(answers: pd.DataFrame, question_texts: dict[str, str]) -> tuple[Question, ...]:
    """Return the questions of a fieldwork file in the order of its columns.

    Parameters
    ----------
    answers : DataFrame
        (n rows) one column of numbers or text for each column of the file.
    question_texts : dict of str to str
        Texts of a second header row by column; may be empty.
    """
    profiles = tuple(profile_column(str(name), answers[name]) for name in answers.columns)
    texts = {column: text.strip() for column, text in question_texts.items() if text.strip()}
    columns = {profile.name for profile in profiles}
    sets = {run[0].name: run for run in find_sets(profiles, texts)}
    inside = {profile.name for run in sets.values() for profile in run}
    questions: list[Question] = []
    for profile in profiles:
        if profile.name in sets:
            questions.append(set_question(sets[profile.name], texts, columns))
        elif profile.name not in inside:
            questions.append(guess_column(profile, texts.get(profile.name, "")))
    return share_scale_ends(tuple(questions), texts)


def guess_column(profile: ColumnProfile, text: str) -> Question:
    """Return the question of one column.

    Parameters
    ----------
    profile : ColumnProfile
        What the column holds.
    text : str
        The question text; "" for none.
    """
    special = guess_special(profile, text)
    if special is not None:
        return special
    words = {} if profile.all_numbers else word_codes(profile)
    rest = profile.without(set(words))
    if rest.filled and rest.all_numbers and not rest.leading_zeros:
        return _guess_numbers(profile, rest, words, text)
    return _guess_texts(profile, rest, words, text)


def as_kind(question: Question, kind: QuestionKind, answers: pd.DataFrame) -> Question:
    """Return the question as a person wants it read, with the answers that kind needs.

    Parameters
    ----------
    question : Question
        As guessed or stored.
    kind : QuestionKind
        How it was really asked.
    answers : DataFrame
        The rows of the file.

    Raises
    ------
    ValueError
        When a question of several columns should be of a kind that has only one.
    """
    if len(question.columns) > 1 and kind is not QuestionKind.SEVERAL:
        raise ValueError(
            f"{question.key} holds several answers in {len(question.columns)} columns: "
            "leave it as it is, or set it aside."
        )
    if question.kind is kind:
        return replace(question, set_aside=False)
    profile = profile_column(question.columns[0], answers[question.columns[0]])
    rest = profile.without({code.code for code in question.missing})
    found: tuple[Answer, ...] = ()
    if kind is QuestionKind.SEVERAL:
        found = (Answer(question.columns[0], question.text),)
    elif kind in (QuestionKind.SCALE, QuestionKind.CHOICE):
        found = _answers(rest, question)
    return replace(
        question,
        kind=kind,
        answers=found,
        evidence=f"{kind.value}, as set by you",
        proposals=tuple(p for p in question.proposals if p.reason is not None),
        set_aside=False,
    )


def _answers(rest: ColumnProfile, question: Question) -> tuple[Answer, ...]:
    order = rest.texts if rest.all_numbers else order_labels(rest)[0]
    return tuple(Answer(code, question.label_of(code)) for code in order)


def _guess_numbers(
    profile: ColumnProfile, rest: ColumnProfile, words: dict[str, MissingReason], text: str
) -> Question:
    codes = number_codes(rest, text)
    clean = rest.without(set(codes))
    proposals = number_proposals(profile, codes | words)
    ends = scale_ends(clean, text)
    left_out = (*codes, *words)
    if ends is not None:
        return _scale(profile, clean, ends, left_out, proposals, text)
    if _is_coded_choice(clean, text):
        return _coded_choice(profile, clean, codes | words, text)
    distinct = write_count(clean.distinct)
    why = f"number, because it holds {distinct} different numbers{_range(clean)}"
    if asks_for_number(text) and clean.distinct <= _FEW:
        why = f"number, because the question asks how many or how much{_range(clean)}"
    return _question(profile, QuestionKind.NUMBER, text, why, proposals=proposals)


def _scale(
    profile: ColumnProfile,
    clean: ColumnProfile,
    ends: tuple[int, int],
    left_out: tuple[str, ...],
    proposals: tuple[Proposal, ...],
    text: str,
) -> Question:
    low, high = ends
    points = [str(point) for point in range(low, high + 1)]
    why = (
        f"scale, because it holds whole numbers from {write_plain(clean.numbers[0])} to "
        f"{write_plain(clean.numbers[-1])}; read as {write_plain(low)} to {write_plain(high)}"
    )
    codes = (*points, *left_out)
    return _question(profile, QuestionKind.SCALE, text, why, codes=codes, proposals=proposals)


def _is_coded_choice(clean: ColumnProfile, text: str) -> bool:
    """Whether few whole numbers, each given by several, are codes of answers."""
    numbers = clean.numbers
    whole = bool((numbers == np.round(numbers)).all())
    if not whole or asks_for_number(text) or clean.distinct > _FEW:
        return False
    if set(clean.texts) <= set(told_meanings(text)):
        return True
    narrow = numbers[-1] - numbers[0] < 2 * _FEW
    return clean.distinct <= 2 or bool(narrow and clean.filled >= 3 * clean.distinct)


def _coded_choice(
    profile: ColumnProfile, clean: ColumnProfile, left_out: dict[str, MissingReason], text: str
) -> Question:
    why = (
        f"one answer, because it holds only {write_count(clean.distinct)} different codes; "
        "answers in the order of their codes"
    )
    codes = (*clean.texts, *left_out)
    proposals = word_proposals(profile, left_out)
    question = _question(profile, QuestionKind.CHOICE, text, why, codes=codes, proposals=proposals)
    meanings = told_meanings(text)
    labelled = tuple(replace(a, label=meanings.get(a.code, a.code)) for a in question.answers)
    return replace(question, answers=labelled)


def _guess_texts(
    profile: ColumnProfile, rest: ColumnProfile, words: dict[str, MissingReason], text: str
) -> Question:
    proposals = word_proposals(profile, words)
    points = labelled_points(rest)
    if points:
        why = "scale, because it holds a row of whole numbers, some of them with words"
        codes = (*points, *words)
        return _question(profile, QuestionKind.SCALE, text, why, codes=codes, proposals=proposals)
    if _holds_labels(rest):
        order, said = order_labels(profile)
        why = (
            f"one answer, because it holds only {write_count(rest.distinct)} different labels"
            f"{' besides ' + ', '.join(words) if words else ''}; {said}"
        )
        return _question(profile, QuestionKind.CHOICE, text, why, codes=order, proposals=proposals)
    return _question(profile, QuestionKind.TEXT, text, _text_evidence(rest))


def _text_evidence(rest: ColumnProfile) -> str:
    distinct, cells = write_count(rest.distinct), write_count(rest.filled)
    why = f"open text, because it holds {distinct} different texts in {cells} cells"
    if not _holds_lists(rest):
        return why
    return f"{why}; many cells hold several answers: have each answer delivered in its own column"


def _holds_lists(rest: ColumnProfile) -> bool:
    """Whether most cells are lists of few short answers: "1;3;9"."""
    lists = [t for t in rest.texts[:_TRIED] if _SEPARATED.fullmatch(t)]
    parts = [part.strip() for t in lists for part in re.split("[;|]", t)]
    if not parts or len(lists) < 0.3 * len(rest.texts[:_TRIED]):
        return False
    return max(map(len, parts)) <= 40 and len(set(parts)) <= len(parts) / 2


def _holds_labels(rest: ColumnProfile) -> bool:
    if not 1 <= rest.distinct <= _LABELS_OF_MANY:
        return False
    length = float(np.mean([len(t) for t in rest.texts]))
    often = rest.filled / rest.distinct
    if length > _LONG:
        return rest.distinct <= _FEW and often >= 10
    return often >= 2 if rest.distinct <= _LABELS else often >= 20


def _question(
    profile: ColumnProfile,
    kind: QuestionKind,
    text: str,
    evidence: str,
    *,
    codes: tuple[str, ...] = (),
    proposals: tuple[Proposal, ...] = (),
) -> Question:
    return Question(
        key=profile.name,
        columns=(profile.name,),
        kind=kind,
        text=text or profile.name,
        answers=tuple(Answer(code, code) for code in codes),
        proposals=proposals,
        evidence=evidence,
    )


def _range(clean: ColumnProfile) -> str:
    low, high = (write_value(float(x)) for x in clean.numbers[[0, -1]])
    return f", from {low} to {high}"
