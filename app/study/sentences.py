"""What is said about a figure: title, sentence, base line. Words only, all numbers formatted."""

from __future__ import annotations

import math
from dataclasses import dataclass

from app.study.figure_requests import Statistic
from app.study.figures import Figure
from app.study.number_format import (
    NO_BREAK,
    FigureWords,
    figure_words,
    write_count,
    write_plain,
    write_share,
)
from app.study.plan_checks import known_universe
from app.study.questions import QuestionKind
from app.study.sampling_plan import SamplingMethod, SamplingPlan
from app.study.study_data import StudyData

_NOUNS = {
    Statistic.SHARE: "share",
    Statistic.AVERAGE: "average",
    Statistic.TOTAL: "total",
    Statistic.MEDIAN: "median",
}


@dataclass(frozen=True, slots=True)
class FigureText:
    """A figure in words.

    Parameters
    ----------
    words : FigureWords
        Value and interval as printed.
    title : str
        What the number is: "average, 0 to 10".
    who : str
        "all garden centres", or the group.
    sentence : str
        What a client can repeat.
    base_line : str
        "395 answered of 1,184; 12 said don't know".
    counts_like : str
        "counts like 591 answers from an endless universe", or "".
    headline : str
        Proposed from the sentence.
    """

    words: FigureWords
    title: str
    who: str
    sentence: str
    base_line: str
    counts_like: str
    headline: str


def describe(data: StudyData, figure: Figure, *, step: float | None = None) -> FigureText:
    """Put a figure into words.

    Parameters
    ----------
    data : StudyData
        The study it belongs to.
    figure : Figure
        The figure.
    step : float, optional
        The step of the column it stands in.
    """
    mark = data.study.decimal_mark
    words = words_of(figure, mark, step=step)
    return FigureText(
        words,
        title_of(figure, mark),
        who_of(data, figure),
        _sentence(data, figure, words),
        base_line(data, figure),
        _counts_like(figure, mark),
        _headline(data, figure, words),
    )


def words_of(figure: Figure, decimal_mark: str, *, step: float | None = None) -> FigureWords:
    """Return value and interval of a figure as printed."""
    estimate = figure.estimate
    return figure_words(
        estimate.value,
        estimate.interval.low,
        estimate.interval.high,
        share=figure.scale.share,
        decimal_mark=decimal_mark,
        step=step,
    )


def endless_words(figure: Figure, decimal_mark: str) -> FigureWords:
    """Return the interval from an endless universe, in the same step as the figure."""
    endless = figure.endless
    return figure_words(
        endless.value,
        endless.interval.low,
        endless.interval.high,
        share=figure.scale.share,
        decimal_mark=decimal_mark,
        step=words_of(figure, decimal_mark).step,
    )


def title_of(figure: Figure, decimal_mark: str = ".") -> str:
    """Return what the number is, in a few words."""
    request, question = figure.request, figure.question
    noun = _NOUNS[request.statistic]
    if request.answers:
        labels = " or ".join(f"\u201c{question.label_of(code)}\u201d" for code in request.answers)
        verb = "chose" if question.kind is QuestionKind.SEVERAL else "answered"
        return (
            f"in all {verb} {labels}"
            if request.statistic is Statistic.TOTAL
            else f"{verb} {labels}"
        )
    if figure.scale.scale_answers:
        low = write_plain(figure.scale.low, decimal_mark)
        return f"{noun}, on a scale from {low} to {write_plain(figure.scale.high, decimal_mark)}"
    return noun


def who_of(data: StudyData, figure: Figure) -> str:
    """Return who the figure is about: "all garden centres", or the group."""
    if figure.group is None:
        return f"all {data.plan.unit_many}"
    return f"{figure.group.text}: {figure.group.label_of(figure.request.group_answer)}"


def group_label(figure: Figure) -> str:
    """Return the group in a table: its answer, or "all"."""
    if figure.group is None:
        return "all"
    return figure.group.label_of(figure.request.group_answer)


def base_line(data: StudyData, figure: Figure) -> str:
    """Return the line under a figure: who answered, of how many, and why others did not."""
    mark, counts = data.study.decimal_mark, figure.counts
    universe = known_universe(data.plan)
    if figure.group is None and counts.asked == counts.in_group and universe is not None:
        asked = universe
    else:
        asked = counts.asked
    line = f"{write_count(counts.answered, mark)} answered of {write_count(asked, mark)}"
    if figure.group is not None:
        line += " in this group"
    if figure.request.missing_counted and not counts.reasons:
        line += "; don\u2019t know and refused are counted in"
    said = [
        f"{write_count(count, mark)} {_reason_words(reason)}" for reason, count in counts.reasons
    ]
    return "; ".join([line, *said])


def _reason_words(reason: str) -> str:
    return {
        "don't know": "said don\u2019t know",
        "refused": "refused",
        "no answer": "gave no answer",
    }.get(reason, reason)


