"""The fan: answers of the sample beside the sampling distribution of the figure."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from app.study.fan_curves import FanCurve, curve_of, factor_of
from app.study.figures import Figure
from app.study.number_format import NO_BREAK, FigureWords, write_count, write_number, write_plain
from app.study.pictures import Bar, Fan
from app.study.questions import QuestionKind
from app.study.sampling_plan import SamplingMethod
from app.study.sentences import (
    bar_text,
    describe,
    did_words,
    endless_words,
    value_words,
    words_of,
)
from app.study.study_data import StudyData

FloatArray = npt.NDArray[np.float64]
LeftPanel = tuple[tuple[Bar, ...], float, float, tuple[tuple[float, str], ...]]
MOST_BARS = 12
MOST_POINTS = 25  # of a scale that are drawn one by one
_CODED = (0.02, 0.95)  # parts of the answers below and above which the ends hold all
_ON_EDGE = 1e-9


def fan_of(data: StudyData, figure: Figure, *, step: float | None = None) -> Fan:
    """Return the fan of a figure, ready to draw.

    Parameters
    ----------
    data : StudyData
        The study.
    figure : Figure
        The figure; its answers are binned, no single answer can be told.
    step : float, optional
        The step of the column it stands in.
    """
    mark = data.study.decimal_mark
    text = describe(data, figure, step=step)
    words, endless = text.words, endless_words(figure, mark, step=step)
    value, low, high = _printed(figure, words, mark)
    curve = curve_of(data, figure)
    bars, axis_low, axis_high, ticks = _left_panel(figure, mark)
    finite_endless = figure.endless.interval != figure.estimate.interval
    return Fan(
        share=figure.request.counts_people,
        left_title=_left_title(figure, mark),
        left_note=_left_note(figure),
        right_title=_right_title(data),
        right_note="",
        axis_low=min(axis_low, *_per_unit(figure)),
        axis_high=max(axis_high, *_per_unit(figure)),
        ticks=ticks,
        bars=bars,
        factor=factor_of(figure),
        value=figure.estimate.value,
        low=figure.estimate.interval.low,
        high=figure.estimate.interval.high,
        value_text=value,
        low_text=low,
        high_text=high,
        curve=curve.points,
        steps=curve.steps,
        hatched=bool(curve.points) and _arms_agree(figure),
        endless_low=figure.endless.interval.low if finite_endless else None,
        endless_high=figure.endless.interval.high if finite_endless else None,
        endless_text=f"endless universe: {endless.between}",
        notes=_notes(figure, curve),
        alternative=text.sentence,
    )


def _printed(figure: Figure, words: FigureWords, mark: str) -> tuple[str, str, str]:
    """Return value, low and high as printed; an end that is the value itself says the same."""
    tail = f"{NO_BREAK}{words.unit}" if words.unit else ""
    value, interval = value_words(figure, words, mark), figure.estimate.interval
    low, high = f"{words.low}{tail}", f"{words.high}{tail}"
    if interval.low == figure.estimate.value:
        low = value
    if interval.high == figure.estimate.value:
        high = value
    return value, low, high


def _per_unit(figure: Figure) -> list[float]:
    """Return estimate and interval on the left axis: the ends of the bars may lie short of them."""
    estimate, factor = figure.estimate, factor_of(figure)
    value = estimate.value / factor
    if figure.request.counts_people or figure.scale.scale_answers:
        return [value]
    ends = [x / factor for x in (estimate.interval.low, estimate.interval.high)]
    least = 0.0 if figure.scale.natural_zero else -math.inf
    return [value, *(max(end, least) for end in ends if math.isfinite(end))]


def _right_title(data: StudyData) -> str:
    if data.plan.method in (SamplingMethod.QUOTA, SamplingMethod.NOT_SURE):
        return "If a chance sample like this were repeated"
    return "If the survey were repeated"


def _left_title(figure: Figure, mark: str) -> str:
    answered = write_count(figure.counts.answered, mark)
    if figure.request.counts_people:
        return f"{write_count(figure.counts.chosen, mark)} of {answered}"
    return f"What {answered} said"


def _left_note(figure: Figure) -> str:
    return did_words(figure) if figure.request.counts_people else "answers, %"


def _arms_agree(figure: Figure) -> bool:
    """Whether both arms of the interval are equal within one unit of the figure's own."""
    scale = 100.0 if figure.scale.share else 1.0
    interval, value = figure.estimate.interval, figure.estimate.value
    if not math.isfinite(interval.half_width):
        return False
    below, above = (value - interval.low) * scale, (interval.high - value) * scale
    return abs(below - above) <= words_of(figure, ".").step


