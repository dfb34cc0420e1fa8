"""What stands in the way of publishing, beyond the width of an interval."""

from __future__ import annotations

from dataclasses import dataclass

from app.study.figure_requests import FigureRequest
from app.study.sampling_plan import SamplingMethod
from app.study.study_data import StudyData


@dataclass(frozen=True, slots=True)
class Obstacle:
    """One reason not to publish yet, with the screen that mends it.

    Parameters
    ----------
    screen : str
        "plan" or "questions".
    question : str
        Key of the question concerned; "" for the plan.
    sentence : str
        What is open and what to do.
    """

    screen: str
    question: str
    sentence: str


def obstacles_of(data: StudyData, requests: tuple[FigureRequest, ...]) -> tuple[Obstacle, ...]:
    """Return every obstacle to publishing these figures, each once.

    Parameters
    ----------
    data : StudyData
        The study.
    requests : tuple of FigureRequest
        The kept figures.
    """
    found = [*_plan_obstacles(data)]
    for request in requests:
        found += _question_obstacles(data, request)
    return tuple(dict.fromkeys(found))


def _plan_obstacles(data: StudyData) -> list[Obstacle]:
    plan = data.plan
    if plan.provisional:
        return [Obstacle("plan", "", "The sampling plan is provisional: say how people got in.")]
    found = [
        Obstacle("plan", "", problem.sentence) for problem in data.built.problems if problem.blocks
    ]
    if plan.method is SamplingMethod.NOT_SURE:
        found.append(
            Obstacle(
                "plan",
                "",
                "How people got in is not known: figures on \u201cnot sure\u201d cannot be "
                "published. Ask who drew the sample, then choose a method.",
            )
        )
    return found


def _question_obstacles(data: StudyData, request: FigureRequest) -> list[Obstacle]:
    keys = (request.question, request.group_question, request.split_by)
    found = []
    for key in dict.fromkeys(k for k in keys if k):
        question = data.question(key)
        if question is None:
            found.append(
                Obstacle(
                    "questions", key, f"{key} is not in the current file: take the figure out."
                )
            )
        elif not question.usable:
            found.append(
                Obstacle(
                    "questions",
                    key,
                    f"\u201c{question.text}\u201d is set aside or holds no answers to count: "
                    "use it again, or take the figure out.",
                )
            )
        elif question.needs_you:
            found.append(
                Obstacle(
                    "questions",
                    key,
                    f"\u201c{question.text}\u201d: {question.proposals[0].evidence} Accept or "
                    "turn down the proposal first.",
                )
            )
    return found
