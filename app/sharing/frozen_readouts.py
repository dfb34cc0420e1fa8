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
    axis_of,
    figure_rows,
    group_requests,
    has_fixed_ends,
    is_held_back,
    rail_of,
    single_row,
)
from app.study.figures import Figure, FigureError, compute_figure, reader
from app.study.frozen import FrozenFigure, FrozenReadout, FrozenRow
from app.study.number_format import NO_BREAK, write_count, write_plain
from app.study.pictures import Bar, Fan, Rail
from app.study.plan_checks import known_universe
from app.study.sentences import FigureText, describe
from app.study.study import KeptFigure
from app.study.study_data import StudyData
from app.study.width_check import Outcome
from estimators import METHODS_VERSION

SMALLEST_BAR = 5  # answers; common practice for tables that leave the house, no single source
_HIDDEN = "hidden"
_PROTECTED = "hidden to protect respondents"
_FEW = f"under {SMALLEST_BAR}"
_FEW_LINE = f"fewer than {SMALLEST_BAR} answered"


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
    read = reader(data)
    figures = [(item, compute_figure(data, item.request, read=read)) for item in kept]
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
    figure = compute_figure(data, item.request)
    return describe(data, figure, step=step_of(readout_rows(data, figure))).headline


def _study_base(data: StudyData) -> str:
    mark, size = data.study.decimal_mark, known_universe(data.plan)
    answered = write_count(len(data.answers), mark)
    if size is None:
        return f"{answered} {data.plan.unit_many} answered"
    return f"{answered} of {write_count(size, mark)}{NO_BREAK}{data.plan.unit_many} answered"


def _section(data: StudyData, item: KeptFigure, figure: Figure) -> FrozenFigure:
    held = _is_kept_from_clients(figure)
    rows = readout_rows(data, figure)
    step = step_of(rows)
    text = describe(data, figure, step=step)
    fan = None if held else guarded_fan(fan_of(data, figure, step=step), figure.counts.answered)
    ends = _shown_axis(rows)
    return FrozenFigure(
        headline=_safe_headline(item, figure, text),
        sentence=_held_sentence(figure) if held else text.sentence,
        comment=item.comment.strip(),
        question=figure.question.text,
        column_head=_column_head(figure, rows),
        axis_low_text=_axis_text(data, figure, low=True),
        axis_high_text=_axis_text(data, figure, low=False),
        rows=_without_the_next(rows, tuple(_frozen_row(row, ends) for row in rows)),
        fan=fan,
        base_line=text.base_line if figure.counts.answered >= SMALLEST_BAR else _FEW_LINE,
        cautions=tuple(caution.sentence for caution in figure.estimate.cautions),
    )


def _safe_headline(item: KeptFigure, figure: Figure, text: FigureText) -> str:
    """Return the headline; that of a figure held back carries none of its numbers."""
    typed = item.headline.strip()
    if not _is_kept_from_clients(figure):
        return typed or text.headline
    return typed if typed and not _tells(typed, text) else figure.question.text


def _tells(headline: str, text: FigureText) -> bool:
    """Whether a headline is the one proposed, or says value or interval as printed."""
    words = {w for part in headline.split() for w in (part.strip("%.,:;()\u00b1"), part)}
    printed = {text.words.value, text.words.low, text.words.high}
    numbers = {number for words_ in printed for number in words_.split() if number[-1:].isdigit()}
    amounts = ("half", "quarter", "quarters", "none", "all of")
    told = headline.casefold()
    return bool(words & numbers) or any(amount in told for amount in amounts)


def _held_sentence(figure: Figure) -> str:
    if figure.counts.answered < SMALLEST_BAR:
        return "This figure is hidden to protect respondents."
    return f"This figure is held back: {figure.verdict.short}."


def readout_rows(data: StudyData, figure: Figure) -> tuple[FigureRow, ...]:
    """Return the rows a figure has in a readout: everyone first, then its groups."""
    split = data.question(figure.request.split_by) if figure.request.split_by else None
    if split is None or not split.usable or figure.group is not None:
        return (single_row(data, figure),)
    return figure_rows(data, group_requests(split, figure.request))


def step_of(rows: tuple[FigureRow, ...]) -> float | None:
    """Return the step of the column: headline, sentence and fan are rounded like the table."""
    return rows[0].words.step if rows[0].words is not None else None