def _notes(figure: Figure, curve: FanCurve) -> tuple[str, ...]:
    notes = [curve.note] if curve.note else []
    interval, value = figure.estimate.interval, figure.estimate.value
    if curve.points and math.isfinite(interval.half_width) and not _arms_agree(figure):
        way = "up" if interval.high - value > value - interval.low else "down"
        notes.append(
            "The curve assumes the universe looks exactly like the sample; the interval does not, "
            f"so it reaches further {way}."
        )
    return tuple(notes)


def _left_panel(figure: Figure, mark: str) -> LeftPanel:
    if figure.request.counts_people:
        ticks = tuple((p / 100, f"{p}{NO_BREAK}%") for p in (0, 25, 50, 75, 100))
        return (), 0.0, 1.0, ticks
    if figure.question.kind is not QuestionKind.SCALE:
        return _number_bars(figure.numbers, mark)
    low, high = figure.scale.low, figure.scale.high
    low, high = min(low, float(figure.numbers.min())), max(high, float(figure.numbers.max()))
    points = {*figure.numbers.tolist(), *(float(x) for x in np.arange(low, high + 0.5))}
    if len(points) > MOST_POINTS:
        width = _nice_width((high - low) / (MOST_BARS - 1))
        return _binned(figure.numbers, low, width, math.floor((high - low) / width), mark)
    return _scale_bars(figure.numbers, sorted(points), mark)


def _scale_bars(numbers: FloatArray, points: list[float], mark: str) -> LeftPanel:
    """Return one bar for each point of a scale."""
    bars = tuple(
        Bar(x - 0.4, x + 0.4, part, write_plain(x, mark), _bar_text(part, mark))
        for x, part in ((x, float((numbers == x).mean())) for x in points)
    )
    return bars, points[0] - 0.5, points[-1] + 0.5, ()


def _bar_text(part: float, mark: str) -> str:
    return bar_text(part, mark) if part else "0"


def _number_bars(numbers: FloatArray, mark: str) -> LeftPanel:
    """Return a histogram whose ends hold everything beyond them, so that no one stands out."""
    low, high = (float(x) for x in np.quantile(numbers, _CODED))
    width = _nice_width((high - low) / (MOST_BARS - 1) if high > low else abs(low) / 5)
    start = math.floor(low / width) * width
    last = min(MOST_BARS, max(1, math.ceil((high - start) / width)))
    while last > 1 and numbers.max() < start + last * width:
        last -= 1
    return _binned(numbers, start, width, last, mark)


def _binned(numbers: FloatArray, start: float, width: float, last: int, mark: str) -> LeftPanel:
    """Return bars 0 to last of one width; the first and the last also hold what lies beyond."""
    places = np.clip(np.floor((numbers - start) / width + _ON_EDGE), 0, last).astype(int)
    parts = np.bincount(places, minlength=last + 1) / len(numbers)
    bars = tuple(
        Bar(start + i * width, start + (i + 1) * width, float(part), "", _bar_text(part, mark))
        for i, part in enumerate(parts)
    )
    end = start + (last + 1) * width
    step = float(10.0 ** math.floor(math.log10(width) + _ON_EDGE))
    if not math.isclose(width / step, round(width / step)):  # 2.5 needs one place more
        step /= 10
    edges = [start + i * width for i in range(0, last, max(1, (last + 1) // 5))]
    ticks = [(edge, write_number(edge, step, mark)) for edge in edges]
    if numbers.min() < start:
        ticks[0] = (start + width, f"under {write_number(start + width, step, mark)}")
        ticks = [ticks[0], *(tick for tick in ticks[1:] if tick[0] > start + 1.5 * width)]
    above = start + last * width
    if numbers.max() >= end:
        ticks.append((above, f"{write_number(above, step, mark)} and more"))
    elif all(edge < end - 1.5 * width for edge, _ in ticks):
        ticks.append((end, write_number(end, step, mark)))
    return bars, start, end, tuple(ticks)


def _nice_width(rough: float) -> float:
    """Return the next larger of 1, 2, 2.5, 5 or 10 times a power of ten."""
    if not rough > 0:
        return 1.0
    power = 10.0 ** math.floor(math.log10(rough))
    nice = (m * power for m in (1, 2, 2.5, 5, 10))
    return float(next((width for width in nice if width >= rough * (1 - _ON_EDGE)), 10 * power))
