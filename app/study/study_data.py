"""Everything figures are computed from: the study, its questions, its plan and the kept rows."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd

from app.study.design_building import BuiltDesign, build_design
from app.study.questions import Question, QuestionKind
from app.study.sampling_plan import SamplingPlan
from app.study.study import Study

_NOT_ANSWERS = (QuestionKind.IDENTIFIER, QuestionKind.WEIGHT)


@dataclass(frozen=True, slots=True, eq=False)
class StudyData:
    """A study ready to compute with.

    Parameters
    ----------
    study : Study
        Name, language of numbers, width limit.
    questions : tuple of Question
        In the order of the file.
    plan : SamplingPlan
        How people got in.
    answers : DataFrame
        (n rows) of those who answered anything; read only.
    received : int
        Rows in the file.
    built : BuiltDesign
        The design of these rows, and what contradicts it.
    name : str
        Names all of the above but the study completely; "" where nobody keeps results by it.
    """

    study: Study
    questions: tuple[Question, ...]
    plan: SamplingPlan
    answers: pd.DataFrame
    received: int
    built: BuiltDesign
    name: str = ""

    @property
    def set_aside(self) -> int:
        """Rows in which nothing was answered."""
        return self.received - len(self.answers)

    def question(self, key: str) -> Question | None:
        """Return the question with this key, or None when the file has lost it."""
        return next((q for q in self.questions if q.key == key), None)


def prepare_study(
    study: Study, questions: tuple[Question, ...], plan: SamplingPlan, answers: pd.DataFrame
) -> StudyData:
    """Return the study ready to compute with.

    Parameters
    ----------
    study, questions, plan
        As stored.
    answers : DataFrame
        All rows of the fieldwork file; where nobody answered anything, all are kept.
    """
    answered = _answered_anything(questions, answers)
    kept = answers[answered if answered.any() else ~answered].reset_index(drop=True)
    built = build_design(plan, kept, decimal_mark=study.decimal_mark)
    return StudyData(study, questions, plan, kept, len(answers), built)


def _answered_anything(questions: tuple[Question, ...], answers: pd.DataFrame) -> pd.Series:
    asked = [q for q in questions if q.kind not in _NOT_ANSWERS and not q.set_aside]
    columns = [c for q in asked for c in q.columns if c in answers]
    if not columns:
        return pd.Series(np.ones(len(answers), dtype=bool), index=answers.index)
    return answers[columns].notna().any(axis=1)
