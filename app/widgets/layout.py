"""What every screen carries: the style, the way through the journey, messages."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import NoReturn

import streamlit as st

from app.store import StoredPlan, StoredQuestion, StoreError, UnknownStudyError
from app.study.figure_requests import FigureRequest
from app.study.publishing import Obstacle, obstacles_of
from app.study.questions import Question
from app.study.study import Study, StudyFile
from app.study.study_data import StudyData
from app.widgets import address
from app.widgets.cached_work import database, stored_questions, study_data
from app.widgets.plain_text import as_html, as_typed, shortened
from app.widgets.screen_style import SCREEN_STYLE
from app.widgets.workspace_style import workspace_style

SCREENS = "screens"


@dataclass(frozen=True, slots=True)
class OpenStudy:
    """The study in the address.

    Parameters
    ----------
    study : Study
        The study.
    file : StudyFile or None
        The file figures are made from; None before one arrived.
    asked : tuple of StoredQuestion
        Its questions.
    plan : StoredPlan
        How people got in.
    """

    study: Study
    file: StudyFile | None
    asked: tuple[StoredQuestion, ...]
    plan: StoredPlan

    @property
    def questions(self) -> tuple[Question, ...]:
        """The questions without their versions."""
        return tuple(stored.question for stored in self.asked)

    @property
    def needs_you(self) -> int:
        """How many questions a person has to settle."""
        return sum(q.needs_you for q in self.questions)

    def data(self) -> StudyData:
        """Return the study ready to compute with; only for studies with a file."""
        if self.file is None:
            raise ValueError("a study without a file has nothing to compute with")
        return study_data(self.study, self.file, self.asked, self.plan)


def dress() -> None:
    """Put the style on the page; first thing on every screen."""
    st.html(f"<style>{workspace_style()}{SCREEN_STYLE}</style>")


def open_study() -> OpenStudy:
    """Return the study in the address, or say that there is none and stop the screen."""
    study_id = address.read("study")
    try:
        study = database().study(study_id)
    except UnknownStudyError:
        _no_study(study_id)
    store = database()
    return OpenStudy(
        study,
        store.current_file(study_id),
        stored_questions(study_id),
        store.plan(study_id),
    )


def _no_study(study_id: str) -> NoReturn:
    st.session_state.pop("message", None)  # what could not be kept is gone with the study
    if study_id:
        problem("This study is not here any more: it was deleted, or the address is mistyped.")
    else:
        problem("This screen needs a study: choose one.")
    st.page_link(f"{SCREENS}/studies.py", label="All studies")
    st.stop()


def journey(current: str, opened: OpenStudy) -> None:
    """Show the way through the study, in the order of the work, with a mark for "needs you"."""
    query = {"study": opened.study.id}
    kept = len(database().kept_figures(opened.study.id))
    needs = f" \u00b7 {opened.needs_you} need you" if opened.needs_you else ""
    steps = (
        ("file", "Fieldwork file", ""),
        ("questions", "Questions", needs),
        ("plan", "Sampling plan", " \u00b7 provisional" if opened.plan.plan.provisional else ""),
        ("figure", "Figure", ""),
        ("readouts", "Readout", f" \u00b7 {kept} kept" if kept else ""),
    )
    with st.container(horizontal=True, key="journey", gap="small", vertical_alignment="center"):
        st.page_link(f"{SCREENS}/studies.py", label="Studies")
        name_shown = as_html(shortened(opened.study.name, 32))
        st.html(f'<span class="hw-study">{name_shown}</span>', width="content")
        for name, label, mark in steps:
            text = f"**{label}**{mark}" if name == current else f"{label}{mark}"
            st.page_link(f"{SCREENS}/{name}.py", label=text, query_params=query)


def file_first(opened: OpenStudy) -> StudyFile:
    """Return the study's file, or say that it has none yet and stop the screen."""
    if opened.file is not None:
        return opened.file
    st.html('<p class="hr-sentence">This study has no fieldwork file yet.</p>')
    st.page_link(
        f"{SCREENS}/file.py", label="Drop a fieldwork file", query_params={"study": opened.study.id}
    )
    return st.stop()


def problem(sentence: str) -> None:
    """Say in one sentence what is wrong."""
    st.html(f'<p class="hr-problem" role="alert"><b>Please look:</b> {as_html(sentence)}</p>')


def store_problem(error: Exception) -> None:
    """Say what the store said, with a way to see what is stored now."""
    problem(str(error))
    st.button("Show what is stored now", key="show_stored")


def attempt(action: Callable[..., object], *arguments: object) -> bool:
    """Do something in the store, for callbacks; what it refuses is said on the next run.

    Returns
    -------
    bool
        Whether it was done.
    """
    try:
        action(*arguments)
    except StoreError as error:
        later(error.sentence)
        return False
    return True


def guarded(action: Callable[..., object], *arguments: object) -> None:
    """Do something in the store as the whole of a callback."""
    attempt(action, *arguments)


def say(text: str, kind: str = "hr-soft") -> None:
    """Show a line of second text."""
    st.html(f'<p class="{kind}">{as_html(text)}</p>')


def later(message: str) -> None:
    """Keep a message for the next run; a callback cannot draw."""
    st.session_state["message"] = message


def show_later_message() -> None:
    """Show the message a callback left, once."""
    message = st.session_state.pop("message", "")
    if message:
        st.info(as_typed(message))


def show_standing(data: StudyData, request: FigureRequest, opened: OpenStudy) -> None:
    """Say what stands in the way of publishing a figure, with links to what mends it."""
    show_obstacles(obstacles_of(data, (request,)), opened)


def show_obstacles(obstacles: tuple[Obstacle, ...], opened: OpenStudy) -> None:
    """Show every obstacle with a link to the screen that mends it."""
    for obstacle in obstacles:
        with st.container(horizontal=True, vertical_alignment="center", gap="small"):
            st.html(
                f'<p class="hw-standing"><b>Not yet for clients:</b> {as_html(obstacle.sentence)}'
                "</p>",
                width="content",
            )
            query = {"study": opened.study.id}
            if obstacle.question:
                query["q"] = obstacle.question
            label = "Sampling plan" if obstacle.screen == "plan" else "Questions"
            st.page_link(f"{SCREENS}/{obstacle.screen}.py", label=label, query_params=query)
