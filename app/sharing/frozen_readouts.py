"""Freezing: from kept figures to the plain values a client's page is written from.

Aggregates only. What the width check holds back leaves no number behind, and no bar of an answers
picture stands for fewer than a handful of people.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from datetime import datetime

from app.sharing.method_notes import method_note
from app.study.fans import fan_of
from app.study.figure_requests import Statistic
from app.study.figure_rows import (
    FigureRow,
    figure_rows,
    group_requests,
    is_held_back,
    single_row,
)
from app.study.figures import Figure, FigureError, compute_figure
from app.study.frozen import FrozenFigure, FrozenReadout, FrozenRow
from app.study.number_format import NO_BREAK, write_count, write_plain
from app.study.pictures import Bar, Fan, Rail
from app.study.plan_checks import known_universe
from app.study.sentences import describe
from app.study.study import KeptFigure
from app.study.study_data import StudyData
from app.study.width_check import Outcome
from estimators import METHODS_VERSION

SMALLEST_BAR = 5  # answers; common practice for tables that leave the house, no single source


@dataclass(frozen=True, slots=True)
class Draft:
    """What is being published.

    Parameters
    ----------
    title : str
        Title of the readout.
    number : int
        1, 2, 3 ... within the study.
    frozen_at : datetime
        UTC.
    """

    title: str
    number: int
    frozen_at: datetime


def freeze(data: StudyData, kept: tuple[KeptFigure, ...], draft: Draft) -> FrozenReadout:
    """Return the readout as plain values.

    Parameters
    ----------
    data : StudyData
        The study.
    kept : tuple of KeptFigure
        In the order of the readout.
    draft : Draft
        Title, number and moment.

    Raises
    ------
    FigureError
        When a kept figure cannot be given any more.
    """
    figures = [(item, compute_figure(data, item.request)) for item in kept]
    sections = tuple(_section(data, item, figure) for item, figure in figures)
    return FrozenReadout(
        study=data.study.name,
        title=draft.title,
        number=draft.number,
        frozen_at=moment_words(draft.frozen_at),
        base_line=_study_base(data),
        in_short=_in_short(sections),
        figures=sections,
        held_back=_held_back(sections),
        method_note=method_note(data, [figure for _, figure in figures]),
        methods_version=METHODS_VERSION,
    )


def moment_words(moment: datetime) -> str:
    """Return a moment as printed: "12 March 2026, 9:52 UTC"."""
    return f"{moment.day} {moment:%B %Y}, {moment.hour}:{moment:%M} UTC"


def headline_of(data: StudyData, item: KeptFigure) -> str:
    """Return the manager's headline, or the one proposed from the sentence."""
    if item.headline.strip():
        return item.headline.strip()
    return describe(data, compute_figure(data, item.request)).headline


def _study_base(data: StudyData) -> str:
    mark, size = data.study.decimal_mark, known_universe(data.plan)
    answered = write_count(len(data.answers), mark)
    if size is None:
        return f"{answered} {data.plan.unit_many} answered"
    return f"{answered} of {write_count(size, mark)}{NO_BREAK}{data.plan.unit_many} answered"


def _section(data: StudyData, item: KeptFigure, figure: Figure) -> FrozenFigure:
    text = describe(data, figure)
    held = is_held_back(figure)
    rows = _rows(data, figure)
    return FrozenFigure(
        headline=_safe_headline(data, item, figure),
        sentence=_held_sentence(figure) if held else text.sentence,
        comment=item.comment.strip(),
        question=figure.question.text,
        column_head=_column_head(figure, rows),
        axis_low_text=_axis_text(data, figure, low=True),
        axis_high_text=_axis_text(data, figure, low=False),
        rows=tuple(_frozen_row(row) for row in rows),
        fan=None if held else guarded_fan(fan_of(data, figure), figure.counts.answered),
        base_line=text.base_line,
        cautions=tuple(caution.sentence for caution in figure.estimate.cautions),
    )


