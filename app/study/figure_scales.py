"""On what scale a figure stands: the ends of its rail, and whether zero means none."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from app.study.column_profiles import leading_numbers
from app.study.figure_requests import FigureRequest, Statistic
from app.study.questions import Question, QuestionKind
from app.study.width_check import FigureScale
from estimators import Estimate

FloatArray = npt.NDArray[np.float64]
_ROOM = 1.25  # a rail reaches this far beyond what stands on it


def scale_of(
    question: Question, request: FigureRequest, numbers: FloatArray, estimate: Estimate
) -> FigureScale:
    """Return the scale a figure stands on.

    Parameters
    ----------
    question : Question
        The question it is about.
    request : FigureRequest
        What was asked for.
    numbers : ndarray
        (k,) float, the answers behind it.
    estimate : Estimate
        The figure.
    """
    if request.statistic is Statistic.SHARE:
        return FigureScale(True, 0.0, 1.0, natural_zero=True, scale_answers=False)
    if question.kind is QuestionKind.SCALE:
        low, high = scale_ends(question, numbers)
        return FigureScale(False, low, high, natural_zero=False, scale_answers=True)
    low, high = _rail_ends(estimate)
    positive = bool((numbers >= 0).all())
    return FigureScale(False, 0.0 if positive else low, high, positive, scale_answers=False)


def _rail_ends(estimate: Estimate) -> tuple[float, float]:
    """Return an axis with zero, the figure and its interval on it, and some room beyond them."""
    interval = estimate.interval
    places = [x for x in (interval.low, estimate.value, interval.high) if np.isfinite(x)]
    if np.isinf(interval.half_width):
        places.append(2 * estimate.value)
    low, high = min(0.0, *places) * _ROOM, max(0.0, *places) * _ROOM
    return (low, high) if high > low else (0.0, 1.0)


def scale_ends(question: Question, numbers: FloatArray) -> tuple[float, float]:
    """Return the lowest and highest point of a scale, told by the answers it offers.

    Parameters
    ----------
    question : Question
        Codes may carry words: "10 - very good".
    numbers : ndarray
        (k,) the answers given; the ends where no code holds a number.
    """
    codes = leading_numbers(tuple(answer.code for answer in question.answers))
    points = codes[np.isfinite(codes)]
    if not points.size:
        points = numbers
    low, high = float(points.min()), float(points.max())
    return (low, high) if high > low else (low, low + 1)
