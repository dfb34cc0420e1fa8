"""A figure request as it stands in the address, and back."""

from __future__ import annotations

import json

from app.study.figure_requests import FigureRequest, Statistic
from app.study.figures import default_request, statistics_of, takes_answers
from app.study.questions import Question, QuestionKind
from app.study.study_data import StudyData
from app.widgets import address
from app.widgets.plain_text import shortened

LEVELS = (0.9, 0.95, 0.99)
SHARE_METHODS = ("wilson", "clopper_pearson", "korn_graubard", "wald")


def first_question(data: StudyData) -> Question | None:
    """Return the question a study opens with: one that needs nobody, a scale or one answer."""
    drawn_by = data.plan.strata_column
    usable = [q for q in data.questions if q.usable and not q.needs_you and q.key != drawn_by]
    order = (QuestionKind.SCALE, QuestionKind.SEVERAL, QuestionKind.CHOICE, QuestionKind.NUMBER)
    for kind in order:
        for question in usable:
            if question.kind is kind:
                return question
    return next((q for q in data.questions if q.usable), None)


def to_address(request: FigureRequest) -> dict[str, str]:
    """Return the values of the address that open a figure."""
    answers = request.answers
    return {
        "q": request.question,
        "s": request.statistic.value,
        "a": answers[0] if len(answers) == 1 else json.dumps(answers) if answers else "",
        "g": request.group_question,
        "ga": request.group_answer,
        "by": request.split_by,
        "level": "" if request.confidence == 0.95 else f"{request.confidence:g}",
        "method": "" if request.method == "wilson" else request.method,
        "dk": "1" if request.missing_counted else "",
    }


def from_address(data: StudyData) -> FigureRequest | None:
    """Return the figure in the address, mended where it names something that is not there."""
    question = data.question(address.read("q")) or first_question(data)
    if question is None:
        return None
    start = default_request(question)
    statistic = _statistic(question, start.statistic)
    is_group = bool(data.question(address.read("g")) and address.read("ga"))
    return FigureRequest(
        question=question.key,
        statistic=statistic,
        answers=_answers(question, statistic, start),
        group_question=address.read("g") if is_group else "",
        group_answer=address.read("ga") if is_group else "",
        confidence=_level(),
        method=_method(),
        missing_counted=address.read("dk") == "1" and takes_answers(question, statistic),
        split_by=address.read("by") if data.question(address.read("by")) else "",
    )


def mended_words(request: FigureRequest) -> str:
    """Return one sentence on what the address names that is not there; "" where all is."""
    named = {name: address.read(name) for name in ("q", "s", "a", "g", "level", "method")}
    listed = set(_list_of(named["a"]))
    is_answered = (
        not request.answers
        or named["a"] in request.answers
        or (bool(listed) and listed <= set(request.answers))
    )
    there = {
        "q": request.question,
        "s": request.statistic.value,
        "a": named["a"] if is_answered else "",
        "g": request.group_question,
        "level": f"{request.confidence:g}",
        "method": request.method,
    }
    words = {"q": "question", "s": "figure", "a": "answer", "g": "group"}
    gone = [
        f"{words.get(name, name)} {shortened(value)}"
        for name, value in named.items()
        if value and value != there[name]
    ]
    if not gone:
        return ""
    return (
        f"The address names what is not there ({', '.join(gone)}), so another figure is shown: "
        "choose the one you want."
    )


def _statistic(question: Question, default: Statistic) -> Statistic:
    named = address.read("s")
    return next((s for s in statistics_of(question) if s.value == named), default)


def _answers(question: Question, statistic: Statistic, start: FigureRequest) -> tuple[str, ...]:
    if not takes_answers(question, statistic):
        return ()
    codes = [a.code for a in question.answers]
    text = address.read("a")
    named = _list_of(text) if text.startswith("[") and text not in codes else (text,)
    found = tuple(code for code in named if code in codes)
    return found or start.answers or tuple(codes[:1])


def _list_of(text: str) -> tuple[str, ...]:
    try:
        values = json.loads(text)
    except (ValueError, RecursionError):
        return ()
    return tuple(str(v) for v in values) if isinstance(values, list) else ()


def _level() -> float:
    try:
        level = float(address.read("level", "0.95"))
    except ValueError:
        return 0.95
    return level if level in LEVELS else 0.95


def _method() -> str:
    named = address.read("method", "wilson")
    return named if named in SHARE_METHODS else "wilson"
