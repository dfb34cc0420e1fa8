"""A first figure at once, marked as provisional."""

from __future__ import annotations

import streamlit as st

from app.charts.rail_svg import rail_html
from app.study.figure_rows import single_row
from app.study.figures import FigureError, compute_figure, default_request
from app.study.sentences import describe, value_words
from app.widgets import layout
from app.widgets.figure_address import first_question, to_address
from app.widgets.layout import OpenStudy
from app.widgets.plain_text import as_html


def show_first_figure(opened: OpenStudy) -> None:
    """Show the figure a study opens with, and the ways on."""
    data = opened.data()
    question = first_question(data)
    query = {"study": opened.study.id}
    if question is None:
        layout.say("No column could be read as a question to count: look at the questions.")
        st.page_link("screens/questions.py", label="On to the questions", query_params=query)
        return
    request = default_request(question)
    try:
        figure = compute_figure(data, request)
    except FigureError as error:
        layout.problem(str(error))
        return
    text = describe(data, figure)
    standing = (
        "Provisional: counted as a simple draw from an endless universe until the sampling plan "
        "says more."
        if data.plan.provisional
        else "By the sampling plan of this study."
    )
    with st.container(border=True, key="first_figure"):
        row = single_row(data, figure)
        value = value_words(figure, text.words, data.study.decimal_mark)
        st.html(
            f'<p class="hr-soft hw-question">First figure: {as_html(question.text)}</p>'
            f'<p class="hr-number">{as_html(value)} '
            f"<small>{as_html(text.title)}</small></p>"
            f'<p class="hr-sentence">{as_html(text.sentence)}</p>{rail_html(row.rail)}'
            f'<p class="hr-soft hw-tight">{as_html(standing)}</p>'
        )
        needs = f" ({opened.needs_you} need you)" if opened.needs_you else ""
        with st.container(horizontal=True):
            st.page_link(
                "screens/figure.py",
                label="Open this figure",
                query_params={**query, **{k: v for k, v in to_address(request).items() if v}},
            )
            st.page_link(
                "screens/questions.py", label=f"On to the questions{needs}", query_params=query
            )
            st.page_link("screens/plan.py", label="Say how people got in", query_params=query)
