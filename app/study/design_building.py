"""From the sampling plan and the rows of the file to the design the estimators need."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt
import pandas as pd

from app.study.plan_checks import (
    PlanProblem,
    check_plan,
    draws_repeat,
    known_universe,
    label_texts,
    universe_from_strata,
)
from app.study.sampling_plan import SamplingMethod, SamplingPlan
from estimators import Caution, InputError, SampleDesign
from estimators.cautions import ATTEMPTED_CENSUS

NOT_SURE = Caution(
    "not_sure",
    "It is not known how people got into the sample: the interval is that of a simple draw from "
    "an endless universe, and nothing shows whether that is right.",
)
PLAN_NOT_USED = Caution(
    "plan_not_used",
    "The sampling plan contradicts the file: until it is mended the interval is that of a simple "
    "draw from an endless universe.",
)


@dataclass(frozen=True, slots=True)
class BuiltDesign:
    """A design and what stands against it.

    Parameters
    ----------
    design : SampleDesign
        For the rows as given; the simplest one when the plan contradicts the file.
    endless : SampleDesign
        The same sample from an endless universe.
    problems : tuple of PlanProblem
        Contradictions; empty when the plan holds.
    fallback : bool
        True when the plan could not be used.
    """

    design: SampleDesign
    endless: SampleDesign
    problems: tuple[PlanProblem, ...]
    fallback: bool


def build_design(
    plan: SamplingPlan, answers: pd.DataFrame, *, decimal_mark: str = "."
) -> BuiltDesign:
    """Return the design of a plan for the rows of a file.

    Parameters
    ----------
    plan : SamplingPlan
        What the manager told.
    answers : DataFrame
        (n rows) the rows figures are made from.
    decimal_mark : str
        "." or ",": the language of the numbers in what is said against the plan.
    """
    problems = check_plan(plan, answers, decimal_mark=decimal_mark)
    if any(problem.blocks for problem in problems):
        return _fallback(answers, problems)
    try:
        design = _design(plan, answers)
    except InputError as error:
        problem = PlanProblem("method", f"The plan does not fit the file: {error}")
        return _fallback(answers, (*problems, problem))
    return BuiltDesign(design, design.without_correction(), problems, fallback=False)


def _fallback(answers: pd.DataFrame, problems: tuple[PlanProblem, ...]) -> BuiltDesign:
    design = _with_caution(_endless(answers), PLAN_NOT_USED)
    return BuiltDesign(design, design, problems, fallback=True)


def _endless(answers: pd.DataFrame) -> SampleDesign:
    return SampleDesign.simple_random(max(len(answers), 1))


def _with_caution(design: SampleDesign, caution: Caution) -> SampleDesign:
    return replace(design, cautions=(*design.cautions, caution))


def _design(plan: SamplingPlan, answers: pd.DataFrame) -> SampleDesign:
    if plan.method is SamplingMethod.QUOTA:
        return SampleDesign.quota(len(answers), weights=_weights(plan, answers))
    if plan.method is SamplingMethod.NOT_SURE:
        return _with_caution(_not_sure(plan, answers), NOT_SURE)
    if plan.method is SamplingMethod.GROUPS:
        return _groups(plan, answers)
    if plan.weights_column:
        return _weighted(plan, answers)
    if plan.method is SamplingMethod.EVERYBODY:
        return _attempted_census(plan, answers)
    return _drawn_by_chance(plan, answers)


def _not_sure(plan: SamplingPlan, answers: pd.DataFrame) -> SampleDesign:
    weights = _weights(plan, answers)
    if weights is None:
        return _endless(answers)
    return SampleDesign.weighted(weights)


def _drawn_by_chance(plan: SamplingPlan, answers: pd.DataFrame) -> SampleDesign:
    if plan.strata_column:
        return SampleDesign.stratified(
            _labels(answers, plan.strata_column),
            population_sizes=_sizes(plan, answers),
            replacement=draws_repeat(plan),
        )
    return SampleDesign.simple_random(
        len(answers), population_size=plan.universe_size, replacement=draws_repeat(plan)
    )


def _attempted_census(plan: SamplingPlan, answers: pd.DataFrame) -> SampleDesign:
    if plan.strata_column:
        return SampleDesign.attempted_census(
            len(answers),
            strata=_labels(answers, plan.strata_column),
            population_sizes=_sizes(plan, answers),
        )
    return SampleDesign.attempted_census(len(answers), population_size=plan.universe_size)


def _weighted(plan: SamplingPlan, answers: pd.DataFrame) -> SampleDesign:
    """Take weights from the file; the universe is endless where units could be drawn twice."""
    weights = _weights(plan, answers)
    size = _sizes(plan, answers) if _sizes_are_complete(plan, answers) else known_universe(plan)
    design = SampleDesign.weighted(
        np.ones(len(answers)) if weights is None else weights,
        strata=_labels(answers, plan.strata_column) if plan.strata_column else None,
        population_size=size,
    )
    if draws_repeat(plan):
        design = replace(design, stages=design.stages.endless(), replacement=True)
    if plan.method is SamplingMethod.EVERYBODY:
        return _with_caution(design, ATTEMPTED_CENSUS)
    return design


def _groups(plan: SamplingPlan, answers: pd.DataFrame) -> SampleDesign:
    """Draw groups first; without weights an answer counts for the units of its stratum."""
    weights = _weights(plan, answers)
    if weights is None:
        weights = _stratum_weights(plan, answers)
    return SampleDesign.weighted(
        weights,
        strata=_labels(answers, plan.strata_column) if plan.strata_column else None,
        clusters=_labels(answers, plan.clusters_column),
        population_size=known_universe(plan),
        population_clusters=None if plan.strata_column else plan.universe_clusters,
    )


def _stratum_weights(plan: SamplingPlan, answers: pd.DataFrame) -> npt.NDArray[np.float64]:
    if not _sizes_are_complete(plan, answers):
        return np.ones(len(answers))
    labels, sizes = _labels(answers, plan.strata_column), _sizes(plan, answers)
    found, place, rows = np.unique(labels, return_inverse=True, return_counts=True)
    units = np.array([sizes[str(label)] for label in found], dtype=np.float64)
    return np.asarray((units / rows)[place], dtype=np.float64)


def _sizes_are_complete(plan: SamplingPlan, answers: pd.DataFrame) -> bool:
    """Whether every stratum of the file has a universe count."""
    if universe_from_strata(plan) is None:
        return False
    return set(_labels(answers, plan.strata_column)) <= set(_sizes(plan, answers))


def _labels(answers: pd.DataFrame, column: str) -> npt.NDArray[np.str_]:
    return np.asarray(label_texts(answers[column]).to_numpy(dtype=str))


def _sizes(plan: SamplingPlan, answers: pd.DataFrame) -> dict[str, int]:
    present = set(_labels(answers, plan.strata_column))
    return {
        s.label: s.population_size
        for s in plan.strata
        if s.population_size is not None and s.label in present
    }


def _weights(plan: SamplingPlan, answers: pd.DataFrame) -> npt.NDArray[np.float64] | None:
    if not plan.weights_column:
        return None
    return np.asarray(pd.to_numeric(answers[plan.weights_column]), dtype=np.float64)
