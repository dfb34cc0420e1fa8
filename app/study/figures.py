"""Compute one figure of a study."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from app.study.figure_requests import FigureRequest, Statistic
from app.study.figure_scales import scale_of
from app.study.question_values import QuestionValues, read_values
from app.study.questions import MissingReason, Question, QuestionKind
from app.study.sampling_plan import SamplingMethod
from app.study.study_data import StudyData
from app.study.width_check import FigureScale, Verdict, judge
from estimators import Estimate, InputError, SampleDesign, mean, proportion, quantile, total

BoolArray = npt.NDArray[np.bool_]
ReadValues = Callable[[Question], QuestionValues]


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
    base : ndarray
        (n,) bool, the k rows they stand in; read only.
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
    base: BoolArray


def compute_figure(
    data: StudyData, request: FigureRequest, *, read: ReadValues | None = None
) -> Figure:
    """Compute one figure.

    Parameters
    ----------
    data : StudyData
        The study ready to compute with.
    request : FigureRequest
        What is asked for.
    read : callable, optional
        Gives the answers to a question; for those who compute many figures of the same ones.

    Raises
    ------
    FigureError
        When the question is gone, nobody answered, or the plan cannot give this figure.
    """
    question = _usable_question(data, request.question)
    _check_request(question, request)
    read = read or reader(data)
    values = read(question)
    group, inside = _group(data, request, read)
    where = inside & values.asked
    answered, numbers = _answers(values, request)
    base = answered & where
    if not base.any():
        raise FigureError(
            f"Nobody in this group answered \u201c{question.text}\u201d: choose another group."
        )
    try:
        estimate = _estimate(data.built.design, numbers, where, answered, request)
        endless = _estimate(data.built.endless, numbers, where, answered, request)
    except InputError as error:
        raise FigureError(_in_plain_words(data, request, error)) from error
    kept = numbers[base]
    for array in (kept, base):
        array.setflags(write=False)
    scale = scale_of(question, request, kept, estimate)
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
        base,
    )


def reader(data: StudyData) -> ReadValues:
    """Return what gives the answers to a question, each read once."""
    known: dict[str, QuestionValues] = {}

    def read(question: Question) -> QuestionValues:
        if question.key not in known:
            known[question.key] = read_values(question, data.answers)
        return known[question.key]

    return read


def default_request(question: Question) -> FigureRequest:
    """Return the figure a question opens with: an average, or the share of its first answer."""
    if question.kind in (QuestionKind.SCALE, QuestionKind.NUMBER):
        return FigureRequest(question.key, Statistic.AVERAGE)
    first = tuple(answer.code for answer in question.answers[:1])
    return FigureRequest(question.key, Statistic.SHARE, first)


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
            f"\u201c{question.text}\u201d is set aside or holds no answers to count: "
            "change that on the Questions screen."
        )
    return question


def _check_request(question: Question, request: FigureRequest) -> None:
    """Refuse what the question cannot give, such as an average of brands."""
    if request.statistic not in statistics_of(question):
        names = " or ".join(statistic.value for statistic in statistics_of(question))
        raise FigureError(
            f"\u201c{question.text}\u201d has no {request.statistic.value}: choose {names}."
        )
    if not takes_answers(question, request.statistic):
        return
    if not question.answers:
        raise FigureError(
            f"\u201c{question.text}\u201d has no answers to choose from: type them on the "
            "Questions screen."
        )
    if not request.answers:
        raise FigureError(f"\u201c{question.text}\u201d: choose the answer to count.")


def takes_answers(question: Question, statistic: Statistic) -> bool:
    """Return whether a figure counts people who gave an answer."""
    if statistic is Statistic.SHARE:
        return True
    kinds = (QuestionKind.CHOICE, QuestionKind.SEVERAL)
    return statistic is Statistic.TOTAL and question.kind in kinds


def _group(
    data: StudyData, request: FigureRequest, read: ReadValues
) -> tuple[Question | None, BoolArray]:
    if not request.group_question:
        return None, np.ones(len(data.answers), dtype=bool)
    question = _usable_question(data, request.group_question)
    return question, members(read(question), question, request.group_answer)


def members(values: QuestionValues, question: Question, code: str) -> BoolArray:
    """Return (n,) bool: who gave this answer.

    Raises
    ------
    FigureError
        When the question has no such answer.
    """
    codes = [answer.code for answer in question.answers]
    if code not in codes:
        raise FigureError(
            f"\u201c{question.text}\u201d has no answer {code}: choose another group."
        )
    position = codes.index(code)
    if question.kind is QuestionKind.SEVERAL:
        return np.asarray(values.chosen[:, position], dtype=bool)
    return np.asarray(values.codes == position, dtype=bool)


def _answers(
    values: QuestionValues, request: FigureRequest
) -> tuple[BoolArray, npt.NDArray[np.float64]]:
    """Return who answered, and the numbers to estimate from: (n,) bool and (n,) float."""
    if not request.counts_people:
        return np.asarray(values.answered), np.array(values.numbers, dtype=np.float64)
    chosen = _chosen(values, request)
    answered = np.asarray(values.answered).copy()
    if request.missing_counted:
        for reason in (MissingReason.DONT_KNOW, MissingReason.REFUSED):
            answered |= np.asarray(values.reasons[reason])
    return answered, np.asarray(chosen & values.answered, dtype=np.float64)


def _chosen(values: QuestionValues, request: FigureRequest) -> BoolArray:
    question = values.question
    positions = [i for i, a in enumerate(question.answers) if a.code in request.answers]
    gone = set(request.answers) - {a.code for a in question.answers}
    if gone:
        raise FigureError(
            f"\u201c{question.text}\u201d has no answer {sorted(gone)[0]}: choose another."
        )
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
        return quantile(numbers, 0.5, design, where=where, answered=answered, confidence=confidence)
    function = total if request.statistic is Statistic.TOTAL else mean
    return function(numbers, design, where=where, answered=answered, confidence=confidence)


def _in_plain_words(data: StudyData, request: FigureRequest, error: InputError) -> str:
    if request.statistic is not Statistic.TOTAL or error.argument != "design":
        return f"This figure cannot be given: {error}"
    if data.built.fallback:
        return "A total needs a sampling plan that fits the file: mend the plan first."
    if data.plan.method is SamplingMethod.NOT_SURE:
        return "A total needs to know how people got in: choose a method in the sampling plan."
    if data.plan.method is SamplingMethod.QUOTA:
        return (
            "Quotas and online panels give a total only with weights that add up to the universe: "
            "name such a column in the sampling plan, or show a share or an average."
        )
    return "A total needs the size of the universe: type it in the sampling plan."


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
    chosen = int((numbers[base] > 0).sum()) if request.counts_people else 0
    return BaseCounts(int(inside.sum()), int(where.sum()), int(base.sum()), chosen, tuple(reasons))
