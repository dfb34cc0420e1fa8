"""The studies as cards: open one, rename, copy or delete it."""

from __future__ import annotations

from dataclasses import replace

import streamlit as st

from app.store import Database, StoreError, StudySummary
from app.study.number_format import write_count
from app.study.study import Study
from app.widgets import layout
from app.widgets.plain_text import as_typed
from app.widgets.refusals import fill, forget, is_refused, refuse, show_refusal

_ASKED = "asked_of_study"  # what was asked for, and of which study: ["delete", id]


def show_study(database: Database, summary: StudySummary) -> None:
    """Show one study with what can be done with it."""
    study = summary.study
    asked = st.session_state.get(_ASKED, ["", ""])
    wish = asked[0] if asked[1] == study.id else ""
    with st.container(border=True, key=f"study_{study.id}"):
        left, right = st.columns([3, 2], vertical_alignment="center")
        with left:
            _show_name(summary)
            if wish == "rename":
                _show_rename(database, study)
        with right, st.container(horizontal=True, horizontal_alignment="right"):
            if wish == "delete":
                _show_delete(database, study)
            else:
                _show_ways(database, study)


def _show_name(summary: StudySummary) -> None:
    study, links = summary.study, summary.live_links
    screen = "figure" if summary.files else "file"
    st.page_link(
        f"screens/{screen}.py",
        label=f"**{as_typed(study.name)}**",
        query_params={"study": study.id},
    )
    words = "no fieldwork file yet"
    if summary.files:
        words = f"{write_count(summary.rows, study.decimal_mark)} answers in {summary.file_name}"
    open_links = "1 open link" if links == 1 else f"{links} open links"
    changed = f"changed {study.changed_at:%d %B %Y, %H:%M} UTC"
    layout.say(f"{words} \u00b7 {summary.kept} kept, {open_links} \u00b7 {changed}")


def _show_ways(database: Database, study: Study) -> None:
    for label, wish in (("Rename", "rename"), ("Delete", "delete")):
        if wish == "delete":
            st.button("Duplicate", key=f"copy_{study.id}", on_click=_copy, args=(database, study))
        st.button(label, key=f"{wish}_{study.id}", on_click=_ask, args=(wish, study.id))


def _ask(wish: str = "", study_id: str = "") -> None:
    st.session_state[_ASKED] = [wish, study_id]


def _show_delete(database: Database, study: Study) -> None:
    layout.say("Delete it with its file, figures and links?", "hr-problem")
    st.button("Yes, delete", key=f"really_{study.id}", on_click=_delete, args=(database, study))
    st.button("No, keep it", key=f"not_{study.id}", on_click=_ask)


def _delete(database: Database, study: Study) -> None:
    _ask()
    try:
        gone = database.delete_study(study.id)
    except StoreError as error:
        layout.later(error.sentence)
        return
    links = {0: "It had no open links.", 1: "One link was withdrawn."}
    told = links.get(gone.links_withdrawn, f"{gone.links_withdrawn} links were withdrawn.")
    layout.later(f"{study.name} is deleted. {told}")


def _copy(database: Database, study: Study) -> None:
    name = f"{study.name} (copy)"
    if layout.attempt(database.duplicate_study, study.id, name):
        layout.later(f"{name} is there, without the readouts and links of the original.")


def _show_rename(database: Database, study: Study) -> None:
    key = f"name_{study.id}"
    fill(key, study.name)
    keep = (database, study, key)
    st.text_input("Name of the study", key=key, max_chars=120, on_change=_rename, args=keep)
    show_refusal(key, _rename, keep)
    st.button("Done", key=f"done_{study.id}", on_click=_end_rename, args=(key, is_refused(key)))


def _rename(database: Database, study: Study, key: str) -> None:
    typed = str(st.session_state[key])
    try:
        name = " ".join(typed.split())
        if not name:
            raise ValueError("The study has no name: type one your colleagues will recognise.")
        if name != study.name:
            database.save_study(replace(study, name=name))
    except ValueError as error:
        refuse(key, typed, str(error))
    except StoreError as error:
        refuse(key, typed, error.sentence, stale=True)
    else:
        forget(key)


def _end_rename(key: str, was_refused: bool) -> None:
    """Close the field, unless what was typed just before could not be kept."""
    if is_refused(key) and not was_refused:
        return
    forget(key)
    _ask()
