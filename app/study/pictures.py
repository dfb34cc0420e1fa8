"""The numbers behind pictures, ready to draw: no library, no colours, no rounding left to do."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Rail:
    """A figure as a rail: solid to the low end, hatch to the high end, blank beyond.

    Parameters
    ----------
    axis_low, axis_high : float
        Ends of the rail, in the unit of the value.
    value, low, high : float
        The estimate and its interval.
    solid : bool
        False where the scale has no natural zero: hatch and stroke only.
    state : str
        "shown", "held back" (rail empty) or "hidden" (rail crossed by two thin diagonals).
    text : str
        What it says, for those who do not see it.
    """

    axis_low: float
    axis_high: float
    value: float
    low: float
    high: float
    solid: bool
    state: str
    text: str


@dataclass(frozen=True, slots=True)
class Bar:
    """Answers between two values of the upright axis.

    Parameters
    ----------
    low, high : float
        Ends on the value axis, per unit.
    part : float
        Share of the answers, 0 to 1.
    label : str
        At the left of the bar; "" where the axis has ticks instead.
    text : str
        At the end of the bar, the rounded percentage.
    """

    low: float
    high: float
    part: float
    label: str
    text: str


@dataclass(frozen=True, slots=True)
class CurvePoint:
    """One value of the sampling distribution with its probability or density (any scale)."""

    value: float
    height: float


@dataclass(frozen=True, slots=True)
class Fan:
    """Answers and sampling distribution side by side.

    Parameters
    ----------
    share : bool
        True draws the left panel as one column: solid to the low end, hatch between.
    left_title, left_note, right_title, right_note : str
        Two lines above each panel.
    axis_low, axis_high : float
        Full scale of the left panel, per unit.
    ticks : tuple of (float, str)
        Axis marks of the left panel.
    bars : tuple of Bar
        Answers; empty for a share.
    factor : float
        Right axis divided by left axis: 1, or the universe size for a total.
    value, low, high : float
        Estimate and interval in the unit of the right axis; low and high may be infinite.
    value_text, low_text, high_text : str
        As printed everywhere else.
    curve : tuple of CurvePoint
        In the unit of the right axis, rising values.
    steps : bool
        True for a distribution on single values, drawn as steps.
    hatched : bool
        True when the curve may be hatched inside the band (both arms agree).
    endless_low, endless_high : float or None
        Interval from an endless universe, drawn as a dotted pair of lines when asked.
    endless_text : str
        "endless universe: 6.7 to 7.2".
    notes : tuple of str
        Lines under the picture.
    alternative : str
        The picture in words.
    """

    share: bool
    left_title: str
    left_note: str
    right_title: str
    right_note: str
    axis_low: float
    axis_high: float
    ticks: tuple[tuple[float, str], ...]
    bars: tuple[Bar, ...]
    factor: float
    value: float
    low: float
    high: float
    value_text: str
    low_text: str
    high_text: str
    curve: tuple[CurvePoint, ...]
    steps: bool
    hatched: bool
    endless_low: float | None
    endless_high: float | None
    endless_text: str
    notes: tuple[str, ...]
    alternative: str
