"""Keep a figure for the readout, or take it out again."""

from __future__ import annotations

from dataclasses import replace

import streamlit as st

from app.store import Database
from app.study.figure_requests import FigureRequest
from app.study.figure_rows import groupings
from app.study.figure_work import ANSWERS
from app.study.sentences import FigureText
from app.study.study import KeptFigure, Study
from app.study.study_data import StudyData
from app.widgets import address, layout
from app.widgets.figure_rails import default_split


def show_keep(
    database: Database, study: Study, data: StudyData, request: FigureRequest, text: FigureText
) -> None:
    """Show the button that keeps the figure, and the sentence to copy."""
    wanted = kept_request(data, request)
    kept = next((k for k in database.kept_figures(study.id) if k.request == wanted), None)
    if kept is None:
        st.button(
            "Keep for the readout",
            type="primary",
            key="keep",
            width="stretch",
            on_click=layout.guarded,
            args=(database.keep_figure, study.id, wanted),
        )
    else:
        _show_kept(database, study, kept)
    with st.popover("Copy the sentence", width="stretch"):
        st.code(text.sentence, language=None, wrap_lines=True)


def _show_kept(database: Database, study: Study, kept: KeptFigure) -> None:
    st.html(f'<p class="hw-kept">Kept as figure {kept.position + 1} of the readout.</p>')
    with st.container(horizontal=True, vertical_alignment="center"):
        st.page_link(
            "screens/readouts.py", label="To the readout", query_params={"study": study.id}
        )
        st.button(
            "Take it out",
            key="unkeep",
            type="tertiary",
            on_click=layout.guarded,
            args=(database.remove_kept, kept.id),
        )


def kept_request(data: StudyData, request: FigureRequest) -> FigureRequest:
    """Return the request with the grouping beside it, as it will stand in the readout."""
    question = data.question(request.question)
    if question is None or request.group_question:
        return replace(request, split_by="")
    chosen = address.read("by") or default_split(data, request, question)
    names = {q.key for q in groupings(data)}
    if chosen == ANSWERS:
        chosen = data.plan.strata_column if data.plan.strata_column != question.key else ""
    return replace(request, split_by=chosen if chosen in names else "")
