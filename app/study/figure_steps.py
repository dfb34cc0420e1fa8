"""How a figure came about: from the file to the interval, each step with its count."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from app.study.figure_requests import Statistic
from app.study.figures import Figure
from app.study.number_format import NO_BREAK, write_count, write_number, write_plain
from app.study.plan_checks import draws_repeat, known_universe
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


def steps_of(
    data: StudyData, figure: Figure, *, file_name: str, step: float | None = None
) -> tuple[Step, ...]:
    """Return the steps from the file to the interval.

    Parameters
    ----------
    data : StudyData
        The study.
    figure : Figure
        The figure.
    file_name : str
        Name of the fieldwork file.
    step : float, optional
        The step of the column it stands in.
    """
    mark, counts = data.study.decimal_mark, figure.counts
    words = words_of(figure, mark, step=step)
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
            f"{write_plain(round(figure.request.confidence * 100, 6), mark)}{NO_BREAK}% level",
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
    return "by stratum" if weighted_by_stratum(data) else "none"


def weighted_by_stratum(data: StudyData) -> bool:
    """Return whether an answer counts for the units of its stratum, by their known numbers."""
    if data.plan.weights_column or not data.plan.strata_column:
        return False
    return bool(np.ptp(data.built.design.weights) > 0)


def counts_universe(data: StudyData) -> bool:
    """Return whether the intervals are narrower for the part of the universe that was asked."""
    return data.built.design.stages.is_corrected


def _plan_words(data: StudyData, mark: str) -> str:
    plan = data.plan
    if data.built.fallback:
        return "the plan contradicts the file: counted as a simple draw from an endless universe"
    words = [plan.method.value]
    if uses_strata(data):
        words.append(f"separately by {plan.strata_column}")
    size = known_universe(plan)
    if not counts_universe(data):
        words.append("counted as an endless universe")
    elif plan.method is SamplingMethod.GROUPS:
        words.append(f"{write_count(plan.universe_clusters or 0, mark)} groups in the universe")
    else:
        words.append(f"universe of {write_count(size or 0, mark)}")
    if plan.method is SamplingMethod.CHANCE:
        repeats = draws_repeat(plan)
        words.append("each could be drawn twice" if repeats else "each drawn once at most")
    return ", ".join(words)


def uses_strata(data: StudyData) -> bool:
    """Return whether the design is made by strata."""
    return bool(data.plan.strata_column) and len(data.built.design.stages.units_drawn) > 1


def method_words(data: StudyData, figure: Figure) -> str:
    """Return degrees of freedom and design effect in one line."""
    mark, estimate = data.study.decimal_mark, figure.estimate
    parts = []
    if not math.isnan(estimate.degrees_of_freedom):
        parts.append(f"{_plain(estimate.degrees_of_freedom, mark)} degrees of freedom")
    effect = estimate.design_effect
    if figure.request.statistic is not Statistic.MEDIAN and 0 < effect < math.inf:
        parts.append(f"design effect {write_number(effect, 0.01, mark)}")
    return ", ".join(parts)


def _plain(value: float, mark: str) -> str:
    return "endless" if math.isinf(value) else write_count(value, mark)
