"""The list of questions: counts, filter, search, one row a question."""

from __future__ import annotations

from dataclasses import replace

import streamlit as st

from app.store import Database, StoredQuestion
from app.study.questions import FIGURE_KINDS, Question
from app.widgets import address, layout
from app.widgets.plain_text import as_html, as_typed, shortened

PAGE = 20
NEED, ALL, ASIDE = "need", "all", "aside"


def show_counts(questions: tuple[Question, ...]) -> None:
    """Show what needs a person, what is understood, what is set aside."""
    need = sum(q.needs_you for q in questions)
    aside = sum(q.set_aside for q in questions)
    understood = len(questions) - need - aside
    st.html(
        f'<p class="hr-counts"><span><b>{need}</b> need you</span>'
        f"<span><b>{understood}</b> understood</span><span><b>{aside}</b> set aside</span></p>"
    )


def show_accept_all(database: Database, study_id: str) -> None:
    """Offer to accept what is proposed for every question, where more than one is open."""
    open_ones = tuple(s for s in database.stored_questions(study_id) if s.question.needs_you)
    if len(open_ones) < 2:
        return
    st.button(
        f"Accept all proposals ({len(open_ones)})",
        key="accept_all",
        on_click=_accept_all,
        args=(database, study_id, open_ones),
    )


def _accept_all(database: Database, study_id: str, open_ones: tuple[StoredQuestion, ...]) -> None:
    settled = [replace(s, question=s.question.settled(accept=True)) for s in open_ones]
    if layout.attempt(database.save_questions, study_id, settled):
        layout.later(
            f"The proposals for {len(settled)} questions are accepted. "
            "Each card can read its question afresh."
        )


def show_filter(questions: tuple[Question, ...]) -> tuple[Question, ...]:
    """Show filter and search, and return the questions they leave."""
    default = NEED if any(q.needs_you for q in questions) else ALL
    names = {NEED: "need you", ALL: "all questions", ASIDE: "set aside"}
    left, right = st.columns([1, 1])
    with left:
        show = address.select("Show", "show", list(names), default, words=names.__getitem__)
    with right:
        st.session_state["address_find"] = address.read("find")
        find = st.text_input(
            "Search",
            key="address_find",
            on_change=_write_search,
            placeholder="a word of the question",
            max_chars=80,
        )
    chosen = tuple(q for q in questions if _passes(q, show))
    word = find.strip().casefold()
    return tuple(q for q in chosen if word in f"{q.key} {q.text}".casefold())


def _write_search() -> None:
    address.write(find=str(st.session_state["address_find"]).strip(), page="")


def _passes(question: Question, show: str) -> bool:
    if show == NEED:
        return question.needs_you
    return question.set_aside if show == ASIDE else True


def show_list(questions: tuple[Question, ...], chosen: str) -> None:
    """Show one page of questions; a row opens the question beside the list."""
    if not questions:
        st.html('<p class="hr-soft">No question here.</p>')
        return
    page = _page_of(questions, chosen)
    with st.container(key="question_list", gap=None):
        for question in questions[page * PAGE : (page + 1) * PAGE]:
            _show_row(question, chosen)
    _show_pages(page, -(-len(questions) // PAGE))


def show_way_to_all(questions: tuple[Question, ...], shown: tuple[Question, ...]) -> None:
    """Offer all questions in one click where only some are shown."""
    if len(shown) < len(questions):
        address.link("All questions", "all_questions", show=ALL, find="", page="")


def _page_of(questions: tuple[Question, ...], chosen: str) -> int:
    last = (len(questions) - 1) // PAGE
    named = address.read("page")
    if named.isascii() and named.isdigit() and len(named) <= 6:
        return min(int(named), last)
    place = next((i for i, q in enumerate(questions) if q.key == chosen), 0)
    return place // PAGE


def _show_row(question: Question, chosen: str) -> None:
    key = f"question_row_{question.columns[0]}"
    with st.container(key=key, horizontal=True, gap="small", vertical_alignment="center"):
        name = f"{as_typed(question.key)} \u2003 {as_typed(shortened(question.text, 70))}"
        mark = "? " if question.needs_you else ""
        st.button(
            f"{mark}**{name}**" if question.key == chosen else f"{mark}{name}",
            key=f"to_question_{question.columns[0]}",
            type="tertiary",
            on_click=address.write,
            kwargs={"q": question.key},
        )
        st.html(
            f'<p class="hr-soft hr-small hw-tight">{as_html(_about(question))}</p>', width="content"
        )


def _about(question: Question) -> str:
    parts = [question.kind.value]
    if len(question.columns) > 1:
        parts.append(f"{len(question.columns)} columns")
    if question.set_aside:
        parts.append("set aside")
    elif question.kind not in FIGURE_KINDS:
        parts.append("not for figures")
    return " \u00b7 ".join(parts)


def _show_pages(page: int, pages: int) -> None:
    if pages < 2:
        return
    with st.container(horizontal=True, vertical_alignment="center"):
        if page > 0:
            address.link("Earlier", "page_back", page=str(page - 1))
        st.html(f'<span class="hr-soft">page {page + 1} of {pages}</span>', width="content")
        if page + 1 < pages:
            address.link("More", "page_on", page=str(page + 1))