def _shown_axis(rows: tuple[FigureRow, ...]) -> tuple[float, float]:
    """Return the axis of the rails; what is held back does not show in its length either."""
    shown = [r.figure for r in rows if r.figure and not _is_kept_from_clients(r.figure)]
    fixed = [r.figure for r in rows if r.figure is not None and has_fixed_ends(r.figure)]
    return axis_of(shown or fixed)


def _column_head(figure: Figure, rows: tuple[FigureRow, ...]) -> str:
    if figure.scale.share:
        return "%"
    shown = [row for row in rows if row.figure and not _is_kept_from_clients(row.figure)]
    units = {row.words.unit for row in shown if row.words is not None}
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


def _frozen_row(row: FigureRow, ends: tuple[float, float]) -> FrozenRow:
    if row.figure is None or _is_kept_from_clients(row.figure):
        return _row_held_back(row, ends)
    verdict, note = row.figure.verdict, ""
    if verdict.outcome is Outcome.NOTE:
        note = f"read with care: {verdict.reason}"
    rail = rail_of(row.figure, row.rail.text, ends)
    return FrozenRow(
        row.label, row.value, row.between, row.answers, note, verdict.outcome.value, rail
    )


def _without_the_next(
    rows: tuple[FigureRow, ...], frozen: tuple[FrozenRow, ...]
) -> tuple[FrozenRow, ...]:
    """Hide the smallest group shown where one hidden alone could be told by subtraction."""
    closed = [i for i in range(1, len(rows)) if not frozen[i].value]
    shown = [i for i in range(1, len(rows)) if frozen[i].value]
    if len(closed) != 1 or frozen[closed[0]].verdict != _HIDDEN or not shown:
        return frozen
    figures = [row.figure for row in rows]
    sizes = {i: figure.counts.answered for i in shown if (figure := figures[i]) is not None}
    next_ = min(sizes, key=sizes.__getitem__)
    row = frozen[next_]
    rail = Rail(row.rail.axis_low, row.rail.axis_high, 0.0, 0.0, 0.0, False, _HIDDEN, _PROTECTED)
    hidden = FrozenRow(row.who, "", "", row.answers, _PROTECTED, _HIDDEN, rail)
    return tuple(hidden if i == next_ else kept for i, kept in enumerate(frozen))


def _row_held_back(row: FigureRow, ends: tuple[float, float]) -> FrozenRow:
    """Return a row without its figure; a handful of answers is not counted out."""
    answered = row.figure.counts.answered if row.figure is not None else 0
    answers = row.answers if answered >= SMALLEST_BAR else _FEW
    verdict, state = Outcome.HOLD_BACK.value, "held back"
    if row.figure is None:
        words = f"{state}: too few to show"
    elif answered < SMALLEST_BAR:
        words, verdict, state = _PROTECTED, _HIDDEN, _HIDDEN
    else:
        words = f"{state}: {row.figure.verdict.short}"
    empty = Rail(*ends, 0.0, 0.0, 0.0, False, state, words)
    return FrozenRow(row.label, "", "", answers, words, verdict, empty)


def _is_kept_from_clients(figure: Figure) -> bool:
    """Whether a figure is too wide for the house, or about too few people to be shown at all."""
    return is_held_back(figure) or figure.counts.answered < SMALLEST_BAR


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
    shown = [s for s in sections if s.rows and s.rows[0].value]
    return tuple(_short_sentence(section) for section in shown[:3])


def _short_sentence(section: FrozenFigure) -> str:
    """Return the headline with the interval behind it, where there is one."""
    headline, row = section.headline.rstrip(" ."), section.rows[0]
    number = row.between.split(NO_BREAK)[0]
    between = f" ({row.between})" if number != row.value.split(NO_BREAK)[0] else ""
    end = "" if headline.endswith(("?", "!")) and not between else "."
    return f"{headline}{between}{end}"


def _held_back(sections: tuple[FrozenFigure, ...]) -> tuple[str, ...]:
    return tuple(
        f"{row.who}: {row.note.removeprefix('held back: ')} ({section.headline.rstrip(' .')})."
        for section in sections
        for row in section.rows
        if not row.value
    )


__all__ = [
    "Draft",
    "FigureError",
    "freeze",
    "guarded_fan",
    "headline_of",
    "moment_words",
    "readout_rows",
    "step_of",
]
