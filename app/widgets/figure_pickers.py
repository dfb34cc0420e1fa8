"""Choosing a figure: question, what is estimated, which answers, who."""

from __future__ import annotations

import json

import streamlit as st

from app.study.figure_requests import FigureRequest, Statistic
from app.study.figure_rows import groupings
from app.study.figures import default_request, statistics_of, takes_answers
from app.study.questions import Question
from app.study.study_data import StudyData
from app.widgets import address
from app.widgets.plain_text import as_typed, shortened

EVERYONE = "everyone"


def show_pickers(data: StudyData, request: FigureRequest) -> None:
    """Show the pickers; every choice is written into the address."""
    question = data.question(request.question)
    if question is None:
        return
    is_open = bool(st.session_state.get("pickers_open"))
    summary = _summary(data, request, question)
    with st.container(key="pickers_line"):
        st.button(
            f"{as_typed(summary)} \u2013 {'done' if is_open else 'change'}",
            key="pickers_toggle",
            type="tertiary",
            on_click=st.session_state.__setitem__,
            args=("pickers_open", not is_open),
        )
    with st.container(key="pickers_shown" if is_open else "pickers"):
        first, second, third, fourth = st.columns([4, 2, 3, 3])
        with first:
            _pick_question(data, question)
        with second:
            _pick_statistic(question, request)
        with third:
            if takes_answers(question, request.statistic):
                _pick_answers(question, request)
        with fourth:
            _pick_group(data, request)


def _summary(data: StudyData, request: FigureRequest, question: Question) -> str:
    who = "all"
    if request.group_question and (group := data.question(request.group_question)):
        who = group.label_of(request.group_answer)
    return f"{shortened(question.text, 40)} \u00b7 {who} \u00b7 {request.statistic.value}"


def _pick_question(data: StudyData, question: Question) -> None:
    usable = {q.key: q for q in data.questions if q.usable or q is question}

    def fresh(key: str) -> dict[str, str]:
        start = default_request(usable[key])
        return {
            "q": key,
            "s": start.statistic.value,
            "a": start.answers[0] if start.answers else "",
            "dk": "",
        }

    address.select(
        "Question",
        "q",
        list(usable),
        question.key,
        words=lambda key: f"{key} \u00b7 {usable[key].text}",
        also=fresh,
    )


def _pick_statistic(question: Question, request: FigureRequest) -> None:
    options = [s.value for s in statistics_of(question)]
    address.select(
        "Figure",
        "s",
        options,
        request.statistic.value,
        words=lambda value: {"total": "total in the universe"}.get(value, value),
        also=lambda value: {"s": value, "a": ""},
    )


def _pick_answers(question: Question, request: FigureRequest) -> None:
    key = "address_answers"
    st.session_state[key] = list(request.answers)

    def changed() -> None:
        chosen = st.session_state[key]
        address.write(a=chosen[0] if len(chosen) == 1 else json.dumps(chosen) if chosen else "")

    st.multiselect(
        "Answers counted together",
        [a.code for a in question.answers],
        key=key,
        format_func=question.label_of,
        on_change=changed,
        placeholder="Choose an answer",
    )


def _pick_group(data: StudyData, request: FigureRequest) -> None:
    options = {EVERYONE: ("", "")}
    names = {EVERYONE: f"all {data.plan.unit_many}"}
    for question in groupings(data):
        if question.key == request.question and request.statistic is Statistic.SHARE:
            continue
        for answer in question.answers:
            value = json.dumps([question.key, answer.code])
            options[value] = (question.key, answer.code)
            names[value] = f"{answer.label} \u00b7 {shortened(question.text, 40)}"
    chosen = json.dumps([request.group_question, request.group_answer])
    key = "address_group"
    st.session_state[key] = chosen if chosen in options else EVERYONE

    def changed() -> None:
        group, answer = options[st.session_state[key]]
        address.write(g=group, ga=answer)

    st.selectbox("Who", list(options), key=key, format_func=names.__getitem__, on_change=changed)
