"""What a sampling plan does to precision, told by a share of one half."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd

from app.study.design_building import BuiltDesign
from app.study.number_format import write_count
from app.study.plan_checks import known_universe, label_texts
from app.study.sampling_plan import SamplingPlan
from estimators import proportion


@dataclass(frozen=True, slots=True)
class PlanEffect:
    """The half-width of a share of one half.

    Parameters
    ----------
    points : float
        Under the plan, in percentage points.
    endless_points : float
        The same sample from an endless universe.
    asked : int
        Rows in the file.
    universe : int or None
        Units in the universe.
    """

    points: float
    endless_points: float
    asked: int
    universe: int | None

    @property
    def fraction_words(self) -> str:
        """Return the part of the universe that answered, in words."""
        if not self.universe:
            return ""
        part = self.asked / self.universe
        if part >= 1:
            return "everybody" if part == 1 else "some more than once"
        if part >= 0.995:
            return "nearly everybody"
        number = max(round(1 / part), 2)
        if part > 0.1 and abs(part * number - 1) > _NEAR:
            return f"{round(part * 100)} in a hundred"
        return f"one in {_in_words(number)}"


def plan_effect(plan: SamplingPlan, built: BuiltDesign, answers: pd.DataFrame) -> PlanEffect:
    """Return what a share of one half would carry under the plan.

    Parameters
    ----------
    plan : SamplingPlan
        What the manager told.
    built : BuiltDesign
        Its design for the rows of the file.
    answers : DataFrame
        (n rows) those rows.
    """
    half = _every_second(plan, answers)
    here = proportion(half, built.design)
    endless = proportion(half, built.endless)
    universe = None if built.fallback else known_universe(plan)
    return PlanEffect(here.half_width * 100, endless.half_width * 100, len(answers), universe)


def _every_second(plan: SamplingPlan, answers: pd.DataFrame) -> np.ndarray:
    """Return (n,) bool, true for every second row of each stratum."""
    chosen = np.zeros(len(answers), dtype=bool)
    if plan.strata_column in answers:
        labels = label_texts(answers[plan.strata_column]).to_numpy(dtype=str)
        order = np.argsort(labels, kind="stable")
    else:
        order = np.arange(len(answers))
    chosen[order[::2]] = True
    return chosen


_NEAR = 0.06  # "one in three" says 33 in a hundred within two
_NUMBERS = ("one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten")


def _in_words(number: int) -> str:
    return _NUMBERS[number - 1] if number <= len(_NUMBERS) else write_count(number)