def _counts_like(figure: Figure, decimal_mark: str) -> str:
    like = figure.estimate.equivalent_base
    if not math.isfinite(like) or like <= 0:
        return ""
    return f"counts like {write_count(like, decimal_mark)} answers from an endless universe"


def sureness(confidence: float) -> str:
    """Return how sure a level is, in words."""
    if confidence >= 0.985:
        return "almost certainly"
    return "very likely" if confidence >= 0.925 else "probably"


def _condition(data: StudyData, figure: Figure) -> str:
    """Return the opening of the sentence: what the interval is about."""
    plan, mark = data.plan, data.study.decimal_mark
    everyone = everyone_words(plan, mark)
    if figure.group is not None:
        label = figure.group.label_of(figure.request.group_answer)
        everyone = f"all {plan.unit_many} in the group \u201c{label}\u201d"
    if plan.method is SamplingMethod.QUOTA:
        return f"If these answers stand for {everyone}, which is an assumption,"
    if plan.method is SamplingMethod.EVERYBODY:
        return f"Had {everyone} answered, and the silent ones resemble those who did,"
    return f"Had {everyone} answered,"


def everyone_words(plan: SamplingPlan, decimal_mark: str) -> str:
    """Return the universe in words: "all 1,184 garden centres"."""
    size = known_universe(plan)
    if size is None:
        return f"all {plan.unit_many}" if plan.unit_many != "respondents" else "everybody"
    return f"all {write_count(size, decimal_mark)}{NO_BREAK}{plan.unit_many}"


def _sentence(data: StudyData, figure: Figure, words: FigureWords) -> str:
    estimate, noun = figure.estimate, _NOUNS[figure.request.statistic]
    if not math.isfinite(estimate.half_width):
        return "There are too few answers to say how far this may be from the truth."
    if estimate.half_width == 0:
        return (
            f"Everybody was asked and answered: the {noun} is {words.full}, without sampling error."
        )
    lead, sure = _condition(data, figure), sureness(figure.request.confidence)
    if figure.scale.share and figure.counts.chosen == 0:
        return f"{lead} the share would {sure} be no more than {_tail(words)}."
    return f"{lead} the {noun} would {sure} lie between {_range(words)}."


def _without_width(figure: Figure, noun: str, words: FigureWords) -> str:
    if figure.estimate.base >= figure.estimate.weighted_base - 0.5:
        return f"Everybody answered: the {noun} is {words.full}, without sampling error."
    if figure.request.statistic is Statistic.MEDIAN:
        return (
            f"The middle answer is {words.full}; so many gave it that more answers would hardly "
            "move it."
        )
    return f"The {noun} is {words.full}: the sampling plan itself fixes it, so it cannot vary."


def _range(words: FigureWords) -> str:
    tail = f"{NO_BREAK}{words.unit}" if words.unit else ""
    return f"{words.low} and {words.high}{tail}"


def _tail(words: FigureWords) -> str:
    return f"{words.high}{NO_BREAK}{words.unit}"


def value_words(figure: Figure, words: FigureWords, decimal_mark: str) -> str:
    """Return the big number: "42 %", or "0 of 40" where nobody chose the answer."""
    if figure.scale.share and figure.counts.chosen == 0:
        return f"0 of {write_count(figure.counts.answered, decimal_mark)}"
    return words.full


def between_words(figure: Figure, words: FigureWords) -> str:
    """Return the interval in a table: "38 to 46 %", "up to 9 %" for a true zero."""
    if (
        figure.scale.share
        and figure.counts.chosen == 0
        and math.isfinite(figure.estimate.half_width)
    ):
        return f"up to {_tail(words)}"
    return words.between


def _headline(data: StudyData, figure: Figure, words: FigureWords) -> str:
    request, question, unit = figure.request, figure.question, data.plan.unit_many
    place = ""
    if figure.group is not None:
        place = f" ({figure.group.label_of(request.group_answer)})"
    if figure.scale.share:
        labels = " or ".join(f"\u201c{question.label_of(code)}\u201d" for code in request.answers)
        verb = "chose" if question.kind is QuestionKind.SEVERAL else "answered"
        amount = _part_words(figure.estimate.value, words)
        return f"{amount} of {unit}{place} {verb} {labels}"
    text = question.text.rstrip(" ?.:")
    noun = _NOUNS[request.statistic].capitalize()
    return f"{noun}{place} {words.full}: {text}"


def _part_words(part: float, words: FigureWords) -> str:
    """Return a share in words only where the words are true to a point, else in figures."""
    exact = {50: "Half", 25: "A quarter", 75: "Three quarters"}
    near = round(part * 100, 1)
    if near in exact:
        return exact[int(near)]
    return words.full if not words.full.startswith("under") else words.full.capitalize()


def bar_text(part: float, decimal_mark: str) -> str:
    """Return the percentage at the end of a bar."""
    return write_share(part, decimal_mark)
