"""The fan: answers of the sample beside the sampling distribution of the figure."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from app.study.figure_requests import Statistic
from app.study.figures import Figure
from app.study.number_format import NO_BREAK, step_for, write_count, write_number, write_plain
from app.study.pictures import Bar, CurvePoint, Fan
from app.study.questions import QuestionKind
from app.study.sampling_plan import SamplingMethod
from app.study.sentences import bar_text, describe, endless_words, title_of, words_of
from app.study.study_data import StudyData
from estimators import mean_distribution, plug_in_universe

FloatArray = npt.NDArray[np.float64]
CURVE_POINTS = 240
MOST_BARS = 12
_T_NOTE = "The curve is the t distribution with the standard error of this sampling plan."
REACH = 4.5  # standard errors drawn on each side


def fan_of(data: StudyData, figure: Figure) -> Fan:
    """Return the fan of a figure, ready to draw.

    Parameters
    ----------
    data : StudyData
        The study.
    figure : Figure
        The figure; its answers are binned, no single answer can be told.
    """
    mark = data.study.decimal_mark
    words, endless = words_of(figure, mark), endless_words(figure, mark)
    curve, steps, curve_note = _curve(data, figure)
    bars, axis_low, axis_high, ticks = _left_panel(figure, mark)
    finite_endless = figure.endless.interval != figure.estimate.interval
    return Fan(
        share=figure.scale.share,
        left_title=_left_title(figure, mark),
        left_note=_left_note(figure),
        right_title="If the survey were repeated",
        right_note="",
        axis_low=axis_low,
        axis_high=axis_high,
        ticks=ticks,
        bars=bars,
        factor=_factor(figure),
        value=figure.estimate.value,
        low=figure.estimate.interval.low,
        high=figure.estimate.interval.high,
        value_text=words.full,
        low_text=f"{words.low}{_tail(words.unit)}",
        high_text=f"{words.high}{_tail(words.unit)}",
        curve=curve,
        steps=steps,
        hatched=_arms_agree(figure, words.step),
        endless_low=figure.endless.interval.low if finite_endless else None,
        endless_high=figure.endless.interval.high if finite_endless else None,
        endless_text=f"endless universe: {endless.between}",
        notes=_notes(figure, words.step, curve_note),
        alternative=describe(data, figure).sentence,
    )


def _tail(unit: str) -> str:
    return f"{NO_BREAK}{unit}" if unit else ""


def _left_title(figure: Figure, mark: str) -> str:
    answered = write_count(figure.counts.answered, mark)
    if figure.scale.share or figure.request.answers:
        return f"{write_count(figure.counts.chosen, mark)} of {answered}"
    return f"What {answered} said"


def _left_note(figure: Figure) -> str:
    return title_of(figure) if figure.scale.share else f"answers, {NO_BREAK}%".replace(NO_BREAK, "")


def _factor(figure: Figure) -> float:
    if figure.request.statistic is not Statistic.TOTAL:
        return 1.0
    return figure.estimate.weighted_base


def _arms_agree(figure: Figure, step: float) -> bool:
    scale = 100.0 if figure.scale.share else 1.0
    interval, value = figure.estimate.interval, figure.estimate.value
    if not math.isfinite(interval.half_width):
        return False
    below, above = (value - interval.low) * scale, (interval.high - value) * scale
    return abs(below - above) <= step


def _notes(figure: Figure, step: float, curve_note: str) -> tuple[str, ...]:
    notes = [curve_note] if curve_note else []
    interval, value = figure.estimate.interval, figure.estimate.value
    if math.isfinite(interval.half_width) and not _arms_agree(figure, step):
        way = "up" if interval.high - value > value - interval.low else "down"
        notes.append(
            "The curve assumes the universe looks exactly like the sample; the interval does not, "
            f"so it reaches further {way}."
        )
    return tuple(notes)


def _curve(data: StudyData, figure: Figure) -> tuple[tuple[CurvePoint, ...], bool, str]:
    """Return the sampling distribution, whether drawn as steps, and the line that names it."""
    error = figure.estimate.standard_error
    if not math.isfinite(error) or error <= 0:
        return (), False, "The answers do not vary, so there is no curve to draw."
    if _is_simple(data) and figure.request.statistic is not Statistic.MEDIAN:
        return _exact_curve(data, figure)
    return _t_curve(figure), False, _T_NOTE


def _is_simple(data: StudyData) -> bool:
    plan = data.plan
    if plan.method in (SamplingMethod.GROUPS, SamplingMethod.QUOTA):
        return False
    return data.built.fallback or not (plan.strata_column or plan.weights_column)


def _exact_curve(data: StudyData, figure: Figure) -> tuple[tuple[CurvePoint, ...], bool, str]:
    responses, estimate = figure.numbers, figure.estimate
    base = len(responses)
    finite = data.built.design.population_size is not None and not data.plan.replacement
    size = max(base, round(estimate.weighted_base)) if finite else None
    universe = plug_in_universe(responses, size)
    law = mean_distribution(universe, base, replacement=size is None)
    factor = _factor(figure)
    stretch = estimate.standard_error / (law.standard_deviation * factor)
    support = estimate.value + (law.support - law.mean) * factor * stretch
    note = (
        "The curve is the exact distribution for a universe that looks like the sample, "
        "stretched to the standard error."
    )
    steps = len(law.support) <= CURVE_POINTS or figure.scale.share
    return _binned(support, law.probabilities, estimate.value, estimate.standard_error), steps, note


def _binned(
    support: FloatArray, chances: FloatArray, center: float, error: float
) -> tuple[CurvePoint, ...]:
    """Return at most CURVE_POINTS points within REACH standard errors, chances summed by bin."""
    inside = np.abs(support - center) <= REACH * error
    support, chances = support[inside], chances[inside]
    if len(support) > CURVE_POINTS:
        gap = (support[-1] - support[0]) / (len(support) - 1)
        width = max(1, math.ceil(len(support) / CURVE_POINTS))
        bins = np.floor((support - support[0]) / gap + 0.5).astype(int) // width
        chances = np.bincount(bins, weights=chances)
        support = support[0] + (np.arange(len(chances)) * width + (width - 1) / 2) * gap
    return tuple(CurvePoint(float(v), float(h)) for v, h in zip(support, chances, strict=True))


def _t_curve(figure: Figure) -> tuple[CurvePoint, ...]:
    estimate = figure.estimate
    freedom = estimate.degrees_of_freedom
    t = np.linspace(-REACH, REACH, 121)
    if math.isfinite(freedom) and freedom > 0:
        heights = (1 + t**2 / freedom) ** (-(freedom + 1) / 2)
    else:
        heights = np.exp(-(t**2) / 2)
    values = estimate.value + t * estimate.standard_error
    if figure.scale.share:
        inside = (values >= 0) & (values <= 1)
        values, heights = values[inside], heights[inside]
    return tuple(CurvePoint(float(v), float(h)) for v, h in zip(values, heights, strict=True))


def _left_panel(
    figure: Figure, mark: str
) -> tuple[tuple[Bar, ...], float, float, tuple[tuple[float, str], ...]]:
    if figure.scale.share or figure.request.answers:
        ticks = tuple((p / 100, f"{p}{NO_BREAK}%") for p in (0, 25, 50, 75, 100))
        return (), 0.0, 1.0, ticks
    if figure.question.kind is QuestionKind.SCALE:
        return _scale_bars(figure, mark)
    return _number_bars(figure.numbers, mark)


def _scale_bars(
    figure: Figure, mark: str
) -> tuple[tuple[Bar, ...], float, float, tuple[tuple[float, str], ...]]:
    low, high = figure.scale.low, figure.scale.high
    if not figure.scale.scale_answers:
        low, high = float(figure.numbers.min()), float(figure.numbers.max())
    points, counts = np.unique(figure.numbers, return_counts=True)
    found = dict(zip(points.tolist(), counts.tolist(), strict=True))
    marks = sorted({*found, *(float(x) for x in np.arange(low, high + 0.5))})
    base = len(figure.numbers)
    bars = tuple(
        Bar(
            m - 0.4,
            m + 0.4,
            found.get(m, 0) / base,
            write_plain(m, mark),
            bar_text(found[m] / base, mark) if m in found else "0",
        )
        for m in marks
    )
    return bars, low - 0.5, high + 0.5, ()


def _number_bars(
    numbers: FloatArray, mark: str
) -> tuple[tuple[Bar, ...], float, float, tuple[tuple[float, str], ...]]:
    """Return a histogram whose last bar holds everything above, so that no one stands out."""
    width = _nice_width(numbers)
    start = math.floor(float(np.quantile(numbers, 0.02)) / width) * width
    last = min(MOST_BARS, max(1, math.ceil((float(np.quantile(numbers, 0.95)) - start) / width)))
    positions = np.clip(np.floor((numbers - start) / width), 0, last).astype(int)
    counts = np.bincount(positions, minlength=last + 1)
    bars = tuple(
        Bar(
            start + i * width,
            start + (i + 1) * width,
            int(count) / len(numbers),
            "",
            bar_text(int(count) / len(numbers), mark) if count else "0",
        )
        for i, count in enumerate(counts)
    )
    ends = range(0, last + 1, max(1, (last + 1) // 5))
    ticks = [
        (start + i * width, write_number(start + i * width, _tick_step(width), mark)) for i in ends
    ]
    above = start + last * width
    ticks[-1 if ends[-1] == last else len(ticks) :] = [
        (above, f"{write_number(above, _tick_step(width), mark)} and more")
    ]
    return bars, start, start + (last + 1) * width, tuple(ticks)


def _tick_step(width: float) -> float:
    return float(10.0 ** math.floor(math.log10(width) + 1e-9))


def _nice_width(numbers: FloatArray) -> float:
    spread = float(np.quantile(numbers, 0.95) - np.quantile(numbers, 0.02))
    if spread <= 0:
        return max(1.0, step_for(abs(float(numbers.mean())) / 5 + 1, share=False))
    rough = spread / (MOST_BARS - 1)
    power = 10.0 ** math.floor(math.log10(rough))
    return float(next(m * power for m in (1, 2, 2.5, 5, 10) if m * power >= rough))
