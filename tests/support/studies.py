"""Tiny studies built in code, and the sample study with its proposals accepted."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from datetime import UTC, datetime
from functools import cache

import numpy as np
import pandas as pd

from app.intake import read_fieldwork_file
from app.study.question_guessing import guess_questions
from app.study.questions import Answer, MissingCode, MissingReason, Question, QuestionKind
from app.study.sample_studies import garden_centres
from app.study.sampling_plan import SamplingMethod, SamplingPlan, StratumCount
from app.study.study import HouseLimit, KeptFigure, Study
from app.study.study_data import StudyData, prepare_study

MOMENT = datetime(2026, 3, 12, 9, 52, tzinfo=UTC)
DONT_KNOW = MissingCode("99", MissingReason.DONT_KNOW)
REFUSED = MissingCode("98", MissingReason.REFUSED)


def a_study(decimal_mark: str = ".", limit: HouseLimit | None = None) -> Study:
    return Study("s1", "Kiosks", MOMENT, MOMENT, 1, decimal_mark, limit or HouseLimit())


def question(
    key: str,
    kind: QuestionKind,
    codes: Sequence[str] = (),
    missing: Sequence[MissingCode] = (),
    text: str = "",
) -> Question:
    several = kind is QuestionKind.SEVERAL
    return Question(
        key,
        tuple(codes) if several else (key,),
        kind,
        text or f"Question {key}?",
        tuple(Answer(code, code) for code in codes),
        tuple(missing),
    )


def scale(key: str = "Q1", low: int = 0, high: int = 10) -> Question:
    codes = [str(i) for i in range(low, high + 1)]
    return question(key, QuestionKind.SCALE, codes, (DONT_KNOW, REFUSED))


def choice(key: str, *codes: str, missing: Sequence[MissingCode] = ()) -> Question:
    return question(key, QuestionKind.CHOICE, codes, missing)


def number(key: str = "Q5") -> Question:
    return question(key, QuestionKind.NUMBER)


def chance(size: int | None = None, **more: object) -> SamplingPlan:
    """A confirmed plan: kiosks drawn by chance from a list."""
    plan = SamplingPlan(
        universe="all kiosks",
        unit_one="kiosk",
        unit_many="kiosks",
        universe_size=size,
        method=SamplingMethod.CHANCE,
        provisional=False,
    )
    return replace(plan, **more)


def strata(**sizes: int | None) -> tuple[StratumCount, ...]:
    return tuple(StratumCount(label, size) for label, size in sizes.items())


def data_of(
    columns: dict[str, object],
    questions: Sequence[Question],
    plan: SamplingPlan | None = None,
    *,
    decimal_mark: str = ".",
    limit: HouseLimit | None = None,
) -> StudyData:
    answers = pd.DataFrame(columns)
    return prepare_study(a_study(decimal_mark, limit), tuple(questions), plan or chance(), answers)


def yes_no(yes: int, no: int, plan: SamplingPlan | None = None, **more: object) -> StudyData:
    """One question, Yes or No."""
    return data_of({"Q4": ["Yes"] * yes + ["No"] * no}, [choice("Q4", "Yes", "No")], plan, **more)


def ratings(values: Sequence[float], plan: SamplingPlan | None = None, **more: object) -> StudyData:
    """One scale from 0 to 10."""
    return data_of({"Q1": np.asarray(values, dtype=float)}, [scale()], plan, **more)


def kept(request: object, *, headline: str = "", comment: str = "", place: int = 0) -> KeptFigure:
    return KeptFigure(f"k{place}", "s1", request, place, headline, comment, 1)


@cache
def garden_data() -> StudyData:
    """The sample study, every proposal accepted."""
    sample = garden_centres()
    read = read_fieldwork_file(sample.files[0].read_bytes(), file_name=sample.files[0].name)
    guessed = guess_questions(read.answers, read.question_texts)
    settled = tuple(q.settled(accept=True) if q.needs_you else q for q in guessed)
    return prepare_study(a_study(), settled, sample.plan, read.answers)
