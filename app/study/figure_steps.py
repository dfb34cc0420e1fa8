"""How a figure came about: from the file to the interval, each step with its count."""

from __future__ import annotations

from dataclasses import dataclass

from app.study.figure_requests import Statistic
from app.study.figures import Figure
from app.study.number_format import NO_BREAK, write_count, write_number
from app.study.plan_checks import known_universe
from app.study.sampling_plan import SamplingMethod
from app.study.sentences import words_of
from app.study.study_data import StudyData

METHOD_NAMES = {
    "wald": "Wald",
    "wilson": "Wilson",
    "agresti_coull": "Agresti-Coull",
    "jeffreys": "Jeffreys",
    "clopper_pearson": "Clopper-Pearson",
    "mid_p": "mid-P",
    "logit": "logit",
    "korn_graubard": "Korn-Graubard",
    "hypergeometric": "exact hypergeometric",
    "t": "Student\u2019s t",
    "woodruff": "Woodruff",
}


@dataclass(frozen=True, slots=True)
class Step:
    """One step: what was done, how many were left, and why."""

    name: str
    count: str
    detail: str


def steps_of(data: StudyData, figure: Figure, *, file_name: str) -> tuple[Step, ...]:
    """Return the steps from the file to the interval.

    Parameters
    ----------
    data : StudyData
        The study.
    figure : Figure
        The figure.
    file_name : str
        Name of the fieldwork file.
    """
    mark, counts = data.study.decimal_mark, figure.counts
    words = words_of(figure, mark)
    return (
        Step("file", write_count(data.received, mark), file_name),
        Step("set aside", write_count(data.set_aside, mark), "answered nothing at all"),
        *_group_step(figure, mark),
        Step("asked", write_count(counts.asked, mark), figure.question.text),
        Step("answered", write_count(counts.answered, mark), _missing(figure, mark)),
        Step("weights", _weights(data), _plan_words(data, mark)),
        Step("method", method_name(figure), method_words(data, figure)),
        Step(
            "interval",
            words.between,
            f"{write_number(figure.request.confidence * 100, 1.0, mark)}{NO_BREAK}% level",
        ),
    )


def method_name(figure: Figure) -> str:
    """Return the name of the interval method as in the literature."""
    return METHOD_NAMES.get(figure.estimate.interval.method, figure.estimate.interval.method)


def _group_step(figure: Figure, mark: str) -> tuple[Step, ...]:
    if figure.group is None:
        return ()
    label = figure.group.label_of(figure.request.group_answer)
    return (
        Step("group", write_count(figure.counts.in_group, mark), f"{figure.group.text}: {label}"),
    )


def _missing(figure: Figure, mark: str) -> str:
    said = [f"{write_count(count, mark)} {reason}" for reason, count in figure.counts.reasons]
    return "left out: " + ", ".join(said) if said else "nobody left out"


def _weights(data: StudyData) -> str:
    if data.plan.weights_column and not data.built.fallback:
        return data.plan.weights_column
    return "by stratum" if data.plan.strata_column and not data.built.fallback else "none"


def _plan_words(data: StudyData, mark: str) -> str:
    plan = data.plan
    if data.built.fallback:
        return "the plan contradicts the file: counted as a simple draw from an endless universe"
    words = [plan.method.value]
    if plan.strata_column:
        words.append(f"separately by {plan.strata_column}")
    size = known_universe(plan)
    words.append("endless universe" if size is None else f"universe of {write_count(size, mark)}")
    if plan.method is SamplingMethod.CHANCE:
        words.append("each could be drawn twice" if plan.replacement else "each drawn once at most")
    return ", ".join(words)


def method_words(data: StudyData, figure: Figure) -> str:
    """Return degrees of freedom and design effect in one line."""
    mark, estimate = data.study.decimal_mark, figure.estimate
    parts = []
    if estimate.degrees_of_freedom == estimate.degrees_of_freedom:
        parts.append(f"{_plain(estimate.degrees_of_freedom, mark)} degrees of freedom")
    if figure.request.statistic is not Statistic.MEDIAN and estimate.design_effect > 0:
        parts.append(f"design effect {write_number(estimate.design_effect, 0.01, mark)}")
    return ", ".join(parts)


def _plain(value: float, mark: str) -> str:
    return "endless" if value == float("inf") else write_count(value, mark)
