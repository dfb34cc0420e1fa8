"""All that stands on the figure screen, computed in one go so that it can be kept."""

from __future__ import annotations

from dataclasses import dataclass

from app.study.fans import fan_of
from app.study.figure_requests import FigureRequest
from app.study.figure_rows import FigureRow, answer_requests, figure_rows, group_requests
from app.study.figures import Figure, FigureError, compute_figure
from app.study.pictures import Fan
from app.study.sentences import FigureText, describe
from app.study.study_data import StudyData

ANSWERS = "answers"  # in place of a grouping: all answers of the question


@dataclass(frozen=True, slots=True, eq=False)
class ShownFigure:
    """A figure with its words and its picture.

    Parameters
    ----------
    figure : Figure
        The figure.
    text : FigureText
        In words, rounded to the step of the rows where it stands among them.
    fan : Fan
        As a picture, rounded likewise.
    step : float or None
        That step; None where the figure has its own.
    """

    figure: Figure
    text: FigureText
    fan: Fan
    step: float | None


@dataclass(frozen=True, slots=True, eq=False)
class FigureWork:
    """A figure and the rows beside it.

    Parameters
    ----------
    rows : tuple of FigureRow
        All answers of the question, or its groups; empty for none.
    shown : ShownFigure or None
        None where the figure cannot be given.
    reason : str
        Why not; "" where it can.
    """

    rows: tuple[FigureRow, ...]
    shown: ShownFigure | None
    reason: str


def work_out(data: StudyData, request: FigureRequest, split: str) -> FigureWork:
    """Compute a figure and the rows beside it.

    Parameters
    ----------
    data : StudyData
        The study.
    request : FigureRequest
        The figure.
    split : str
        ``ANSWERS``, the key of a grouping, or "" for no rows.
    """
    rows = _rows(data, request, split)
    step = step_among(rows, request)
    try:
        figure = compute_figure(data, request)
    except FigureError as error:
        return FigureWork(rows, None, str(error))
    text = describe(data, figure, step=step)
    return FigureWork(rows, ShownFigure(figure, text, fan_of(data, figure, step=step), step), "")


def _rows(data: StudyData, request: FigureRequest, split: str) -> tuple[FigureRow, ...]:
    question, grouping = data.question(request.question), data.question(split)
    if question is None or not question.usable:
        return ()
    if split == ANSWERS:
        return figure_rows(data, answer_requests(question, request), by_answer=True)
    return figure_rows(data, group_requests(grouping, request)) if grouping else ()


def step_among(rows: tuple[FigureRow, ...], request: FigureRequest) -> float | None:
    """Return the step of the rows where the figure stands among them, so that both are alike."""
    row = next((row for row in rows if row.request == request), None)
    return row.words.step if row is not None and row.words is not None else None
