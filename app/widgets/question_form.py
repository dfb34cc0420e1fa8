"""Text, kind, answers and missing codes of a question, typed by a person."""

from __future__ import annotations

from dataclasses import replace

import streamlit as st

from app.store import Database, StoredQuestion, StoreError
from app.study.questions import Answer, MissingCode, MissingReason, Question, QuestionKind
from app.widgets import layout

_SPLIT = " = "


def show_form(database: Database, study_id: str, stored: StoredQuestion) -> None:
    """Show the form; nothing is kept until every line is understood."""
    question = stored.question
    name = f"{question.columns[0]}_{stored.version}"
    with st.form(f"form_{name}", border=False):
        text = st.text_input("Question as asked", question.text, max_chars=500, key=f"text_{name}")
        kinds = _kinds(question)
        kind = st.selectbox(
            "Kind",
            kinds,
            index=kinds.index(question.kind),
            format_func=lambda k: k.value,
            key=f"kind_{name}",
        )
        answers = st.text_area(
            "Answers in order, one a line: code = label",
            "\n".join(f"{a.code}{_SPLIT}{a.label}" for a in question.answers),
            height=180,
            key=f"answers_{name}",
        )
        missing = st.text_area(
            "Codes that are no answers, one a line: code = reason "
            f"({', '.join(r.value for r in MissingReason)})",
            "\n".join(f"{m.code}{_SPLIT}{m.reason.value}" for m in question.missing),
            height=100,
            key=f"missing_{name}",
        )
        if not st.form_submit_button("Save the question"):
            return
    try:
        changed = edited(question, text, kind, answers, missing)
        database.save_question(study_id, changed, version=stored.version)
    except (StoreError, ValueError) as error:
        layout.problem(error.sentence if isinstance(error, StoreError) else str(error))
        return
    st.rerun()


def _kinds(question: Question) -> list[QuestionKind]:
    if len(question.columns) > 1:
        return [QuestionKind.SEVERAL]
    return [k for k in QuestionKind if k is not QuestionKind.SEVERAL or k is question.kind]


def edited(
    question: Question, text: str, kind: QuestionKind, answers: str, missing: str
) -> Question:
    """Return the question as typed.

    Raises
    ------
    ValueError
        With one sentence that names the line and what to do.
    """
    if not text.strip():
        raise ValueError("The question has no text: type how it was asked.")
    typed = tuple(Answer(code, label) for code, label in _lines(answers, "answers"))
    codes = tuple(
        MissingCode(code, _reason(code, reason)) for code, reason in _lines(missing, "codes")
    )
    _check(question, kind, typed, codes)
    return replace(
        question,
        text=" ".join(text.split()),
        kind=kind,
        answers=typed,
        missing=codes,
        proposals=tuple(p for p in question.proposals if p.code not in {c.code for c in codes}),
    )


def _lines(text: str, what: str) -> list[tuple[str, str]]:
    found = []
    for number, line in enumerate(text.splitlines(), 1):
        if not line.strip():
            continue
        code, mark, words = line.partition("=")
        if not mark or not words.strip():
            raise ValueError(
                f"Line {number} of the {what}, \u201c{line.strip()}\u201d, needs a code, an equals "
                "sign and words: write it like 1 = Yes."
            )
        found.append((code.strip(), words.strip()))
    return found


def _reason(code: str, words: str) -> MissingReason:
    plain = words.casefold().replace("\u2019", "'")
    for reason in MissingReason:
        if plain == reason.value:
            return reason
    reasons = ", ".join(r.value for r in MissingReason)
    raise ValueError(f"{code} = {words}: \u201c{words}\u201d is no reason; use one of {reasons}.")


def _check(
    question: Question,
    kind: QuestionKind,
    answers: tuple[Answer, ...],
    missing: tuple[MissingCode, ...],
) -> None:
    codes = [a.code for a in answers]
    double = next((c for c in codes if codes.count(c) > 1), None)
    if double is not None:
        raise ValueError(f"The code {double} stands twice among the answers: keep one line.")
    both = next((m.code for m in missing if m.code in codes), None)
    if both is not None:
        raise ValueError(f"{both} is an answer and a missing code: take it out of one list.")
    if kind in (QuestionKind.CHOICE, QuestionKind.SEVERAL) and not codes:
        raise ValueError("A question with answers to choose from needs at least one: type them.")
    if kind is QuestionKind.SEVERAL and (odd := set(codes) - set(question.columns)):
        raise ValueError(f"{sorted(odd)[0]} is no column of this question: keep the codes.")
