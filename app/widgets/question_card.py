"""The chosen question: what it holds, what is proposed, and how to change it."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import partial

import numpy as np
import streamlit as st

from app.intake import FieldworkFile
from app.store import Database, StoredQuestion
from app.study.number_format import NO_BREAK, write_count, write_number, write_share
from app.study.question_guessing import guess_questions
from app.study.question_values import QuestionValues, read_values
from app.study.questions import Question, QuestionKind
from app.study.study import Study
from app.widgets import address, layout
from app.widgets.plain_text import as_html, as_typed

MOST_BARS = 14


def show_question(
    database: Database,
    study: Study,
    stored: StoredQuestion,
    questions: tuple[Question, ...],
    read: FieldworkFile,
) -> None:
    """Show one question with its evidence, its answers and its open proposals."""
    question, study_id, answers = stored.question, study.id, read.answers
    st.html(
        f'<h2 class="hw-card-head">{as_html(question.text)}</h2>'
        f'<p class="hr-soft">{as_html(_about(question))}</p>'
    )
    if set(question.columns) <= set(answers.columns):
        _show_answers(read_values(question, answers), study.decimal_mark)
    else:
        layout.problem("The current file does not have this question; figures on it wait.")
    for number, proposal in enumerate(question.proposals):
        st.html(
            f'<div class="hw-proposal" data-proposal="{number}"><p>{as_html(proposal.evidence)}</p>'
            f'<p class="hr-soft">{as_html(proposal.consequence)}</p></div>'
        )
    if question.needs_you:
        _show_choice(database, study_id, stored, questions)
    with st.container(horizontal=True):
        aside = "Take it back" if question.set_aside else "Set it aside"
        st.button(
            aside,
            key="set_aside",
            on_click=_set_aside,
            args=(database, study_id, stored),
        )
        st.button(
            "Undo: read it afresh from the file",
            key="read_afresh",
            on_click=_read_afresh,
            args=(database, study_id, stored, read),
        )


def _about(question: Question) -> str:
    """Return the kind and why it was read so; the evidence of a guess begins with the kind."""
    kind, why = question.kind.value, question.evidence
    if not why:
        return kind.capitalize()
    return why[:1].upper() + why[1:] if why.startswith(kind) else f"{kind.capitalize()}; {why}"


def _set_aside(database: Database, study_id: str, stored: StoredQuestion) -> None:
    question = stored.question
    _save(database, study_id, stored, replace(question, set_aside=not question.set_aside))


def _show_choice(
    database: Database, study_id: str, stored: StoredQuestion, questions: tuple[Question, ...]
) -> None:
    question = stored.question
    left = sum(q.needs_you for q in questions) - 1
    names = [_proposed(question), "as it is in the file"]
    key = f"choice_{question.columns[0]}_{stored.version}"
    st.radio("Count it", names, key=key)
    label = f"Accept, next ({left})" if left else "Accept"
    st.button(
        label,
        type="primary",
        key="accept",
        on_click=_accept,
        args=(database, study_id, stored, (key, names[0]), questions),
    )


def _proposed(question: Question) -> str:
    words = [f"{as_typed(p.code)} as {p.reason.value}" for p in question.proposals if p.reason]
    words += [f"as {p.kind.value}" for p in question.proposals if p.kind is not None]
    return ", ".join(words)


def _accept(
    database: Database,
    study_id: str,
    stored: StoredQuestion,
    choice: tuple[str, str],
    questions: tuple[Question, ...],
) -> None:
    """Settle the question as the round buttons stand now; `choice` is their key and "yes"."""
    settled = stored.question.settled(accept=st.session_state[choice[0]] == choice[1])
    if _save(database, study_id, stored, settled):
        address.write(q=_next(stored.question, questions))


def _next(question: Question, questions: tuple[Question, ...]) -> str:
    """Return the question to settle next: after this one, else the first one left."""
    keys = [q.key for q in questions]
    place = keys.index(question.key) if question.key in keys else 0
    around = [*questions[place + 1 :], *questions[:place]]
    return next((q.key for q in around if q.needs_you), question.key)


def _save(database: Database, study_id: str, stored: StoredQuestion, question: Question) -> bool:
    return layout.attempt(
        partial(database.save_question, study_id, question, version=stored.version)
    )


def _read_afresh(
    database: Database, study_id: str, stored: StoredQuestion, read: FieldworkFile
) -> None:
    """Put the guess of the file back; the whole file is read, for columns explain each other."""
    columns = set(stored.question.columns) & set(read.answers.columns)
    guesses = guess_questions(read.answers, read.question_texts)
    fresh = next((q for q in guesses if columns and columns <= set(q.columns)), None)
    if fresh is None:
        layout.later("This question cannot be read afresh: the file has lost its columns.")
        return
    _save(database, study_id, stored, replace(fresh, key=stored.question.key))


def _show_answers(values: QuestionValues, mark: str) -> None:
    """Show answers as bars in the colour of what people said, with who did not answer."""
    question = values.question
    base = int(values.answered.sum())
    if question.kind in (QuestionKind.NUMBER, QuestionKind.WEIGHT):
        lines = _number_lines(values, base, mark)
    elif question.kind in (QuestionKind.TEXT, QuestionKind.IDENTIFIER) or not base:
        lines = ""
    else:
        lines = _bars(values, base, mark)
    missing = " \u00b7 ".join(
        f"{write_count(int(rows.sum()), mark)} {reason.value}"
        for reason, rows in values.reasons.items()
        if rows.any()
    )
    counted = (f"{write_count(base, mark)} answered", missing)
    text = as_html(" \u00b7 ".join(part for part in counted if part))
    st.html(f'{lines}<p class="hr-soft hr-small">{text}</p>')


def _bars(values: QuestionValues, base: int, mark: str) -> str:
    parts = values.chosen[values.answered].sum(axis=0) / base
    most = max(float(parts.max(initial=0)), 0.01)
    shown = list(zip(values.question.answers, parts, strict=True))[:MOST_BARS]
    rows = "".join(
        f'<div class="hw-bar"><span class="hw-bar-name">{as_html(answer.label)}</span>'
        f'<span class="hw-bar-line"><span style="width:{100 * part / most:.1f}%"></span></span>'
        f'<span class="hw-bar-text">{write_share(part, mark)}{NO_BREAK}%</span></div>'
        for answer, part in shown
    )
    more = len(values.question.answers) - len(shown)
    short = all(len(answer.label) <= 4 for answer, _ in shown)
    rows = f'<div class="{"hw-bars-short" if short else "hw-bars"}">{rows}</div>'
    return rows + (f'<p class="hr-soft hr-small">and {more} more answers</p>' if more > 0 else "")


def _number_lines(values: QuestionValues, base: int, mark: str) -> str:
    if not base:
        return ""
    numbers = values.numbers[values.answered]
    ends = [*np.quantile(numbers, [0, 1, 0.5]), numbers.mean()]
    low, high, middle, average = (_short_number(float(x), mark) for x in ends)
    return f'<p class="hr-soft">from {low} to {high}, median {middle}, average {average}</p>'


def _short_number(number: float, mark: str) -> str:
    """Write a number to six figures, or all of them before the decimal mark."""
    if number == 0:
        return "0"
    step = 10.0 ** min(0, math.floor(math.log10(abs(number))) - 5)
    text = write_number(number, step, mark)
    return text.rstrip("0").rstrip(mark) if step < 1 else text
