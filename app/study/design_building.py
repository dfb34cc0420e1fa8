"""From the sampling plan and the rows of the file to the design the estimators need."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import pandas as pd

from app.study.plan_checks import PlanProblem, check_plan, known_universe, label_texts
from app.study.sampling_plan import SamplingMethod, SamplingPlan
from estimators import InputError, SampleDesign


@dataclass(frozen=True, slots=True)
class BuiltDesign:
    """A design and what stands against it.

    Parameters
    ----------
    design : SampleDesign
        For the rows as given; the simplest one when the plan contradicts the file.
    problems : tuple of PlanProblem
        Contradictions; empty when the plan holds.
    fallback : bool
        True when the plan could not be used.
    """

    design: SampleDesign
    problems: tuple[PlanProblem, ...]
    fallback: bool


def build_design(plan: SamplingPlan, answers: pd.DataFrame) -> BuiltDesign:
    """Return the design of a plan for the rows of a file.

    Parameters
    ----------
    plan : SamplingPlan
        What the manager told.
    answers : DataFrame
        (n rows) the rows figures are made from.
    """
    problems = check_plan(plan, answers)
    if any(problem.blocks for problem in problems):
        return BuiltDesign(_endless(answers), problems, fallback=True)
    try:
        return BuiltDesign(_design(plan, answers), problems, fallback=False)
    except InputError as error:
        problem = PlanProblem("method", f"The plan does not fit the file: {error}")
        return BuiltDesign(_endless(answers), (*problems, problem), fallback=True)


def _endless(answers: pd.DataFrame) -> SampleDesign:
    return SampleDesign.simple_random(len(answers))


def _design(plan: SamplingPlan, answers: pd.DataFrame) -> SampleDesign:
    if plan.method is SamplingMethod.QUOTA:
        return SampleDesign.quota(len(answers), weights=_weights(plan, answers))
    if plan.method is SamplingMethod.NOT_SURE:
        return _not_sure(plan, answers)
    if plan.weights_column or plan.method is SamplingMethod.GROUPS:
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
            replacement=plan.replacement,
        )
    return SampleDesign.simple_random(
        len(answers), population_size=plan.universe_size, replacement=plan.replacement
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
    grouped = plan.method is SamplingMethod.GROUPS
    weights = _weights(plan, answers)
    return SampleDesign.weighted(
        np.ones(len(answers)) if weights is None else weights,
        strata=_labels(answers, plan.strata_column) if plan.strata_column else None,
        clusters=_labels(answers, plan.clusters_column) if grouped else None,
        population_size=known_universe(plan),
        population_clusters=plan.universe_clusters if grouped and not plan.strata_column else None,
    )


def _labels(answers: pd.DataFrame, column: str) -> npt.NDArray[np.str_]:
    return label_texts(answers[column]).to_numpy(dtype=str)


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
    return pd.to_numeric(answers[plan.weights_column]).to_numpy(dtype=np.float64)