def _safe_headline(data: StudyData, item: KeptFigure, figure: Figure) -> str:
    """Return the headline; a proposed one for a figure held back carries no number."""
    if item.headline.strip() or not is_held_back(figure):
        return headline_of(data, item)
    return figure.question.text


def _held_sentence(figure: Figure) -> str:
    return f"This figure is held back: {figure.verdict.short}."


def _rows(data: StudyData, figure: Figure) -> tuple[FigureRow, ...]:
    split = data.question(figure.request.split_by) if figure.request.split_by else None
    if split is None or not split.usable or figure.group is not None:
        return (single_row(data, figure),)
    return figure_rows(data, group_requests(split, figure.request))


def _column_head(figure: Figure, rows: tuple[FigureRow, ...]) -> str:
    if figure.scale.share:
        return "%"
    units = {row.words.unit for row in rows if row.words is not None}
    unit = units.pop() if len(units) == 1 else ""  # mixed ones stand in the cells
    noun = {Statistic.TOTAL: "total", Statistic.MEDIAN: "median"}.get(
        figure.request.statistic, "average"
    )
    return f"{noun}, {unit}" if unit else noun


def _axis_text(data: StudyData, figure: Figure, *, low: bool) -> str:
    mark = data.study.decimal_mark
    if figure.scale.share:
        return "0" if low else f"100{NO_BREAK}%"
    if figure.scale.scale_answers:
        return write_plain(figure.scale.low if low else figure.scale.high, mark)
    return "0" if low and figure.scale.natural_zero else ""


def _frozen_row(row: FigureRow) -> FrozenRow:
    if row.figure is None or is_held_back(row.figure):
        short = row.figure.verdict.short if row.figure is not None else "too few to show"
        words = f"held back: {short}"
        empty = Rail(
            row.rail.axis_low, row.rail.axis_high, 0.0, 0.0, 0.0, False, "held back", words
        )
        return FrozenRow(row.label, "", "", row.answers, words, Outcome.HOLD_BACK.value, empty)
    note = ""
    if row.figure.verdict.outcome is Outcome.NOTE:
        note = f"read with care: {row.figure.verdict.reason}"
    return FrozenRow(
        row.label,
        row.value,
        row.between,
        row.answers,
        note,
        row.figure.verdict.outcome.value,
        row.rail,
    )


def guarded_fan(fan: Fan, answered: int) -> Fan:
    """Return the fan with every bar of fewer than SMALLEST_BAR answers taken out.

    One small bar alone could be told from the others by subtraction, so the next smallest goes too.
    """
    counts = [round(bar.part * answered) for bar in fan.bars]
    hidden = {i for i, count in enumerate(counts) if 0 < count < SMALLEST_BAR}
    others = [i for i, count in enumerate(counts) if count >= SMALLEST_BAR]
    if len(hidden) == 1 and others:
        hidden.add(min(others, key=lambda i: counts[i]))
    if not hidden:
        return fan
    bars = tuple(_hidden_bar(bar) if i in hidden else bar for i, bar in enumerate(fan.bars))
    note = "Bars marked \u201cfew\u201d are left out to protect respondents."
    return replace(fan, bars=bars, notes=(*fan.notes, note))


def _hidden_bar(bar: Bar) -> Bar:
    return replace(bar, part=0.0, text="few")


def _in_short(sections: tuple[FrozenFigure, ...]) -> tuple[str, ...]:
    shown = [s for s in sections if s.rows and s.rows[0].verdict != Outcome.HOLD_BACK.value]
    return tuple(
        f"{s.headline.rstrip('.')}: between {s.rows[0].between.replace(' to ', ' and ')}."
        if " to " in s.rows[0].between
        else f"{s.headline.rstrip('.')}."
        for s in shown[:3]
    )


def _held_back(sections: tuple[FrozenFigure, ...]) -> tuple[str, ...]:
    return tuple(
        f"{section.headline.rstrip('.')}, {row.who}: {row.note}."
        for section in sections
        for row in section.rows
        if row.verdict == Outcome.HOLD_BACK.value
    )


__all__ = ["Draft", "FigureError", "freeze", "guarded_fan", "headline_of", "moment_words"]
