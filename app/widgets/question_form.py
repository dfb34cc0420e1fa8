"""Text, kind, answers and missing codes of a question, typed by a person."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace

import streamlit as st

from app.store import Database, StoredQuestion, StoreError
from app.study.questions import (
    Answer,
    MissingCode,
    MissingReason,
    Proposal,
    Question,
    QuestionKind,
)
from app.widgets import layout

_SPLIT = " = "
_PARTS = ("text", "kind", "answers", "missing")


def show_form(database: Database, study_id: str, stored: StoredQuestion) -> None:
    """Show the form; nothing is kept until every line is understood, nothing typed is lost."""
    question = stored.question
    name = f"{question.columns[0]}_{stored.version}"
    draft = f"draft_{study_id}_{question.key}"
    *typed, sentence = st.session_state.get(draft, [*_as_stored(question), ""])
    for part, value in zip(_PARTS, typed, strict=True):
        st.session_state.setdefault(f"{part}_{name}", value)
    with st.form(f"form_{name}", border=False):
        _show_fields(question, name)
        st.form_submit_button(
            "Save the question", on_click=_save, args=(database, study_id, stored, name)
        )
    if sentence:
        layout.problem(sentence)
        st.button("Take what is stored", key="drop_draft", on_click=_drop_draft, args=(draft, name))


def _as_stored(question: Question) -> tuple[str, QuestionKind, str, str]:
    return (
        question.text,
        question.kind,
        as_lines([(a.code, a.label) for a in question.answers]),
        as_lines([(m.code, m.reason.value) for m in question.missing]),
    )


def _show_fields(question: Question, name: str) -> None:
    st.text_input("Question as asked", max_chars=500, key=f"text_{name}")
    st.selectbox("Kind", _kinds(question), format_func=lambda k: k.value, key=f"kind_{name}")
    st.text_area("Answers in order, one a line: code = label", height=180, key=f"answers_{name}")
    st.text_area(
        "Codes that are no answers, one a line: code = reason "
        f"({', '.join(r.value for r in MissingReason)})",
        height=100,
        key=f"missing_{name}",
    )


def _save(database: Database, study_id: str, stored: StoredQuestion, name: str) -> None:
    """Keep what was typed, or put it aside with the reason: a newer state brings a newer form."""
    text, kind, answers, missing = typed = [st.session_state[f"{part}_{name}"] for part in _PARTS]
    draft = f"draft_{study_id}_{stored.question.key}"
    try:
        changed = edited(stored.question, text, kind, answers, missing)
        database.save_question(study_id, changed, version=stored.version)
    except (StoreError, ValueError) as error:
        st.session_state[draft] = [*typed, str(error)]
    else:
        st.session_state.pop(draft, None)


def _drop_draft(draft: str, name: str) -> None:
    for key in (draft, *(f"{part}_{name}" for part in _PARTS)):
        st.session_state.pop(key, None)


def _kinds(question: Question) -> list[QuestionKind]:
    if len(question.columns) > 1:
        return [QuestionKind.SEVERAL]
    return [k for k in QuestionKind if k is not QuestionKind.SEVERAL or k is question.kind]


def as_lines(pairs: list[tuple[str, str]]) -> str:
    """Return codes and words as lines to edit, each on one line whatever the words hold."""
    return "\n".join(f"{code}{_SPLIT}{' '.join(words.split())}" for code, words in pairs)


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
        MissingCode(code, _reason(code, reason))
        for code, reason in _lines(missing, "codes", blank=True)
    )
    _check(question, kind, typed, codes)
    return replace(
        question,
        text=" ".join(text.split()),
        kind=kind,
        answers=typed,
        missing=codes,
        proposals=tuple(p for p in question.proposals if _stays_open(p, question, kind, codes)),
    )


def _stays_open(
    proposal: Proposal, question: Question, kind: QuestionKind, codes: tuple[MissingCode, ...]
) -> bool:
    """Whether a proposal is not settled by what was typed."""
    if proposal.reason is None:
        return kind is question.kind
    return proposal.code not in {code.code for code in codes}


def _lines(text: str, what: str, *, blank: bool = False) -> list[tuple[str, str]]:
    """Return code and words of each line; a blank code stands for empty cells."""
    found = []
    for number, line in enumerate(text.splitlines(), 1):
        if not line.strip():
            continue
        code, mark, words = line.partition(_SPLIT if _SPLIT in line else "=")
        if not mark or not words.strip() or not (blank or code.strip()):
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


def _check_double(codes: list[str], where: str) -> None:
    double = next((code for code, count in Counter(codes).items() if count > 1), None)
    if double is not None:
        named = f"The code {double}" if double else "The line without a code"
        raise ValueError(f"{named} stands twice among the {where}: keep one line.")


def _check(
    question: Question,
    kind: QuestionKind,
    answers: tuple[Answer, ...],
    missing: tuple[MissingCode, ...],
) -> None:
    codes = [a.code for a in answers]
    _check_double(codes, "answers")
    _check_double([m.code for m in missing], "codes that are no answers")
    both = next((m.code for m in missing if m.code in codes), None)
    if both is not None:
        raise ValueError(f"{both} is an answer and a missing code: take it out of one list.")
    if kind in (QuestionKind.CHOICE, QuestionKind.SEVERAL) and not codes:
        raise ValueError("A question with answers to choose from needs at least one: type them.")
    if kind is QuestionKind.SEVERAL and (odd := set(codes) - set(question.columns)):
        raise ValueError(f"{sorted(odd)[0]} is no column of this question: keep the codes.")
