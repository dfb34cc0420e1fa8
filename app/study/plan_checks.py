"""Contradictions between a sampling plan and the file, each tied to the field that mends it."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import pandas as pd

from app.study.number_format import write_count
from app.study.sampling_plan import SamplingMethod, SamplingPlan


@dataclass(frozen=True, slots=True)
class PlanProblem:
    """One contradiction.

    Parameters
    ----------
    field : str
        Field of the plan that mends it: "universe_size", "strata", "weights_column" ...
    sentence : str
        What is wrong, where, and what to do.
    blocks : bool
        True when figures fall back to a simpler plan until it is mended.
    """

    field: str
    sentence: str
    blocks: bool = True


def check_plan(
    plan: SamplingPlan, answers: pd.DataFrame, *, decimal_mark: str = "."
) -> tuple[PlanProblem, ...]:
    """Return every contradiction between the plan and the rows figures are made from.

    Parameters
    ----------
    plan : SamplingPlan
        What the manager told.
    answers : DataFrame
        (n rows) the answers as read.
    decimal_mark : str
        "." or ",": the language of the numbers in the sentences.
    """
    checks = (_universe_problems, _strata_problems, _weight_problems, _cluster_problems)
    return tuple(problem for check in checks for problem in check(plan, answers, decimal_mark))


def draws_repeat(plan: SamplingPlan) -> bool:
    """Return whether a unit could be drawn twice; a switch left over from another method is not."""
    return plan.replacement and plan.method is SamplingMethod.CHANCE


def universe_from_strata(plan: SamplingPlan) -> int | None:
    """Return the sum of the stratum counts, or None while one of them is unknown."""
    sizes = [s.population_size for s in plan.strata]
    if not plan.strata_column or not sizes or any(size is None for size in sizes):
        return None
    return sum(size for size in sizes if size is not None)


def known_universe(plan: SamplingPlan) -> int | None:
    """Return the size of the universe by the plan, from its strata where those are complete."""
    by_strata = universe_from_strata(plan)
    return by_strata if by_strata is not None else plan.universe_size


def stratum_rows(plan: SamplingPlan, answers: pd.DataFrame) -> dict[str, int]:
    """Return how many rows each stratum of the file has, by label."""
    if plan.strata_column not in answers:
        return {}
    labels = label_texts(answers[plan.strata_column])
    return {str(k): int(v) for k, v in labels[labels != ""].value_counts(sort=False).items()}


def label_texts(column: pd.Series) -> pd.Series:
    """Return a column as labels: whole numbers without decimals, blanks as ""."""
    if pd.api.types.is_numeric_dtype(column):
        return column.map(_number_label, na_action="ignore").fillna("").astype(str)
    return column.fillna("").astype(str).str.strip()


def _number_label(value: float) -> str:
    whole = math.isfinite(value) and value == int(value)
    return str(int(value)) if whole else repr(float(value))


def _answers(count: int, mark: str) -> str:
    return "1 answer" if count == 1 else f"{write_count(count, mark)} answers"


def _have(count: int) -> str:
    return "has" if count == 1 else "have"


def _universe_problems(
    plan: SamplingPlan, answers: pd.DataFrame, mark: str
) -> Iterator[PlanProblem]:
    size, rows = plan.universe_size, len(answers)
    if size is not None and size < rows and not draws_repeat(plan):
        twice = plan.method is SamplingMethod.CHANCE
        yield PlanProblem(
            "universe_size",
            f"The file has {_answers(rows, mark)} but the universe only "
            f"{write_count(size, mark)}: correct the universe"
            + (", or say that each could be drawn twice." if twice else "."),
        )
    total = universe_from_strata(plan)
    if size is not None and total is not None and total != size:
        yield PlanProblem(
            "universe_size",
            f"The strata add up to {write_count(total, mark)} but the universe is given as "
            f"{write_count(size, mark)}: correct one of them. Until then the strata count.",
            blocks=False,
        )


def _strata_problems(plan: SamplingPlan, answers: pd.DataFrame, mark: str) -> Iterator[PlanProblem]:
    column = plan.strata_column
    if not column:
        return
    if column not in answers:
        yield PlanProblem("strata_column", f"The file has no column {column}: choose another.")
        return
    asked = stratum_rows(plan, answers)
    yield from _unlabelled_rows(column, answers, mark)
    if not _sizes_are_needed(plan):
        return
    sizes = {s.label: s.population_size for s in plan.strata}
    for label, rows in asked.items():
        yield from _stratum_problem(label, rows, sizes.get(label), plan, mark)
    for label, size in sizes.items():
        if label not in asked:
            yield from _empty_stratum_problem(label, size, mark)


def _empty_stratum_problem(label: str, size: int | None, mark: str) -> Iterator[PlanProblem]:
    if size is None:
        yield PlanProblem(
            "strata",
            f"{label}: neither an answer in the file nor a universe count: take it out.",
            blocks=False,
        )
    elif size:
        yield PlanProblem(
            "strata",
            f"{label}: {write_count(size, mark)} in the universe but no answer in the file: "
            "merge it with another stratum or take it out.",
        )


def _sizes_are_needed(plan: SamplingPlan) -> bool:
    if plan.weights_column or plan.method in (SamplingMethod.QUOTA, SamplingMethod.NOT_SURE):
        return False
    return plan.method is not SamplingMethod.GROUPS


def _unlabelled_rows(column: str, answers: pd.DataFrame, mark: str) -> Iterator[PlanProblem]:
    blank = int((label_texts(answers[column]) == "").sum())
    if blank:
        yield PlanProblem(
            "strata_column",
            f"{_answers(blank, mark)} {_have(blank)} no {column}: fill it in the file, or do not "
            "separate the draw by it.",
        )


def _stratum_problem(
    label: str, rows: int, size: int | None, plan: SamplingPlan, mark: str
) -> Iterator[PlanProblem]:
    if size is None:
        yield PlanProblem(
            "strata",
            f"{label}: {_answers(rows, mark)} but no universe count: type it or merge the stratum.",
        )
    elif size < rows and not draws_repeat(plan):
        yield PlanProblem(
            "strata",
            f"{label}: {_answers(rows, mark)} but only {write_count(size, mark)} in the universe: "
            "correct the count.",
        )


def _weight_problems(plan: SamplingPlan, answers: pd.DataFrame, mark: str) -> Iterator[PlanProblem]:
    column = plan.weights_column
    if not column:
        return
    if column not in answers:
        yield PlanProblem("weights_column", f"The file has no column {column}: choose another.")
        return
    weights = pd.to_numeric(answers[column], errors="coerce").to_numpy(dtype=float)
    bad = np.flatnonzero(~(weights > 0) | ~np.isfinite(weights))
    if bad.size:
        rows = ", ".join(str(i + 1) for i in bad[:5]) + (" ..." if bad.size > 5 else "")
        yield PlanProblem(
            "weights_column",
            f"{write_count(bad.size, mark)} weights in {column} are missing, no number, zero or "
            f"negative (answers {rows}): mend them in the file, or choose another column.",
        )


def _cluster_problems(
    plan: SamplingPlan, answers: pd.DataFrame, mark: str
) -> Iterator[PlanProblem]:
    if plan.method is not SamplingMethod.GROUPS:
        return
    column = plan.clusters_column
    if not column:
        yield PlanProblem("clusters_column", "Say which column names the group drawn first.")
        return
    if column not in answers:
        yield PlanProblem("clusters_column", f"The file has no column {column}: choose another.")
        return
    labels = label_texts(answers[column])
    if (blank := int((labels == "").sum())) > 0:
        yield PlanProblem(
            "clusters_column",
            f"{_answers(blank, mark)} {_have(blank)} no {column}: fill it in the file, or choose "
            "another column.",
        )
    yield from _group_count_problems(plan, int(labels[labels != ""].nunique()), mark)
    yield from _straddling_groups(plan, answers, labels, mark)


def _group_count_problems(plan: SamplingPlan, groups: int, mark: str) -> Iterator[PlanProblem]:
    """Compare the groups of the file with those of the universe."""
    if groups == 1:
        yield PlanProblem(
            "clusters_column",
            f"All answers have the same {plan.clusters_column}, so nothing shows how groups "
            "differ: choose another column, or another way people got in.",
            blocks=False,
        )
    there = plan.universe_clusters
    if there is not None and there < groups:
        yield PlanProblem(
            "universe_clusters",
            f"The file has {write_count(groups, mark)} groups but the universe only "
            f"{write_count(there, mark)}: correct the number.",
        )
    elif there is not None and plan.strata_column:
        yield PlanProblem(
            "universe_clusters",
            f"Groups were drawn separately by {plan.strata_column}, so {write_count(there, mark)} "
            "in all do not say how many each had: they are counted as endless. Leave it out.",
            blocks=False,
        )


def _straddling_groups(
    plan: SamplingPlan, answers: pd.DataFrame, groups: pd.Series, mark: str
) -> Iterator[PlanProblem]:
    """Find groups that lie in two strata: they cannot have been drawn within one."""
    if plan.strata_column not in answers:
        return
    strata = label_texts(answers[plan.strata_column]).groupby(groups).nunique()
    straddling = [str(label) for label in strata.index[strata > 1] if label != ""]
    if straddling:
        more = f" and {write_count(len(straddling) - 1, mark)} more" if len(straddling) > 1 else ""
        yield PlanProblem(
            "clusters_column",
            f"{straddling[0]}{more}: its answers have different {plan.strata_column}, but a group "
            "lies in one stratum: correct the file, or do not separate the draw by it.",
        )
