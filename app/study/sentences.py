"""What is said about a figure: title, sentence, base line. Words only, all numbers formatted."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

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

_ANYBODY = "respondents"  # the unit of a study that has not named its own
_ROUNDING = 1e-9
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


def words_of(
    figure: Figure, decimal_mark: str, *, step: float | None = None, scale: int | None = None
) -> FigureWords:
    """Return value and interval of a figure as printed, in a column with its step and scale."""
    estimate = figure.estimate
    return figure_words(
        estimate.value,
        estimate.interval.low,
        estimate.interval.high,
        share=figure.scale.share,
        decimal_mark=decimal_mark,
        step=step,
        scale=scale,
    )


def endless_words(figure: Figure, decimal_mark: str, *, step: float | None = None) -> FigureWords:
    """Return the interval from an endless universe, in the same step as the figure."""
    endless = figure.endless
    return figure_words(
        endless.value,
        endless.interval.low,
        endless.interval.high,
        share=figure.scale.share,
        decimal_mark=decimal_mark,
        step=step or words_of(figure, decimal_mark).step,
    )


def title_of(figure: Figure, decimal_mark: str = ".") -> str:
    """Return what the number is, in a few words."""
    request = figure.request
    noun = _NOUNS[request.statistic]
    if request.counts_people:
        did = did_words(figure)
        return f"in all {did}" if request.statistic is Statistic.TOTAL else did
    if figure.scale.scale_answers:
        low = write_plain(figure.scale.low, decimal_mark)
        return f"{noun}, on a scale from {low} to {write_plain(figure.scale.high, decimal_mark)}"
    return noun


def did_words(figure: Figure) -> str:
    """Return what the people counted did: "chose “A” or “B”"."""
    question = figure.question
    labels = " or ".join(
        f"\u201c{question.label_of(code)}\u201d" for code in figure.request.answers
    )
    verb = "chose" if question.kind is QuestionKind.SEVERAL else "answered"
    return f"{verb} {labels}"


def who_of(data: StudyData, figure: Figure) -> str:
    """Return who the figure is about: "all garden centres", or the group."""
    if figure.group is None:
        return _all_of(data.plan)
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
        whole = write_count(universe, mark)
    else:
        whole = f"{write_count(counts.asked, mark)} asked"
    line = f"{write_count(counts.answered, mark)} answered of {whole}"
    if figure.group is not None:
        line += " in this group"
    if figure.request.missing_counted and figure.request.counts_people:
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
        everyone = f"{_all_of(plan)} in the group \u201c{label}\u201d"
    if plan.method is SamplingMethod.QUOTA:
        return f"If these answers stand for {everyone}, which is an assumption,"
    if plan.method is SamplingMethod.NOT_SURE:
        return f"If people were drawn by chance, which is not known, and {everyone} had answered,"
    if plan.method is SamplingMethod.EVERYBODY:
        return f"Had {everyone} answered, and were the silent ones like those who did,"
    return f"Had {everyone} answered,"


def _all_of(plan: SamplingPlan) -> str:
    """Return all units without their number: respondents have all answered, so "everybody"."""
    return "everybody" if plan.unit_many == _ANYBODY else f"all {plan.unit_many}"


def everyone_words(plan: SamplingPlan, decimal_mark: str) -> str:
    """Return the universe in words: "all 1,184 garden centres"."""
    size = known_universe(plan)
    if size is None:
        return _all_of(plan)
    unit = "people" if plan.unit_many == _ANYBODY else plan.unit_many
    return f"all {write_count(size, decimal_mark)}{NO_BREAK}{unit}"


def _sentence(data: StudyData, figure: Figure, words: FigureWords) -> str:
    estimate, noun = figure.estimate, _noun(figure)
    if not math.isfinite(estimate.half_width):
        return "There are too few answers to say how far this may be from the truth."
    if has_no_width(figure):
        return _without_width(figure, noun, words, data.study.decimal_mark)
    lead, sure = _condition(data, figure), sureness(figure.request.confidence)
    return f"{lead} the {noun} would {sure} {_reach(figure, words)}."


def _noun(figure: Figure) -> str:
    if figure.request.statistic is Statistic.TOTAL and figure.request.counts_people:
        return f"number that {did_words(figure)}"
    return _NOUNS[figure.request.statistic]


def has_no_width(figure: Figure) -> bool:
    """Whether both ends of the interval are the figure itself."""
    estimate = figure.estimate
    return estimate.half_width <= _ROUNDING * abs(estimate.value)


def _without_width(figure: Figure, noun: str, words: FigureWords, decimal_mark: str) -> str:
    estimate = figure.estimate
    if math.isinf(estimate.equivalent_base):  # nobody is left whose answer is not known
        whom = "Everybody" if figure.group is None else "Everybody in this group"
        return f"{whom} was asked and answered: the {noun} is {words.full}, without sampling error."
    if figure.request.statistic is Statistic.MEDIAN:
        return (
            f"The median is {words.full}; so many gave this answer that the interval begins and "
            "ends with it."
        )
    if np.ptp(figure.numbers) == 0:
        answered = write_count(figure.counts.answered, decimal_mark)
        return (
            f"All {answered} who answered said {words.full}, so their answers do not show how far "
            f"the {noun} may be from the truth."
        )
    return f"The {noun} is {words.full}: the sampling plan itself fixes it, so it cannot vary."


def _reach(figure: Figure, words: FigureWords) -> str:
    """Return where the figure would lie; an end nobody can tell from none or all is left out."""
    tail = f"{NO_BREAK}{words.unit}" if words.unit else ""
    none, everyone = _ends_open(figure, words)
    if none and not everyone:
        return f"be no more than {words.high}{tail}"
    if everyone and not none:
        return f"be no less than {words.low}{tail}"
    if words.low == words.high:
        return f"be about {words.low}{tail}"
    return f"lie between {words.low} and {words.high}{tail}"


def _ends_open(figure: Figure, words: FigureWords) -> tuple[bool, bool]:
    """Whether the interval of a share begins at nobody, and whether it ends at everybody."""
    if not figure.scale.share:
        return False, False
    interval = figure.estimate.interval
    none = interval.low <= 0 or words.low.startswith("under")
    return none, interval.high >= 1 or words.high.startswith("over")


def value_words(figure: Figure, words: FigureWords, decimal_mark: str) -> str:
    """Return the big number: "42 %"; "0 of 40" or "40 of 40" where all did the same."""
    chosen, answered = figure.counts.chosen, figure.counts.answered
    if figure.scale.share and chosen in (0, answered):
        return f"{write_count(chosen, decimal_mark)} of {write_count(answered, decimal_mark)}"
    return words.full


def between_words(figure: Figure, words: FigureWords) -> str:
    """Return the interval in a table: "38 to 46 %", "up to 9 %" where nobody chose the answer."""
    counts = figure.counts
    if not figure.scale.share or not math.isfinite(figure.estimate.half_width):
        return words.between
    if has_no_width(figure) and math.isinf(figure.estimate.equivalent_base):
        return words.between
    if counts.chosen == 0:
        return f"up to {words.high}{NO_BREAK}{words.unit}"
    if counts.chosen == counts.answered:
        return f"at least {words.low}{NO_BREAK}{words.unit}"
    return words.between


def _headline(data: StudyData, figure: Figure, words: FigureWords) -> str:
    request, question, unit = figure.request, figure.question, data.plan.unit_many
    place, text = "", question.text.rstrip(" ?.:")
    if figure.group is not None:
        place = f" ({figure.group.label_of(request.group_answer)})"
    if request.statistic is Statistic.TOTAL and request.counts_people:
        return f"{words.full} {unit}{place} {did_words(figure)}: {text}"
    if figure.scale.share:
        return f"{_part_words(data, figure, words)} {unit}{place} {did_words(figure)}: {text}"
    return f"{_NOUNS[request.statistic].capitalize()} {words.full}{place}: {text}"


def _part_words(data: StudyData, figure: Figure, words: FigureWords) -> str:
    """Return a share in words only where the words are true to a tenth, else in figures."""
    answered, mark = figure.counts.answered, data.study.decimal_mark
    if figure.counts.chosen in (0, answered):
        amount = "None" if figure.counts.chosen == 0 else "All"
        return f"{amount} of {write_count(answered, mark)}"
    exact = {50.0: "Half", 25.0: "A quarter", 75.0: "Three quarters"}
    amount = exact.get(round(figure.estimate.value * 100, 1), words.full)
    return f"{amount[:1].upper()}{amount[1:]} of"


def bar_text(part: float, decimal_mark: str) -> str:
    """Return the percentage at the end of a bar."""
    return write_share(part, decimal_mark)
