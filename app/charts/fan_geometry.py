"""Where everything of a fan lies: two upright ranges and the places in them."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

from app.study.pictures import CurvePoint, Fan

ROOM_AROUND = 0.6  # the right panel shows the band and this much of its height on either side
MOST_CURVE_POINTS = 160
_NEARLY_ONE = 1.25  # below this the right panel is not called enlarged


@dataclass(frozen=True, slots=True)
class Span:
    """A part of the value axis that fills the height of a panel, from the foot to the top."""

    low: float
    high: float

    @property
    def length(self) -> float:
        """Return the length in the unit of the axis."""
        return self.high - self.low

    def height_of(self, value: float) -> float:
        """Return how high a value lies, 0 at the foot and 1 at the top, never outside."""
        inside = min(max(value, self.low), self.high)
        return (inside - self.low) / self.length

    def holds(self, value: float) -> bool:
        """Return whether the panel shows the value."""
        return self.low <= value <= self.high


@dataclass(frozen=True, slots=True)
class EndLabel:
    """A printed number at the right of the fan.

    Parameters
    ----------
    text : str
        As printed.
    height : float
        Where it stands after nearby labels have made room, 0 to 1.
    of_value : bool
        True for the estimate, False for an end of the interval.
    """

    text: str
    height: float
    of_value: bool


@dataclass(frozen=True, slots=True)
class FanGeometry:
    """Places of a fan.

    Parameters
    ----------
    left, right : Span
        The full scale per unit, and the enlarged piece in the unit of the right axis.
    enlarged : float
        How many times larger the right panel draws the same distance.
    left_band, right_band : (float, float)
        Heights of the interval's ends in the two panels, 0 to 1; the corners of the fan.
    left_value, right_value : float
        Heights of the estimate.
    curve : tuple of (float, float)
        Outline of the curve from foot to top: height (0 to 1) and length (0 to 1, longest 1).
    """

    left: Span
    right: Span
    enlarged: float
    left_band: tuple[float, float]
    right_band: tuple[float, float]
    left_value: float
    right_value: float
    curve: tuple[tuple[float, float], ...]


def fan_geometry(fan: Fan) -> FanGeometry:
    """Return where the parts of a fan lie.

    Parameters
    ----------
    fan : Fan
        The numbers.
    """
    left = _left_span(fan)
    right = _right_span(fan, left)
    return FanGeometry(
        left=left,
        right=right,
        enlarged=left.length * fan.factor / right.length,
        left_band=(left.height_of(fan.low / fan.factor), left.height_of(fan.high / fan.factor)),
        right_band=(right.height_of(fan.low), right.height_of(fan.high)),
        left_value=left.height_of(fan.value / fan.factor),
        right_value=right.height_of(fan.value),
        curve=curve_outline(fan, right),
    )


def enlarged_text(enlarged: float) -> str:
    """Return "enlarged 13 times", or "" where both panels show nearly the same scale.

    Parameters
    ----------
    enlarged : float
        `FanGeometry.enlarged`.
    """
    if enlarged < _NEARLY_ONE:
        return ""
    shown = f"{enlarged:.1f}" if enlarged < 3 else f"{enlarged:,.0f}"
    return f"enlarged {shown.removesuffix('.0')} times"


def curve_outline(fan: Fan, right: Span) -> tuple[tuple[float, float], ...]:
    """Return the curve as (height, length) from the foot of the panel to its top.

    Steps keep their areas: each value owns the stretch to the middle between its neighbours.
    Where there are more points than can be seen, neighbours are drawn as one with their mean.

    Parameters
    ----------
    fan : Fan
        The numbers.
    right : Span
        What the right panel shows.
    """
    points = thinned([p for p in fan.curve if right.holds(p.value)], MOST_CURVE_POINTS)
    longest = max((p.height for p in points), default=0.0)
    if not longest > 0:
        return ()
    outline = stepped(points) if fan.steps else [(p.value, p.height) for p in points]
    return tuple((right.height_of(value), height / longest) for value, height in outline)


def thinned(points: list[CurvePoint], most: int) -> list[CurvePoint]:
    """Return at most `most` points, each the mean of as many neighbours.

    Parameters
    ----------
    points : list of CurvePoint
        Rising values.
    most : int
        Upper limit.
    """
    size = math.ceil(len(points) / most) if points else 1
    groups = [points[start : start + size] for start in range(0, len(points), size)]
    return [
        CurvePoint(
            value=math.fsum(p.value for p in group) / len(group),
            height=math.fsum(p.height for p in group) / len(group),
        )
        for group in groups
    ]


def stepped(points: list[CurvePoint]) -> list[tuple[float, float]]:
    """Return the corners of steps: (value, height) twice per point, at the ends of its stretch.

    Parameters
    ----------
    points : list of CurvePoint
        Rising values.
    """
    values = [p.value for p in points]
    if len(values) < 2:
        return []
    middles = [(a + b) / 2 for a, b in pairwise(values)]
    starts = [values[0] - (middles[0] - values[0]), *middles]
    ends = [*middles, values[-1] + (values[-1] - middles[-1])]
    return [
        corner
        for point, start, end in zip(points, starts, ends, strict=True)
        for corner in ((start, point.height), (end, point.height))
    ]


def inside_band(
    outline: tuple[tuple[float, float], ...], band: tuple[float, float]
) -> tuple[tuple[float, float], ...]:
    """Return the piece of a curve between two heights, cut where it crosses them.

    Parameters
    ----------
    outline : tuple of (float, float)
        Height and length, from foot to top.
    band : (float, float)
        Lower and upper height.
    """
    low, high = band
    within = [(height, length) for height, length in outline if low <= height <= high]
    cuts = [(edge, length) for edge in band if (length := _length_at(outline, edge)) is not None]
    below = [cut for cut in cuts if cut[0] == low]
    above = [cut for cut in cuts if cut[0] == high]
    return (*below, *within, *above)


def end_labels(fan: Fan, geometry: FanGeometry, gap: float) -> tuple[EndLabel, ...]:
    """Return low, estimate and high as labels that do not cover each other, from foot to top.

    Infinite ends and ends that print as the estimate at the same place have no label.

    Parameters
    ----------
    fan : Fan
        The numbers.
    geometry : FanGeometry
        Their places.
    gap : float
        Smallest distance between two labels, as a share of the panel's height.
    """
    low, high = geometry.right_band
    value = geometry.right_value
    wanted = [EndLabel(fan.value_text, value, True)]
    if math.isfinite(fan.low) and not (fan.low_text == fan.value_text and value - low < gap):
        wanted.insert(0, EndLabel(fan.low_text, low, False))
    if math.isfinite(fan.high) and not (fan.high_text == fan.value_text and high - value < gap):
        wanted.append(EndLabel(fan.high_text, high, False))
    places = spread([label.height for label in wanted], gap)
    return tuple(
        EndLabel(label.text, place, label.of_value)
        for label, place in zip(wanted, places, strict=True)
    )


def spread(places: list[float], gap: float) -> list[float]:
    """Return rising places at least `gap` apart, moved as little as needed, kept in 0 to 1.

    Parameters
    ----------
    places : list of float
        Wanted places, rising.
    gap : float
        Smallest distance; labels that cannot all fit share the height evenly.
    """
    gap = min(gap, 1 / max(len(places) - 1, 1))
    blocks: list[list[float]] = []  # each: sum of (wanted - offset), count
    for place in places:
        blocks.append([place, 1])
        while len(blocks) > 1 and _start(blocks[-1]) < _start(blocks[-2]) + gap * blocks[-2][1]:
            total, count = blocks.pop()
            blocks[-1][0] += total - count * gap * blocks[-1][1]
            blocks[-1][1] += count
    moved = [_start(block) + gap * i for block in blocks for i in range(int(block[1]))]
    return _kept_inside(moved, gap)


def _start(block: list[float]) -> float:
    """Place of the first label of a block whose labels stand shoulder to shoulder."""
    return block[0] / block[1]


def _kept_inside(places: list[float], gap: float) -> list[float]:
    """Push labels off the foot, then off the top."""
    for i in range(len(places)):
        places[i] = max(places[i], i * gap)
    for i in range(len(places)):
        places[-1 - i] = min(places[-1 - i], 1 - i * gap)
    return places


def _left_span(fan: Fan) -> Span:
    """Return the full scale, wide enough for every bar."""
    low = min([fan.axis_low, *(bar.low for bar in fan.bars)])
    high = max([fan.axis_high, *(bar.high for bar in fan.bars)])
    return Span(low, high)


def _right_span(fan: Fan, left: Span) -> Span:
    """Return the band and some room around it, never beyond the scale."""
    whole = Span(left.low * fan.factor, left.high * fan.factor)
    shown = [p.value for p in fan.curve if p.height > 0]
    low = fan.low if math.isfinite(fan.low) else min([fan.value, *shown])
    high = fan.high if math.isfinite(fan.high) else max([fan.value, *shown])
    room = ROOM_AROUND * (high - low)
    if not room > 0 or (math.isinf(fan.low) and math.isinf(fan.high)):
        return whole
    return Span(*_clipped(low - room, high + room, whole, keep=(low, high)))


def _clipped(
    low: float, high: float, whole: Span, *, keep: tuple[float, float]
) -> tuple[float, float]:
    """Keep to the scale, but never cut off the interval itself."""
    return max(low, min(whole.low, keep[0])), min(high, max(whole.high, keep[1]))


def _length_at(outline: tuple[tuple[float, float], ...], height: float) -> float | None:
    """Length of the curve at a height, between its points; None beyond its ends."""
    for (h0, l0), (h1, l1) in pairwise(outline):
        if h0 <= height <= h1 and h1 > h0:
            return l0 + (l1 - l0) * (height - h0) / (h1 - h0)
    return None
