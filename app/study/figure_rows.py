"""A figure and those beside it: all answers of a question, or one answer in every group."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

from app.study.figure_requests import FigureRequest, Statistic
from app.study.figures import Figure, FigureError, ReadValues, compute_figure, reader
from app.study.number_format import FigureWords, column_scale, column_step, write_count
from app.study.pictures import Rail
from app.study.questions import Question, QuestionKind
from app.study.sentences import between_words, value_words, words_of
from app.study.study_data import StudyData
from app.study.width_check import Outcome

MOST_GROUPS = 24


@dataclass(frozen=True, slots=True, eq=False)
class FigureRow:
    """One row of a table of figures.

    Parameters
    ----------
    label : str
        The answer, the group, or "all".
    request : FigureRequest
        What the row shows; a row opens as a figure of its own.
    figure : Figure or None
        None where it cannot be given.
    words : FigureWords or None
        As printed, in the step of the column.
    value, between : str
        Cells of the table; "" where there is no figure.
    answers : str
        Answers behind it.
    rail : Rail
        The picture.
    reason : str
        Why there is no figure; "" where there is one.
    """

    label: str
    request: FigureRequest
    figure: Figure | None
    words: FigureWords | None
    value: str
    between: str
    answers: str
    rail: Rail
    reason: str


def answer_requests(question: Question, request: FigureRequest) -> tuple[FigureRequest, ...]:
    """Return one request per answer of a question, the base kept as asked for."""
    share = replace(request, question=question.key, statistic=Statistic.SHARE)
    return tuple(replace(share, answers=(answer.code,)) for answer in question.answers)


def group_requests(question: Question, request: FigureRequest) -> tuple[FigureRequest, ...]:
    """Return the figure of everyone, then of every group of a grouping."""
    everyone = replace(request, group_question="", group_answer="")
    groups = tuple(
        replace(request, group_question=question.key, group_answer=answer.code)
        for answer in question.answers[:MOST_GROUPS]
    )
    return (everyone, *groups)


def groupings(data: StudyData) -> tuple[Question, ...]:
    """Return the questions a figure can be split by."""
    kinds = (QuestionKind.CHOICE, QuestionKind.SEVERAL)
    return tuple(
        q
        for q in data.questions
        if q.usable and q.kind in kinds and 2 <= len(q.answers) <= MOST_GROUPS
    )


def figure_rows(
    data: StudyData, requests: tuple[FigureRequest, ...], *, by_answer: bool = False
) -> tuple[FigureRow, ...]:
    """Compute the rows of a table, all in the step of the column's median half-width.

    Parameters
    ----------
    data : StudyData
        The study.
    requests : tuple of FigureRequest
        One a row.
    by_answer : bool
        True labels the rows by answer, False by group.
    """
    read = reader(data)
    computed = [(request, *_try(data, request, read)) for request in requests]
    figures = [figure for _, figure, _ in computed if figure is not None]
    share = bool(figures) and figures[0].scale.share
    factor = 100.0 if share else 1.0
    widths = [f.estimate.half_width * factor for f in figures]
    values = [f.estimate.value * factor for f in figures]
    step = column_step(widths, share=share, values=values)
    column = _Column(step, column_scale(values, step), axis_of(figures), by_answer)
    return tuple(
        _row(data, request, figure, reason, column) for request, figure, reason in computed
    )


@dataclass(frozen=True, slots=True)
class _Column:
    """What the rows of one table share: step, scale of the numbers, ends of the rails, labels."""

    step: float
    scale: int | None
    ends: tuple[float, float]
    by_answer: bool


def _try(data: StudyData, request: FigureRequest, read: ReadValues) -> tuple[Figure | None, str]:
    try:
        return compute_figure(data, request, read=read), ""
    except FigureError as error:
        return None, str(error)


def axis_of(figures: list[Figure]) -> tuple[float, float]:
    """Return one axis for all rows: fixed ends where the scale has them."""
    if not figures:
        return 0.0, 1.0
    return min(f.scale.low for f in figures), max(f.scale.high for f in figures)


def _row(
    data: StudyData,
    request: FigureRequest,
    figure: Figure | None,
    reason: str,
    column: _Column,
) -> FigureRow:
    label, ends = _label(data, request, column.by_answer), column.ends
    mark = data.study.decimal_mark
    if figure is None:
        empty = Rail(*ends, math.nan, math.nan, math.nan, False, "held back", reason)
        return FigureRow(label, request, None, None, "", "", "0", empty, reason)
    words = words_of(figure, mark, step=column.step, scale=column.scale)
    value = value_words(figure, words, mark)
    return FigureRow(
        label,
        request,
        figure,
        words,
        value if value != words.full else words.value,
        between_words(figure, words),
        write_count(figure.counts.answered, mark),
        rail_of(figure, f"{label}: {value}, {between_words(figure, words)}", ends),
        "",
    )


def _label(data: StudyData, request: FigureRequest, by_answer: bool) -> str:
    if by_answer:
        question = data.question(request.question)
        return question.label_of(request.answers[0]) if question else request.answers[0]
    if not request.group_question:
        return "all"
    group = data.question(request.group_question)
    return group.label_of(request.group_answer) if group else request.group_answer


def rail_of(figure: Figure, text: str, ends: tuple[float, float]) -> Rail:
    """Return the rail of a figure between the two ends of the axis."""
    interval = figure.estimate.interval
    return Rail(
        *ends,
        figure.estimate.value,
        interval.low,
        interval.high,
        figure.scale.natural_zero and ends[0] == 0,
        "shown",
        text,
    )


def single_row(data: StudyData, figure: Figure) -> FigureRow:
    """Return a figure as the one row of its table, in its own step."""
    step = words_of(figure, data.study.decimal_mark).step
    column = _Column(step, None, (figure.scale.low, figure.scale.high), by_answer=False)
    return _row(data, figure.request, figure, "", column)


def has_fixed_ends(figure: Figure) -> bool:
    """Whether the axis of its rail tells nothing of the figure: a share, or a scale."""
    return figure.scale.share or figure.scale.scale_answers


def is_held_back(figure: Figure) -> bool:
    """Whether the width check holds the figure back."""
    return figure.verdict.outcome is Outcome.HOLD_BACK
