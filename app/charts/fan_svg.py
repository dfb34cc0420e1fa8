"""The fan as inline SVG for pages without script: one picture that fits every width.

Level places are shares of the width, upright places are pixels, so texts keep their size from
390 pixels up and the hatch keeps its grain. Slanted parts lie in inner pictures that stretch.
"""

from __future__ import annotations

from dataclasses import dataclass
from html import escape

from app.charts.fan_geometry import FanGeometry, end_labels, fan_geometry, inside_band
from app.charts.fan_panels import (
    CURVE_REACH,
    bar_heights,
    bar_lengths,
    bar_texts,
    left_texts,
    left_titles,
    longest_left,
    right_titles,
    stroke_start,
    wrapped,
)
from app.charts.rail_svg import HATCH_ID, percent
from app.study.pictures import Fan

PANEL_HEIGHT = 240
LINE_HEIGHT = 17
_NARROW = 340  # pixels of the narrowest picture; gutters are planned for it
_FINE = 1000  # units of an inner picture in both directions


@dataclass(frozen=True, slots=True)
class FanFrame:
    """Ends of the panels: shares of the width, and the top of both in pixels."""

    left: tuple[float, float]
    right: tuple[float, float]
    top: int

    def across_left(self, part: float) -> float:
        """Return the share of the picture's width at a share of the left panel's."""
        return self.left[0] + part * (self.left[1] - self.left[0])

    def down(self, height: float) -> float:
        """Return the pixels from the top of the picture at a height of 0 to 1."""
        return round(self.top + PANEL_HEIGHT * (1 - height), 1)


def fan_svg(fan: Fan) -> str:
    """Return the fan as inline SVG, coloured by the classes of the page's style sheet.

    The page must hold `app.charts.rail_svg.pattern_defs` once.

    Parameters
    ----------
    fan : Fan
        The numbers; its alternative becomes the title.
    """
    geometry = fan_geometry(fan)
    frame = _frame(fan, geometry)
    parts = [
        f"<title>{escape(fan.alternative)}</title>",
        _titles(fan, geometry, frame),
        _band(geometry, frame),
        _column(geometry, frame) if fan.share else _bars(fan, geometry, frame),
        _curve(fan, geometry, frame),
        _left_texts(fan, geometry, frame),
        _estimate(fan, geometry, frame),
        _ends(fan, geometry, frame),
    ]
    height = frame.top + PANEL_HEIGHT + 12
    return f'<svg class="hr-fan" role="img" width="100%" height="{height}">{"".join(parts)}</svg>'


def _frame(fan: Fan, geometry: FanGeometry) -> FanFrame:
    """Gutters as wide as their texts need on a narrow page, the rest shared as 38 : 18 : 44."""
    start = min(0.3, max(0.07, (8 + 7.5 * longest_left(fan)) / _NARROW))
    widest = max(9.5 * len(fan.value_text), 8 * len(fan.low_text), 8 * len(fan.high_text))
    end = 1 - min(0.34, max(0.16, (10 + widest) / _NARROW))
    room = end - start
    titles = [*left_titles(fan), *right_titles(fan, geometry)]
    lines = max(len(titles[0]) + len(titles[1]), len(titles[2]) + len(titles[3]))
    return FanFrame(
        left=(start, start + 0.38 * room),
        right=(start + 0.56 * room, end),
        top=12 + LINE_HEIGHT * lines,
    )


def _titles(fan: Fan, geometry: FanGeometry, frame: FanFrame) -> str:
    left = _title(left_titles(fan), 0.0, "hr-fan-left")
    return left + _title(right_titles(fan, geometry), frame.right[0], "hr-fan-right")


def _title(lines: tuple[list[str], list[str]], x: float, name: str) -> str:
    """Bold lines, then the lines of the note."""
    title, note = lines
    first = _lines(title, x, 13, f"{name} hr-fan-title")
    return first + _lines(note, x, 13 + LINE_HEIGHT * len(title), name)


def _lines(lines: list[str], x: float, y: float, name: str, more: str = "") -> str:
    """Lines of text, one under the other, the first at y."""
    if not lines:
        return ""
    spans = " ".join(
        f'<tspan x="{percent(x)}" y="{y + i * LINE_HEIGHT:g}"{more}>{escape(line)}</tspan>'
        for i, line in enumerate(lines)
    )
    return f'<text class="{name}">{spans}</text>'


def _inner(ends: tuple[float, float], frame: FanFrame, drawn: str) -> str:
    """Put parts with slanted edges into an inner picture that stretches with the page."""
    return (
        f'<svg x="{percent(ends[0])}" y="{frame.top}" width="{percent(ends[1] - ends[0])}" '
        f'height="{PANEL_HEIGHT}" viewBox="0 0 {_FINE} {_FINE}" preserveAspectRatio="none" '
        f'overflow="visible">{drawn}</svg>'
    )


def _path(points: list[tuple[float, float]], name: str, *, closed: bool = False) -> str:
    """Join points (share of the width, height) by straight lines."""
    steps = " ".join(f"{_FINE * x:.0f},{_FINE * (1 - y):.1f}" for x, y in points)
    end = "Z" if closed else ""
    return f'<path class="{name}" vector-effect="non-scaling-stroke" d="M{steps}{end}"/>'


def _box(
    ends: tuple[float, float], heights: tuple[float, float], frame: FanFrame, look: str
) -> str:
    """Draw an upright rectangle."""
    top, foot = frame.down(heights[1]), frame.down(heights[0])
    return (
        f'<rect {look} x="{percent(ends[0])}" width="{percent(ends[1] - ends[0])}" '
        f'y="{top:g}" height="{foot - top:g}"/>'
    )


