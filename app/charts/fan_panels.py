"""What stands in and above the two panels of a fan: lines of text, lengths of bars."""

from __future__ import annotations

import textwrap

from app.charts.fan_geometry import FanGeometry, enlarged_text
from app.study.pictures import Fan

LABEL_WIDTH = 14  # characters of a bar's label or a tick before it is broken
TITLE_WIDTH = 24  # characters above a panel at 390 pixels
BAR_ROOM = 1.8  # the left panel is this much wider than the longest bar: its number stands there
NUMBER_ROOM = 0.33  # share of the left panel that a bar's number takes at 390 pixels
CURVE_REACH = 0.9  # the longest point of the curve, as a share of the right panel
TEXT_GAP = 0.05  # of the panel's height: 12 pixels of 240
_NEAR = 0.03  # a stroke this close to a bar would touch its number


def wrapped(text: str, width: int = LABEL_WIDTH) -> list[str]:
    """Return the lines of a text; no-break spaces hold, long words are kept whole.

    Parameters
    ----------
    text : str
        One line.
    width : int
        Characters.
    """
    words = text.split(" ")
    lines = [words[0]]
    for word in words[1:]:
        if len(lines[-1]) + 1 + len(word) <= width:
            lines[-1] += " " + word
        else:
            lines.append(word)
    return lines if text else []


def shortened(text: str, width: int, most: int) -> list[str]:
    """Return at most `most` lines of a text, the last with an ellipsis where words are missing.

    Parameters
    ----------
    text : str
        One line.
    width, most : int
        Characters and lines.
    """
    lines = wrapped(text, width)
    if len(lines) <= most:
        return lines
    last = textwrap.shorten(" ".join(lines[most - 1 :]), width + 1, placeholder="\u2026")
    return [*lines[: most - 1], last]


def left_titles(fan: Fan) -> tuple[list[str], list[str]]:
    """Return the lines of title and note above the left panel.

    Parameters
    ----------
    fan : Fan
        The numbers.
    """
    return wrapped(fan.left_title, TITLE_WIDTH), shortened(fan.left_note, TITLE_WIDTH, 2)


def right_titles(
    fan: Fan, geometry: FanGeometry, width: int = TITLE_WIDTH
) -> tuple[list[str], list[str]]:
    """Return the lines of title and note above the right panel; the last says how much larger.

    Parameters
    ----------
    fan : Fan
        The numbers; `right_note` says nothing of the enlargement.
    geometry : FanGeometry
        Their places.
    width : int
        Characters of a line.
    """
    enlarged = enlarged_text(geometry.enlarged)
    note = shortened(fan.right_note, width, 2) + ([enlarged] if enlarged else [])
    return wrapped(fan.right_title, width), note


def left_texts(fan: Fan, geometry: FanGeometry) -> list[tuple[float, str]]:
    """Return height and text of everything at the left of the left panel.

    Parameters
    ----------
    fan : Fan
        The numbers.
    geometry : FanGeometry
        Their places.
    """
    ticks = [
        (geometry.left.height_of(value), text)
        for value, text in fan.ticks
        if text and geometry.left.holds(value)
    ]
    bars = zip(fan.bars, bar_heights(fan, geometry), strict=True)
    labels = [((foot + top) / 2, bar.label) for bar, (foot, top) in bars if bar.label]
    keep = apart([height for height, _ in labels], [1.0] * len(labels))
    return ticks + [labels[i] for i in sorted(keep)]


def bar_texts(fan: Fan, geometry: FanGeometry) -> list[str]:
    """Return the number at the end of each bar; "" where a longer neighbour's takes its place.

    Parameters
    ----------
    fan : Fan
        The numbers.
    geometry : FanGeometry
        Their places.
    """
    middles = [(foot + top) / 2 for foot, top in bar_heights(fan, geometry)]
    keep = apart(middles, [bar.part for bar in fan.bars])
    return [bar.text if i in keep else "" for i, bar in enumerate(fan.bars)]


def apart(heights: list[float], weights: list[float]) -> set[int]:
    """Return which texts can be written without touching, the weightier first.

    Parameters
    ----------
    heights : list of float
        Where the texts would stand, 0 to 1.
    weights : list of float
        How much each matters; among equals the lower number comes first.
    """
    kept: list[int] = []
    for i in sorted(range(len(heights)), key=lambda i: -weights[i]):
        if all(abs(heights[i] - heights[j]) >= TEXT_GAP - 1e-9 for j in kept):
            kept.append(i)
    return set(kept)


def longest_left(fan: Fan) -> int:
    """Return the characters of the longest line at the left of the left panel.

    Parameters
    ----------
    fan : Fan
        The numbers.
    """
    texts = [text for _, text in fan.ticks] + [bar.label for bar in fan.bars]
    return max((len(line) for text in texts for line in wrapped(text)), default=0)


def bar_heights(fan: Fan, geometry: FanGeometry) -> list[tuple[float, float]]:
    """Return foot and top of each bar, 0 to 1, with a little air between neighbours.

    Parameters
    ----------
    fan : Fan
        The numbers.
    geometry : FanGeometry
        Their places.
    """
    ends = [(geometry.left.height_of(b.low), geometry.left.height_of(b.high)) for b in fan.bars]
    return [(foot + 0.04 * (top - foot), top - 0.04 * (top - foot)) for foot, top in ends]


def bar_lengths(fan: Fan) -> list[float]:
    """Return the length of each bar as a share of the left panel's width.

    Parameters
    ----------
    fan : Fan
        The numbers.
    """
    widest = BAR_ROOM * max((bar.part for bar in fan.bars), default=0.0)
    return [bar.part / widest if widest > 0 else 0.0 for bar in fan.bars]


def stroke_start(fan: Fan, geometry: FanGeometry) -> float:
    """Return where the estimate's stroke begins: after the bars beside it and their numbers.

    Parameters
    ----------
    fan : Fan
        The numbers.
    geometry : FanGeometry
        Their places.

    Returns
    -------
    float
        Share of the left panel's width, 0 to 1.
    """
    lengths = zip(bar_lengths(fan), bar_heights(fan, geometry), strict=True)
    value = geometry.left_value
    near = [length for length, (foot, top) in lengths if foot - _NEAR <= value <= top + _NEAR]
    return min(max(near) + NUMBER_ROOM, 1.0) if near else 0.0
