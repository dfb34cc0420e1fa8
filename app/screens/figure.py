"""Figure: the number, the sentence, the fan, and what stands beside it."""

import streamlit as st

from app.store import StoreError
from app.study.figure_steps import steps_of
from app.study.figures import FigureError, compute_figure
from app.study.sentences import describe
from app.widgets import figure_view, layout
from app.widgets.cached_work import database
from app.widgets.figure_address import from_address, mended_words
from app.widgets.figure_pickers import show_pickers
from app.widgets.figure_rails import rows_beside, show_rails, step_among
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
rows = rows_beside(data, request, question) if question and question.usable else ()
step = step_among(rows, request)
figure = None
try:
    figure = compute_figure(data, request)
    text = describe(data, figure, step=step)
except FigureError as error:
    with left:
        layout.problem(str(error))
if figure is not None:
    with left:
        figure_view.show_number(data, figure, text)
        figure_view.show_fan(data, figure, text, step)
with right:
    if figure is not None:
        try:
            show_keep(database(), opened.study, data, request, text)
        except StoreError as error:
            layout.store_problem(error)
    if question and question.usable:
        show_rails(data, request, question, rows)
if figure is not None:
    with st.expander("How this number came about"):
        figure_view.show_steps(steps_of(data, figure, file_name=file.file_name, step=step))
    with st.expander("Numbers as a table"):
        figure_view.show_rows_table(rows, data.study.decimal_mark)
    with st.expander("Method"):
        figure_view.show_method(data, figure, step)
        show_limit_form(database(), opened.study)