def _level(ends: tuple[float, float], height: float, frame: FanFrame, name: str) -> str:
    """Draw a level line."""
    y = f"{frame.down(height):g}"
    x1, x2 = percent(ends[0]), percent(ends[1])
    return f'<line class="{name}" x1="{x1}" x2="{x2}" y1="{y}" y2="{y}"/>'


def _band(geometry: FanGeometry, frame: FanFrame) -> str:
    """Draw the band at its true thickness, opening like a fan, and enlarged."""
    (low, high), (foot, top) = geometry.left_band, geometry.right_band
    corners = [(0.0, low), (1.0, foot), (1.0, top), (0.0, high)]
    neck = _path(corners, "hr-band", closed=True)
    edges = _path(corners[:2], "hr-band-edge") + _path(corners[2:], "hr-band-edge")
    return (
        _box(frame.left, geometry.left_band, frame, 'class="hr-band"')
        + _box(frame.right, geometry.right_band, frame, 'class="hr-band"')
        + _inner((frame.left[1], frame.right[0]), frame, neck + edges)
        + _level(frame.right, foot, frame, "hr-band-edge")
        + _level(frame.right, top, frame, "hr-band-edge")
    )


def _column(geometry: FanGeometry, frame: FanFrame) -> str:
    """Draw a share as one column: solid to the low end, hatch to the high end, blank above."""
    low, high = geometry.left_band
    hatch = f'class="hr-hatch" fill="url(#{HATCH_ID})"'
    return (
        _box(frame.left, (0.0, 1.0), frame, 'class="hr-axis"')
        + _box(frame.left, (0.0, low), frame, 'class="hr-people"')
        + _box(frame.left, (low, high), frame, 'class="hr-paper"')
        + _box(frame.left, (low, high), frame, hatch)
    )


def _bars(fan: Fan, geometry: FanGeometry, frame: FanFrame) -> str:
    """Draw answers as level bars with their numbers at the end."""
    drawn = []
    texts = bar_texts(fan, geometry)
    places = zip(texts, bar_lengths(fan), bar_heights(fan, geometry), strict=True)
    for text, length, heights in places:
        end = frame.across_left(length)
        y = frame.down(sum(heights) / 2) + 4
        drawn.append(_box((frame.left[0], end), heights, frame, 'class="hr-people"'))
        drawn.append(_lines([text] if text else [], end, y, "hr-fan-tick", ' dx="4"'))
    axis = _inner(frame.left, frame, _path([(0, 0), (0, 1)], "hr-axis"))
    return axis + "".join(drawn)


def _curve(fan: Fan, geometry: FanGeometry, frame: FanFrame) -> str:
    """Draw the curve, hatched inside the band where both arms agree."""
    curve = [(CURVE_REACH * length, height) for height, length in geometry.curve]
    axis = _path([(0, 0), (0, 1)], "hr-axis")
    if not curve:
        return _inner(frame.right, frame, axis)
    line = axis + _path(curve, "hr-curve")
    if not fan.hatched:
        return _inner(frame.right, frame, line)
    return _hatched(geometry, frame) + _inner(frame.right, frame, _beside(geometry) + line)


def _hatched(geometry: FanGeometry, frame: FanFrame) -> str:
    """Hatch the whole band; what lies beside the curve is covered after."""
    band = geometry.right_band
    hatch = f'class="hr-hatch-fill" fill="url(#{HATCH_ID})"'
    paper = _box(frame.right, band, frame, 'class="hr-paper"')
    return paper + _box(frame.right, band, frame, hatch)


def _beside(geometry: FanGeometry) -> str:
    """Cover the band from the curve to the end of the panel."""
    foot, top = geometry.right_band
    piece = inside_band(geometry.curve, geometry.right_band)
    edge = [(CURVE_REACH * length, height) for height, length in piece]
    around = [(1.0, foot), (0.0, foot), *edge, (0.0, top), (1.0, top)]
    cover = _path(around, "hr-beside", closed=True)
    edges = [_path([(0, height), (1, height)], "hr-band-edge") for height in (foot, top)]
    return cover + "".join(edges)


def _left_texts(fan: Fan, geometry: FanGeometry, frame: FanFrame) -> str:
    """Write ticks and labels, right-aligned at the left panel."""
    written = []
    for height, text in left_texts(fan, geometry):
        lines = wrapped(text)
        y = frame.down(height) + 4 - LINE_HEIGHT * (len(lines) - 1) / 2
        more = ' dx="-5" text-anchor="end"'
        written.append(_lines(lines, frame.left[0], y, "hr-fan-tick", more))
    return "".join(written)


def _estimate(fan: Fan, geometry: FanGeometry, frame: FanFrame) -> str:
    """Draw the estimate's stroke beside bars or across a column, and over the right panel."""
    start = 0.0 if fan.share else stroke_start(fan, geometry)
    left = frame.across_left(start), frame.left[1]
    return _level(left, geometry.left_value, frame, "hr-stroke") + _level(
        frame.right, geometry.right_value, frame, "hr-stroke"
    )


def _ends(fan: Fan, geometry: FanGeometry, frame: FanFrame) -> str:
    """Write low, estimate and high at the right."""
    return "".join(
        _lines(
            [label.text],
            frame.right[1],
            frame.down(label.height) + 5,
            "hr-fan-value" if label.of_value else "hr-fan-end",
            ' dx="7"',
        )
        for label in end_labels(fan, geometry, gap=20 / PANEL_HEIGHT)
    )
