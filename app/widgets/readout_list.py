"""Kept figures in their order, with headline and comment."""

from __future__ import annotations

from dataclasses import replace

import streamlit as st

from app.charts.rail_svg import rail_html
from app.charts.verdict_glyphs import verdict_html
from app.sharing.frozen_readouts import headline_of, readout_rows, step_of
from app.store import Database, StoreError, UnknownFigureError
from app.study.figures import FigureError, compute_figure
from app.study.sentences import describe, value_words
from app.study.study import KeptFigure
from app.study.study_data import StudyData
from app.widgets import layout
from app.widgets.figure_address import to_address
from app.widgets.plain_text import as_html
from app.widgets.refusals import fill, forget, refuse, show_refusal


class WordsKeeper:
    """Keeps headline and comment of one kept figure.

    Parameters
    ----------
    database : Database
        The store.
    item : KeptFigure
        As this run of the screen shows it.
    """

    def __init__(self, database: Database, item: KeptFigure) -> None:
        self._database = database
        self._item = item

    def take(self, key: str, field: str) -> None:
        """Keep what was typed; what cannot be kept stays in its field."""
        typed = str(st.session_state[key])
        try:
            if field == "headline":
                changed = replace(self._item, headline=" ".join(typed.split()))
            else:
                changed = replace(self._item, comment=typed.strip())
            self._item = self._database.save_kept(changed)
        except UnknownFigureError:
            layout.later(
                f"This figure was taken out in another window. You had typed: \u201c{typed}\u201d"
            )
        except StoreError as error:
            refuse(key, typed, error.sentence, stale=True)
        else:
            forget(key)


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
        with st.container(horizontal=True, vertical_alignment="center"):
            _move(database, item, "Up", -1, disabled=item.position == 0)
            _move(database, item, "Down", 1, disabled=last)
            st.button(
                "Take it out",
                key=f"out_{item.id}",
                on_click=layout.guarded,
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
    rows = readout_rows(data, figure)
    text, row = describe(data, figure, step=step_of(rows)), rows[0]
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
    keeper = WordsKeeper(database, item)
    try:
        fill(headline, headline_of(data, item))
    except FigureError:
        fill(headline, item.headline)
    fill(comment, item.comment)
    st.text_input(
        f"{item.position + 1}. Headline",
        key=headline,
        max_chars=160,
        on_change=keeper.take,
        args=(headline, "headline"),
    )
    show_refusal(headline, keeper.take, (headline, "headline"))
    st.text_area(
        "Comment, plain text",
        key=comment,
        max_chars=2000,
        height=80,
        on_change=keeper.take,
        args=(comment, "comment"),
    )
    show_refusal(comment, keeper.take, (comment, "comment"))


def _move(database: Database, item: KeptFigure, label: str, by: int, *, disabled: bool) -> None:
    st.button(
        label,
        key=f"{label}_{item.id}",
        disabled=disabled,
        on_click=layout.guarded,
        args=(database.move_kept, item.id, item.position + by),
    )
