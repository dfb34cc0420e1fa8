"""The curve of a fan: where the figure would fall if the survey were repeated."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from app.study.figure_requests import Statistic
from app.study.figures import Figure
from app.study.pictures import CurvePoint
from app.study.sampling_plan import SamplingMethod
from app.study.study_data import StudyData
from estimators import (
    SamplingDistribution,
    mean_distribution,
    plug_in_universe,
    stratified_mean_distribution,
)

FloatArray = npt.NDArray[np.float64]
CURVE_POINTS = 240
REACH = 4.5  # standard errors drawn on each side

_SMOOTH_PARTS = 80  # of the curve of a law with too many values for steps
_FEWEST_PARTS = 9
_MIDDLE = 2.0  # standard errors to either side
_MOST_STRATA = 50  # more take long, and their average is normal anyway
_LARGEST = 2**31  # units the law can count; in a larger universe it looks the same
_MOST_SUMS = 200_000  # told apart; the eye sees some hundred
_FEW_PEOPLE = 60  # with fewer from a finite universe, many different answers take long
_FEWEST_STEPS = 64  # over the range of the answers, however many people there are
_FINEST_ANSWERS = 20  # different answers of one stratum that are kept apart
_EVEN = 1e-6  # relative

_SIMPLE_NOTE = (
    "The curve is the exact distribution for a universe that looks like the sample, "
    "stretched to the standard error."
)
_NEARLY_NOTE = _SIMPLE_NOTE.replace("the exact distribution", "the distribution")
_STRATIFIED_NOTE = (
    "The curve is the law of the stratified {} for a universe that looks like the sample, "
    "stretched to the standard error."
)
_T_NOTE = "The curve is the t distribution with the standard error of this sampling plan."
_FLAT_NOTE = "The answers do not vary, so there is no curve to draw."
_WORDS = {Statistic.SHARE: "share", Statistic.AVERAGE: "average", Statistic.TOTAL: "total"}


@dataclass(frozen=True, slots=True)
class FanCurve:
    """The sampling distribution of a figure, ready to draw.

    Parameters
    ----------
    points : tuple of CurvePoint
        In the unit of the figure, rising values; empty where there is no curve.
    steps : bool
        True for a distribution on single values, drawn as steps.
    note : str
        The line that names it.
    """

    points: tuple[CurvePoint, ...]
    steps: bool
    note: str


def curve_of(data: StudyData, figure: Figure) -> FanCurve:
    """Return the sampling distribution of a figure, by the way the sample was drawn.

    Parameters
    ----------
    data : StudyData
        The study.
    figure : Figure
        The figure.
    """
    error = figure.estimate.standard_error
    if not math.isfinite(error) or error <= 0:
        return FanCurve((), False, _FLAT_NOTE)
    if figure.request.statistic is not Statistic.MEDIAN:
        curve = _simple_curve(data, figure) or _stratified_curve(data, figure)
        if curve is not None:
            return curve
    return FanCurve(_t_points(figure), False, _T_NOTE)


def factor_of(figure: Figure) -> float:
    """Return what an average is multiplied by to give the figure: 1, or the universe of a total."""
    if figure.request.statistic is not Statistic.TOTAL:
        return 1.0
    return figure.estimate.weighted_base


def _is_simple(data: StudyData) -> bool:
    plan = data.plan
    if plan.method in (SamplingMethod.GROUPS, SamplingMethod.QUOTA):
        return False
    return data.built.fallback or not (plan.strata_column or plan.weights_column)


def _simple_curve(data: StudyData, figure: Figure) -> FanCurve | None:
    """Return the curve of a simple random sample; None where it is none, or all were asked."""
    if not _is_simple(data):
        return None
    responses, estimate = figure.numbers, figure.estimate
    base, coarse = len(responses), _coarse(responses)
    finite = data.built.design.population_size is not None and not data.plan.replacement
    size = max(base, min(round(estimate.weighted_base), _LARGEST)) if finite else None
    slow = size is not None and base < _FEW_PEOPLE and coarse is not responses
    universe = plug_in_universe(coarse if slow else responses, size)
    sums = max(_MOST_SUMS, _FEWEST_STEPS * base)
    law = mean_distribution(universe, base, replacement=size is None, most_points=sums)
    if law.standard_deviation == 0:
        return None
    points = _binned(
        _stretched(figure, law), law.probabilities, estimate.value, estimate.standard_error
    )
    steps = len(law.support) <= CURVE_POINTS or figure.scale.share
    return FanCurve(points, steps, _SIMPLE_NOTE if law.exact and not slow else _NEARLY_NOTE)


def _stretched(figure: Figure, law: SamplingDistribution) -> FloatArray:
    """Values of a law of an average, moved to the estimate and stretched to its standard error."""
    estimate = figure.estimate
    stretch = estimate.standard_error / law.standard_deviation
    return np.asarray(estimate.value + (law.support - law.mean) * stretch, dtype=np.float64)


def _stratified_law(data: StudyData, figure: Figure) -> SamplingDistribution | None:
    """Return the law of the stratified average of everyone; None where it is not that."""
    design = data.built.design
    strata = len(design.stages.units_drawn)
    by_strata = design.stages.unit is None and not design.weights_given and strata > 1
    if not by_strata or strata > _MOST_STRATA or not _about_everyone(data, figure):
        return None
    stratum = design.stages.stratum
    sizes = np.rint(np.bincount(stratum, weights=design.weights)).astype(int)
    answered = np.bincount(stratum[figure.base], minlength=strata)
    if (answered == 0).any() or (answered > sizes).any() or sizes.sum() > _LARGEST:
        return None
    numbers = _coarse(figure.numbers)
    parts = [numbers[stratum[figure.base] == h] for h in range(strata)]
    universes = [plug_in_universe(p, int(s)) for p, s in zip(parts, sizes, strict=True)]
    return stratified_mean_distribution(
        universes,
        answered.tolist(),
        replacement=design.replacement,
        most_points=_MOST_SUMS,
    )


def _about_everyone(data: StudyData, figure: Figure) -> bool:
    return not figure.request.group_question and figure.counts.asked == len(data.answers)


def _coarse(numbers: FloatArray) -> FloatArray:
    """Return answers in whole steps of an even grid where too many differ.

    The law is moved and stretched, so the unit does not matter, and what is lost cannot be seen:
    in trials with skewed spends of 395 people in four strata the cumulative chances, in standard
    errors from the middle, changed by 0.001 at most.
    """
    if len(np.unique(numbers)) <= _FINEST_ANSWERS:
        return numbers
    step = float(np.ptp(numbers)) / _FINEST_ANSWERS
    return np.asarray(np.rint((numbers - numbers.min()) / step), dtype=np.float64)


def _stratified_curve(data: StudyData, figure: Figure) -> FanCurve | None:
    """Return the curve of a stratified sample of everyone; None where it is none."""
    law = _stratified_law(data, figure)
    if law is None or law.standard_deviation == 0:
        return None
    note = _STRATIFIED_NOTE.format(_WORDS[figure.request.statistic])
    center, error = figure.estimate.value, figure.estimate.standard_error
    values = _stretched(figure, law)
    shown = (np.abs(values - center) <= REACH * error) & (law.probabilities > 0)
    values, chances = values[shown], law.probabilities[shown]
    gaps = np.diff(values)
    if len(values) < 3 or (len(values) <= CURVE_POINTS and np.ptp(gaps) <= _EVEN * gaps.max()):
        return FanCurve(_points(values, chances), True, note)
    values, heights = _smoothed((values - center) / error, chances)
    values = center + values * error
    if figure.scale.share:
        inside = (values >= 0) & (values <= 1)
        values, heights = values[inside], heights[inside]
    return FanCurve(_points(values, heights), False, note)


def _smoothed(values: FloatArray, chances: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return a curve over -REACH to REACH: chances are split between the neighbours on a grid.

    The grid is even and no finer than the gaps between the values around the middle.
    """
    middle = values[np.abs(values) <= _MIDDLE]
    widest = float(np.diff(middle).max()) if len(middle) > 1 else 2 * _MIDDLE
    parts = min(_SMOOTH_PARTS, max(_FEWEST_PARTS, int(2 * REACH / widest)))
    places = (values + REACH) * parts / (2 * REACH)
    below = np.clip(places.astype(int), 0, parts - 1)
    rest = np.clip(places - below, 0.0, 1.0)
    heights = np.bincount(below, weights=chances * (1 - rest), minlength=parts + 1)
    heights += np.bincount(below + 1, weights=chances * rest, minlength=parts + 1)
    return np.linspace(-REACH, REACH, parts + 1), np.asarray(heights, dtype=np.float64)


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
        chances = np.asarray(np.bincount(bins, weights=chances), dtype=np.float64)
        support = support[0] + (np.arange(len(chances)) * width + (width - 1) / 2) * gap
    return _points(support, chances)


def _t_points(figure: Figure) -> tuple[CurvePoint, ...]:
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
    return _points(values, heights)


def _points(values: FloatArray, heights: FloatArray) -> tuple[CurvePoint, ...]:
    return tuple(CurvePoint(float(v), float(h)) for v, h in zip(values, heights, strict=True))
