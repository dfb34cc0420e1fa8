"""Readout: kept figures in order, their headlines, publish, the link, what was published."""

from dataclasses import replace

import streamlit as st

from app.store import StoreError
from app.study.publishing import obstacles_of
from app.widgets import layout
from app.widgets.cached_work import database
from app.widgets.publishing import show_new_link, show_publish, show_published
from app.widgets.readout_list import show_kept

MARKS = {".": "1,184.5 (decimal point)", ",": "1.184,5 (decimal comma)"}


def keep_mark() -> None:
    try:
        database().save_study(replace(opened.study, decimal_mark=st.session_state["mark"]))
    except StoreError as error:
        layout.later(error.sentence)


layout.dress()
opened = layout.open_study()
layout.journey("readouts", opened)
st.title("Readout", anchor=False)
layout.show_later_message()
layout.file_first(opened)
data = opened.data()
kept = database().kept_figures(opened.study.id)
readouts = database().readouts(opened.study.id)
show_new_link(readouts)
obstacles = obstacles_of(data, tuple(item.request for item in kept))
left, right = st.columns([8, 4], gap="large")
with left:
    if not kept:
        st.html(
            '<p class="hr-sentence">No figure is kept yet. Open a figure and choose '
            "\u201cKeep for the readout\u201d.</p>"
        )
        st.page_link(
            "screens/figure.py", label="To a figure", query_params={"study": opened.study.id}
        )
    show_kept(database(), data, kept)
with right:
    st.subheader("Publish")
    st.session_state["mark"] = opened.study.decimal_mark
    st.selectbox(
        "Numbers are written",
        list(MARKS),
        key="mark",
        format_func=MARKS.__getitem__,
        on_change=keep_mark,
    )
    if obstacles:
        layout.say("Publishing waits for this:")
        layout.show_obstacles(obstacles, opened)
    elif kept:
        show_publish(database(), data, kept)
    else:
        layout.say("Keep at least one figure first.")
if readouts:
    st.subheader("Published")
    show_published(database(), readouts)
