"""The files of a study: what was delivered when, and which one figures are made from."""

from __future__ import annotations

import streamlit as st

from app.intake import FieldworkFileError
from app.store import Database, StoreError
from app.study.number_format import write_count
from app.study.study import StudyFile
from app.widgets import layout
from app.widgets.deliveries import use_again
from app.widgets.plain_text import as_html


def show_files(database: Database, files: tuple[StudyFile, ...], mark: str) -> None:
    """Show every delivery, the latest first, with a way back to an earlier one.

    Parameters
    ----------
    database : Database
        The store.
    files : tuple of StudyFile
        The deliveries.
    mark : str
        Decimal mark of the study.
    """
    for file in files:
        with st.container(horizontal=True, vertical_alignment="center", key=f"delivery_{file.id}"):
            size = f"{write_count(file.rows, mark)} answers, {write_count(file.columns, mark)}"
            in_use = " \u00b7 in use" if file.current else ""
            st.html(
                f'<p class="hw-tight"><b>{as_html(file.file_name)}</b> '
                f'<span class="hr-soft">received {file.received_at:%d %B %Y, %H:%M} UTC '
                f"\u00b7 {size} columns{in_use}</span></p>"
            )
            if not file.current:
                st.button(
                    "Use this one again",
                    key=f"use_{file.id}",
                    on_click=_use,
                    args=(database, file),
                )


def _use(database: Database, file: StudyFile) -> None:
    try:
        delivery = use_again(database, file)
    except (FieldworkFileError, StoreError) as error:
        layout.later(str(error))
        return
    told = f"Figures are made from {file.file_name} again."
    layout.later(" ".join((told, *delivery.changes)))
