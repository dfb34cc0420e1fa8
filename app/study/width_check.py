"""The width check: which figures are narrow enough to be published."""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum

from app.study.number_format import NO_BREAK, step_for, write_amount, write_count, write_plain
from app.study.study import HouseLimit
from estimators import Estimate

_ROUNDING = 1e-9  # a width this close to a limit stands on it
_UNTOLD = {  # cautions under which a width says nothing, and what is said instead
    "heavy_ties": "many gave the same answer, so the width says little",
    "no_variation": "the answers show no variation, so the width says nothing",
}


class Outcome(StrEnum):
    """What may be done with a figure."""

    PUBLISH = "publish"
    NOTE = "publish with a note"
    HOLD_BACK = "hold back"


@dataclass(frozen=True, slots=True)
class Verdict:
    """What the width check says of one figure.

    Parameters
    ----------
    outcome : Outcome
        Publish, publish with a note, hold back.
    reason : str
        The number and the limit that decided, "±15.1 over ±10 points".
    short : str
        What a client reads instead of the value: "too few answers", "too wide".
    """

    outcome: Outcome
    reason: str
    short: str


@dataclass(frozen=True, slots=True)
class FigureScale:
    """On what scale a figure stands.

    Parameters
    ----------
    share : bool
        True for parts of one, printed as percent.
    low, high : float
        Ends of the rail; for a number the largest value worth drawing.
    natural_zero : bool
        True when zero means none, so that a rail may be solid.
    scale_answers : bool
        True for an average or median on a scale with fixed ends.
    """

    share: bool
    low: float
    high: float
    natural_zero: bool
    scale_answers: bool


def width_limit(estimate: Estimate, scale: FigureScale, limit: HouseLimit) -> float:
    """Return the largest half-width allowed, in the unit of the estimate (a share as a part)."""
    if scale.share:
        return limit.share_points / 100
    if scale.scale_answers:
        return limit.scale_part * (scale.high - scale.low)
    return limit.number_part * abs(estimate.value)


def judge(
    estimate: Estimate, scale: FigureScale, limit: HouseLimit, *, decimal_mark: str = "."
) -> Verdict:
    """Judge one figure by the house limit.

    Parameters
    ----------
    estimate : Estimate
        The figure.
    scale : FigureScale
        On what scale it stands.
    limit : HouseLimit
        The limit of the house.
    """
    if estimate.base < limit.smallest_base:
        return Verdict(
            Outcome.HOLD_BACK,
            f"{write_count(estimate.base, decimal_mark)} answers, fewer than the "
            f"{write_count(limit.smallest_base, decimal_mark)} the house asks for",
            "too few answers",
        )
    if not math.isfinite(estimate.half_width):
        return Verdict(Outcome.HOLD_BACK, "no interval can be given", "too few answers")
    untold = [_UNTOLD[c.code] for c in estimate.cautions if c.code in _UNTOLD]
    if untold and not scale.share:  # the interval of a share holds there too
        return Verdict(Outcome.NOTE, untold[0], "many ties")
    return _by_width(estimate, scale, limit, decimal_mark)


def _by_width(
    estimate: Estimate, scale: FigureScale, limit: HouseLimit, decimal_mark: str
) -> Verdict:
    largest = width_limit(estimate, scale, limit)
    width, allowed = _width_words(estimate.half_width, largest, scale, decimal_mark)
    if estimate.half_width > largest * (1 + _ROUNDING):
        return Verdict(Outcome.HOLD_BACK, f"±{width} over the limit of ±{allowed}", "too wide")
    if 0 < limit.note_part * largest * (1 - _ROUNDING) <= estimate.half_width:
        return Verdict(Outcome.NOTE, f"±{width}, close to the limit of ±{allowed}", "wide")
    return Verdict(Outcome.PUBLISH, f"±{width}, limit ±{allowed}", "")


def _width_words(
    half_width: float, largest: float, scale: FigureScale, decimal_mark: str
) -> tuple[str, str]:
    """Write width and limit, the width fine enough to tell them apart."""
    factor, tail = (100.0, f"{NO_BREAK}points") if scale.share else (1.0, "")
    half_width, largest = half_width * factor, largest * factor
    step = step_for(half_width, share=False, value=half_width)
    if scale.share:
        step = min(max(step, 0.1), 1.0)
    fixed = scale.share or scale.scale_answers
    for finer in (step, step / 10, step / 100, step / 1000):
        width = write_amount(half_width, finer, decimal_mark)
        allowed = _plain(largest, decimal_mark) if fixed else ""
        allowed = allowed or write_amount(largest, finer, decimal_mark)
        differ = abs(half_width - largest) > _ROUNDING * largest
        if not differ or not _same_amount(width, allowed, decimal_mark):
            break
    return width, allowed + tail


def _same_amount(first: str, second: str, decimal_mark: str) -> bool:
    """Whether two amounts look alike but for noughts after the decimal mark."""
    return _trimmed(first, decimal_mark) == _trimmed(second, decimal_mark)


def _trimmed(text: str, decimal_mark: str) -> str:
    return text.rstrip("0").rstrip(decimal_mark) if decimal_mark in text else text


def _plain(value: float, decimal_mark: str) -> str:
    return write_plain(round(value, 9), decimal_mark)


def limit_words(limit: HouseLimit, decimal_mark: str = ".") -> str:
    """Return the house limit in one sentence."""
    points = _plain(limit.share_points, decimal_mark)
    scale = _plain(limit.scale_part * 100, decimal_mark)
    number = _plain(limit.number_part * 100, decimal_mark)
    note = _plain(limit.note_part * 100, decimal_mark)
    return (
        f"house limit: shares within ±{points}{NO_BREAK}points, averages on a scale within "
        f"±{scale}{NO_BREAK}% of the scale, other figures within ±{number}{NO_BREAK}% of their "
        f"value, at least {write_count(limit.smallest_base, decimal_mark)} answers; with a note "
        f"from {note}{NO_BREAK}% of the limit on"
    )
