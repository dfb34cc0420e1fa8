"""Rails beside a figure: all its answers, or its groups; a row opens as a figure of its own."""

from __future__ import annotations

import streamlit as st

from app.charts.rail_svg import rail_html
from app.charts.verdict_glyphs import glyph_html
from app.study.figure_requests import FigureRequest, Statistic
from app.study.figure_rows import FigureRow, groupings
from app.study.figure_work import ANSWERS
from app.study.questions import Question
from app.study.study_data import StudyData
from app.study.width_check import Outcome
from app.widgets import address
from app.widgets.figure_address import to_address
from app.widgets.plain_text import as_html, as_typed, shortened


def split_in_address(data: StudyData, request: FigureRequest, question: Question) -> str:
    """Return what the rows beside a figure show, as the address wants it."""
    named, options = address.read("by"), _splits(data, request, question)
    return named if named in options else default_split(data, request, question)


def show_rails(
    data: StudyData, request: FigureRequest, question: Question, rows: tuple[FigureRow, ...]
) -> None:
    """Show what stands beside a figure and its rows."""
    _pick_rows(data, request, question)
    with st.container(key="rails", gap=None):
        for number, row in enumerate(rows):
            _show_row(row, number, same=_same(row.request, request))


def default_split(data: StudyData, request: FigureRequest, question: Question) -> str:
    """Return what the rows show at first: all answers of a share, else the draw's own groups."""
    if request.statistic is Statistic.SHARE and len(question.answers) > 1:
        return ANSWERS
    names = [q.key for q in groupings(data) if q.key != question.key]
    if data.plan.strata_column in names:
        return data.plan.strata_column
    return names[0] if names else ANSWERS


def _splits(data: StudyData, request: FigureRequest, question: Question) -> list[str]:
    options = [q.key for q in groupings(data) if q.key != question.key]
    by_answer = request.statistic is Statistic.SHARE and len(question.answers) > 1
    return [ANSWERS, *options] if by_answer else options


def _pick_rows(data: StudyData, request: FigureRequest, question: Question) -> None:
    options = _splits(data, request, question)
    if not options:
        return
    words = {q.key: shortened(q.text, 48) for q in groupings(data)}
    address.select(
        "Beside it",
        "by",
        options,
        default_split(data, request, question),
        words=lambda key: "all answers" if key == ANSWERS else f"by {words[key]}",
    )


def _same(row: FigureRequest, shown: FigureRequest) -> bool:
    return to_address(row) == to_address(shown)


def _show_row(row: FigureRow, number: int, *, same: bool) -> None:
    with st.container(key=f"rail_row_{number}", gap=None):
        label = as_typed(shortened(row.label, 44))
        st.button(
            f"**{label}**" if same else label,
            key=f"rail_{number}",
            type="tertiary",
            on_click=address.write,
            kwargs={**to_address(row.request), "by": address.read("by")},
        )
        st.html(_row_html(row))


def _row_html(row: FigureRow) -> str:
    if row.figure is None:
        return f'<div class="hw-row"><span class="hr-held">{as_html(row.reason)}</span></div>'
    held = row.figure.verdict.outcome is Outcome.HOLD_BACK
    value = f"[{row.value}]" if held else row.value
    return (
        f'<div class="hw-row{" hr-held" if held else ""}">'
        f'<span class="hw-value">{glyph_html(row.figure.verdict.outcome.value)} '
        f"{as_html(value)}</span>"
        f'<span class="hw-rail">{rail_html(row.rail)}</span>'
        f'<span class="hw-between">{as_html(row.between)} \u00b7 {as_html(row.answers)} answers'
        "</span></div>"
    )
