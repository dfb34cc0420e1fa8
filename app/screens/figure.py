"""Figure: the number, the sentence, the fan, and what stands beside it."""

import streamlit as st

from app.store import StoreError
from app.study.figure_steps import steps_of
from app.widgets import figure_view, layout
from app.widgets.cached_work import database, figure_work
from app.widgets.figure_address import from_address, mended_words
from app.widgets.figure_pickers import show_pickers
from app.widgets.figure_rails import show_rails, split_in_address
from app.widgets.house_limit import show_limit_form
from app.widgets.keeping import show_keep

layout.dress()
opened = layout.open_study()
layout.journey("figure", opened)
layout.show_later_message()
file = layout.file_first(opened)
data = opened.data()
request = from_address(data)
if request is None:
    st.title("Figure", anchor=False)
    layout.problem("No question of this file can be counted: look at the Questions screen.")
    st.page_link("screens/questions.py", label="Questions", query_params={"study": opened.study.id})
    st.stop()

if mended := mended_words(request):
    layout.problem(mended)
show_pickers(data, request)
layout.show_standing(data, request, opened)
left, right = st.columns([8, 4], gap="large")
question = data.question(request.question)
split = split_in_address(data, request, question) if question else ""
work = figure_work(data, request, split)
with left:
    if work.shown is None:
        layout.problem(work.reason)
    else:
        figure_view.show_number(data, work.shown)
        figure_view.show_fan(work.shown)
with right:
    if work.shown is not None:
        try:
            show_keep(database(), opened.study, data, request, work.shown.text)
        except StoreError as error:
            layout.store_problem(error)
    if question and question.usable:
        show_rails(data, request, question, work.rows)
if work.shown is not None:
    figure, step = work.shown.figure, work.shown.step
    with st.expander("How this number came about"):
        figure_view.show_steps(steps_of(data, figure, file_name=file.file_name, step=step))
    with st.expander("Numbers as a table"):
        figure_view.show_rows_table(work.rows, data.study.decimal_mark)
    with st.expander("Method"):
        figure_view.show_method(data, figure, step)
        show_limit_form(database(), opened.study)
