"""Questions: what needs a person first, one at a time, with evidence and consequence."""

import streamlit as st

from app.store import UnknownQuestionError
from app.widgets import address, layout
from app.widgets.cached_work import database, read_file
from app.widgets.question_card import show_question
from app.widgets.question_form import show_form
from app.widgets.question_list import (
    show_accept_all,
    show_counts,
    show_filter,
    show_list,
    show_way_to_all,
)

layout.dress()
opened = layout.open_study()
layout.journey("questions", opened)
st.title("Questions", anchor=False)
layout.show_later_message()
file = layout.file_first(opened)
questions = opened.questions
show_counts(questions)
left, right = st.columns([7, 5], gap="large")
with left:
    shown = show_filter(questions)
keys = [q.key for q in questions]
named = address.read("q")
opening = [q for q in shown if q.needs_you or q.usable] or list(shown) or list(questions)
first = next(iter(opening), None)
chosen = named if named in keys else (first.key if first else "")
with right, st.container(key="question_card"):
    if named and named not in keys:
        layout.problem(f"This study has no question {named}: choose one from the list.")
    if not opened.needs_you:
        layout.say("Nothing needs you here. Every question is understood or settled.")
    try:
        stored = database().stored_question(opened.study.id, chosen)
        show_question(database(), opened.study, stored, questions, read_file(file))
        with st.expander("Text, kind, codes and order"):
            show_form(database(), opened.study.id, stored)
    except UnknownQuestionError:
        layout.say("Choose a question.")
    with st.container(horizontal=True):
        query = {"study": opened.study.id}
        if chosen and any(q.key == chosen and q.usable for q in questions):
            st.page_link(
                "screens/figure.py",
                label="Figure of this question",
                query_params={**query, "q": chosen},
            )
        st.page_link("screens/plan.py", label="On to the sampling plan", query_params=query)
with left:
    show_list(shown, chosen)
    show_way_to_all(questions, shown)
    show_accept_all(database(), opened.study.id)
