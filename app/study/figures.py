"""Compute one figure of a study."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from app.study.figure_requests import FigureRequest, Statistic
from app.study.question_values import QuestionValues, read_values
from app.study.questions import MissingReason, Question, QuestionKind
from app.study.study_data import StudyData
from app.study.width_check import FigureScale, Verdict, judge
from estimators import Estimate, InputError, SampleDesign, mean, proportion, quantile, total

BoolArray = npt.NDArray[np.bool_]


class FigureError(ValueError):
    """A figure that cannot be given; the message is one plain sentence."""


@dataclass(frozen=True, slots=True)
class BaseCounts:
    """How many people stand behind a figure.

    Parameters
    ----------
    in_group : int
        Rows in the group, or all rows.
    asked : int
        Of them, those who were asked.
    answered : int
        Of them, those whose answer counts.
    chosen : int
        Of them, those who chose the answer of a share; 0 otherwise.
    reasons : tuple of (str, int)
        Why the others did not answer.
    """

    in_group: int
    asked: int
    answered: int
    chosen: int
    reasons: tuple[tuple[str, int], ...]


@dataclass(frozen=True, slots=True, eq=False)
class Figure:
    """One figure with all that is said about it.

    Parameters
    ----------
    request : FigureRequest
        What was asked for.
    question : Question
        The question it is about.
    group : Question or None
        The question that names the group.
    estimate, endless : Estimate
        By the plan, and as if the universe were endless.
    counts : BaseCounts
        Who stands behind it.
    scale : FigureScale
        On what scale it stands.
    verdict : Verdict
        Of the width check.
    numbers : ndarray
        (k,) float, the answers behind it (0 and 1 for a share); read only.
    """

    request: FigureRequest
    question: Question
    group: Question | None
    estimate: Estimate
    endless: Estimate
    counts: BaseCounts
    scale: FigureScale
    verdict: Verdict
    numbers: npt.NDArray[np.float64]


def compute_figure(data: StudyData, request: FigureRequest) -> Figure:
    """Compute one figure.

    Parameters
    ----------
    data : StudyData
        The study ready to compute with.
    request : FigureRequest
        What is asked for.

    Raises
    ------
    FigureError
        When the question is gone, nobody answered, or the plan cannot give this figure.
    """
    question = _usable_question(data, request.question)
    values = read_values(question, data.answers)
    group, inside = _group(data, request)
    where = inside & values.asked
    answered, numbers = _answers(values, request)
    if not (answered & where).any():
        raise FigureError(f"Nobody in this group answered {question.text}: choose another group.")
    estimate = _estimate(data.built.design, numbers, where, answered, request)
    endless = _estimate(data.built.design.without_correction(), numbers, where, answered, request)
    scale = _scale(question, request, numbers[answered & where], estimate)
    kept = numbers[answered & where]
    kept.setflags(write=False)
    return Figure(
        request,
        question,
        group,
        estimate,
        endless,
        _counts(values, inside, where, answered, numbers, request),
        scale,
        judge(estimate, scale, data.study.limit, decimal_mark=data.study.decimal_mark),
        kept,
    )


def default_request(question: Question) -> FigureRequest:
    """Return the figure a question opens with: an average, or the share of its first answer."""
    if question.kind in (QuestionKind.SCALE, QuestionKind.NUMBER):
        return FigureRequest(question.key, Statistic.AVERAGE)
    first = question.answers[0].code if question.answers else ""
    return FigureRequest(question.key, Statistic.SHARE, (first,))


def statistics_of(question: Question) -> tuple[Statistic, ...]:
    """Return what can be estimated from a question."""
    if question.kind is QuestionKind.SCALE:
        return (Statistic.AVERAGE, Statistic.SHARE, Statistic.MEDIAN)
    if question.kind is QuestionKind.NUMBER:
        return (Statistic.AVERAGE, Statistic.TOTAL, Statistic.MEDIAN)
    return (Statistic.SHARE, Statistic.TOTAL)


def _usable_question(data: StudyData, key: str) -> Question:
    question = data.question(key)
    if question is None or not set(question.columns) <= set(data.answers.columns):
        raise FigureError(f"The current file has no question {key}: choose another question.")
    if not question.usable:
        raise FigureError(
            f"{question.text} is set aside or holds no answers to count: "
            "change that on the Questions screen."
        )
    return question


def _group(data: StudyData, request: FigureRequest) -> tuple[Question | None, BoolArray]:
    if not request.group_question:
        return None, np.ones(len(data.answers), dtype=bool)
    question = _usable_question(data, request.group_question)
    return question, members(read_values(question, data.answers), question, request.group_answer)


def members(values: QuestionValues, question: Question, code: str) -> BoolArray:
    """Return (n,) bool: who gave this answer.

    Raises
    ------
    FigureError
        When the question has no such answer.
    """
    codes = [answer.code for answer in question.answers]
    if code not in codes:
        raise FigureError(f"{question.text} has no answer {code}: choose another group.")
    position = codes.index(code)
    if question.kind is QuestionKind.SEVERAL:
        return np.asarray(values.chosen[:, position], dtype=bool)
    return np.asarray(values.codes == position, dtype=bool)


def _answers(
    values: QuestionValues, request: FigureRequest
) -> tuple[BoolArray, npt.NDArray[np.float64]]:
    """Return who answered, and the numbers to estimate from: (n,) bool and (n,) float."""
    if not _counts_people(request):
        return np.asarray(values.answered), np.array(values.numbers, dtype=np.float64)
    chosen = _chosen(values, request)
    answered = np.asarray(values.answered).copy()
    if request.missing_counted:
        for reason in (MissingReason.DONT_KNOW, MissingReason.REFUSED):
            answered |= np.asarray(values.reasons[reason])
    return answered, np.asarray(chosen & values.answered, dtype=np.float64)


def _counts_people(request: FigureRequest) -> bool:
    """Whether the figure counts who chose an answer: a share, or how many that are in all."""
    return request.statistic is Statistic.SHARE or bool(request.answers)


def _chosen(values: QuestionValues, request: FigureRequest) -> BoolArray:
    question = values.question
    positions = [i for i, a in enumerate(question.answers) if a.code in request.answers]
    if len(positions) < len(request.answers):
        gone = set(request.answers) - {a.code for a in question.answers}
        raise FigureError(f"{question.text} has no answer {sorted(gone)[0]}: choose another.")
    if question.kind is QuestionKind.SEVERAL:
        return np.asarray(values.chosen[:, positions].any(axis=1), dtype=bool)
    return np.isin(values.codes, positions)


def _estimate(
    design: SampleDesign,
    numbers: npt.NDArray[np.float64],
    where: BoolArray,
    answered: BoolArray,
    request: FigureRequest,
) -> Estimate:
    confidence = request.confidence
    try:
        if request.statistic is Statistic.SHARE:
            return proportion(
                numbers > 0,
                design,
                where=where,
                answered=answered,
                confidence=confidence,
                method=request.method,
            )
        if request.statistic is Statistic.MEDIAN:
            return quantile(
                numbers, 0.5, design, where=where, answered=answered, confidence=confidence
            )
        function = total if request.statistic is Statistic.TOTAL else mean
        return function(numbers, design, where=where, answered=answered, confidence=confidence)
    except InputError as error:
        raise FigureError(_in_plain_words(request, error)) from error


def _in_plain_words(request: FigureRequest, error: InputError) -> str:
    if request.statistic is Statistic.TOTAL:
        return "A total needs the size of the universe: type it in the sampling plan."
    return f"This figure cannot be given: {error}"


def _scale(
    question: Question,
    request: FigureRequest,
    numbers: npt.NDArray[np.float64],
    estimate: Estimate,
) -> FigureScale:
    if request.statistic is Statistic.SHARE:
        return FigureScale(True, 0.0, 1.0, natural_zero=True, scale_answers=False)
    if question.kind is QuestionKind.SCALE and not request.answers:
        low, high = scale_ends(question, numbers)
        return FigureScale(False, low, high, natural_zero=False, scale_answers=True)
    top = estimate.interval.high if np.isfinite(estimate.interval.high) else estimate.value * 2
    positive = bool((numbers >= 0).all())
    low = 0.0 if positive else min(estimate.interval.low, estimate.value)
    return FigureScale(False, low, max(top, estimate.value) * 1.25, positive, scale_answers=False)


def scale_ends(question: Question, numbers: npt.NDArray[np.float64]) -> tuple[float, float]:
    """Return the lowest and highest point of a scale."""
    codes = [float(a.code) for a in question.answers if _is_number(a.code)]
    points = codes or [float(numbers.min()), float(numbers.max())]
    return min(points), max(points)


def _is_number(code: str) -> bool:
    try:
        float(code)
    except ValueError:
        return False
    return True


def _counts(
    values: QuestionValues,
    inside: BoolArray,
    where: BoolArray,
    answered: BoolArray,
    numbers: npt.NDArray[np.float64],
    request: FigureRequest,
) -> BaseCounts:
    reasons = []
    for reason in (MissingReason.DONT_KNOW, MissingReason.REFUSED, MissingReason.NO_ANSWER):
        count = int((values.reasons[reason] & where & ~answered).sum())
        if count:
            reasons.append((reason.value, count))
    base = answered & where
    chosen = int((numbers[base] > 0).sum()) if _counts_people(request) else 0
    return BaseCounts(int(inside.sum()), int(where.sum()), int(base.sum()), chosen, tuple(reasons))
