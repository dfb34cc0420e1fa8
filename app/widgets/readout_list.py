"""Kept figures in their order, with headline and comment."""

from __future__ import annotations

from dataclasses import replace

import streamlit as st

from app.charts.rail_svg import rail_html
from app.charts.verdict_glyphs import verdict_html
from app.sharing.frozen_readouts import headline_of
from app.store import Database, StoreError
from app.study.figure_rows import single_row
from app.study.figures import FigureError, compute_figure
from app.study.sentences import describe, value_words
from app.study.study import KeptFigure
from app.study.study_data import StudyData
from app.widgets import layout
from app.widgets.figure_address import to_address
from app.widgets.plain_text import as_html


def show_kept(database: Database, data: StudyData, kept: tuple[KeptFigure, ...]) -> None:
    """Show every kept figure as a card that can be worded, moved and taken out."""
    for item in kept:
        with st.container(border=True, key=f"kept_{item.id}"):
            _show_card(database, data, item, last=item.position == len(kept) - 1)


def _show_card(database: Database, data: StudyData, item: KeptFigure, *, last: bool) -> None:
    left, right = st.columns([7, 5], gap="large")
    with left:
        _show_wording(database, data, item)
    with right:
        _show_figure(data, item)
        with st.container(horizontal=True):
            _move(database, item, "Up", -1, disabled=item.position == 0)
            _move(database, item, "Down", 1, disabled=last)
            st.button(
                "Take it out",
                key=f"out_{item.id}",
                on_click=_guarded,
                args=(database.remove_kept, item.id),
            )
            query = {k: v for k, v in to_address(item.request).items() if v}
            st.page_link(
                "screens/figure.py", label="Open", query_params={"study": item.study_id, **query}
            )


def _show_figure(data: StudyData, item: KeptFigure) -> None:
    try:
        figure = compute_figure(data, item.request)
    except FigureError as error:
        layout.problem(str(error))
        return
    text = describe(data, figure)
    row = single_row(data, figure)
    value = value_words(figure, text.words, data.study.decimal_mark)
    st.html(
        f'<p class="hw-tight"><b>{as_html(value)}</b> '
        f"{as_html(text.title)}, {as_html(text.who)}</p>"
        f'<p class="hr-soft hw-tight">{as_html(row.between)} \u00b7 {as_html(text.base_line)}</p>'
        f"{rail_html(row.rail)}"
        f"<p>{verdict_html(figure.verdict.outcome.value)} "
        f'<span class="hr-soft">{as_html(figure.verdict.reason)}</span></p>'
    )


def _show_wording(database: Database, data: StudyData, item: KeptFigure) -> None:
    headline, comment = f"headline_{item.id}", f"comment_{item.id}"
    try:
        st.session_state[headline] = headline_of(data, item)
    except FigureError:
        st.session_state[headline] = item.headline
    st.session_state[comment] = item.comment
    st.text_input(
        f"{item.position + 1}. Headline",
        key=headline,
        max_chars=160,
        on_change=_keep_words,
        args=(database, item, headline, "headline"),
    )
    st.text_area(
        "Comment, plain text",
        key=comment,
        max_chars=2000,
        height=80,
        on_change=_keep_words,
        args=(database, item, comment, "comment"),
    )


def _keep_words(database: Database, item: KeptFigure, key: str, field: str) -> None:
    words = str(st.session_state[key])
    changed = (
        replace(item, headline=" ".join(words.split()))
        if field == "headline"
        else replace(item, comment=words.strip())
    )
    _guarded(database.save_kept, changed)


def _move(database: Database, item: KeptFigure, label: str, by: int, *, disabled: bool) -> None:
    st.button(
        label,
        key=f"{label}_{item.id}",
        disabled=disabled,
        on_click=_guarded,
        args=(database.move_kept, item.id, item.position + by),
    )


def _guarded(action: object, *arguments: object) -> None:
    """Do something in the store; what it refuses is said on the next run."""
    try:
        action(*arguments)  # type: ignore[operator]
    except StoreError as error:
        layout.later(error.sentence)
