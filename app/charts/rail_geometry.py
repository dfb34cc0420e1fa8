"""Where the parts of a rail lie, as shares of its length."""

from __future__ import annotations

import math
from dataclasses import dataclass

from app.study.pictures import Rail

SHOWN = "shown"
HELD_BACK = "held back"
HIDDEN = "hidden"
NOT_COUNTED = "not counted"  # a difference that is not left after allowing for many comparisons
STATES = (SHOWN, HELD_BACK, HIDDEN, NOT_COUNTED)


@dataclass(frozen=True, slots=True)
class RailParts:
    """Parts of a rail, each end between 0 (left end of the rail) and 1 (right end).

    Parameters
    ----------
    solid : (float, float) or None
        What one can stand on; None where there is nothing.
    hatch : (float, float) or None
        What may be.
    stroke : float or None
        The estimate.
    zero : float or None
        Where nought lies, if it lies inside the rail and not at an end.
    """

    solid: tuple[float, float] | None
    hatch: tuple[float, float] | None
    stroke: float | None
    zero: float | None


def rail_parts(rail: Rail) -> RailParts:
    """Return where the parts of a rail lie.

    A rail with nought inside its axis is a difference: it is solid from nought to the near end
    of the interval and hatched over the interval; an interval that holds nought is hatched only.
    Ends outside the axis, infinite ones too, reach the end of the rail.

    Parameters
    ----------
    rail : Rail
        What to draw.

    Returns
    -------
    RailParts
        All parts None for a rail that is held back or hidden.
    """
    if rail.state in (HELD_BACK, HIDDEN):
        return RailParts(None, None, None, None)
    hatch = _place(rail, rail.low), _place(rail, rail.high)
    solid = _solid(rail) if rail.solid else None
    stroke = _place(rail, rail.value) if math.isfinite(rail.value) else None
    return RailParts(solid, hatch if hatch[1] > hatch[0] else None, stroke, _zero(rail))


def _place(rail: Rail, value: float) -> float:
    """Share of the rail's length at a value, kept inside; an unknown end is the rail's own."""
    if math.isnan(value):
        return 0.0
    inside = min(max(value, rail.axis_low), rail.axis_high)
    return (inside - rail.axis_low) / (rail.axis_high - rail.axis_low)


def _solid(rail: Rail) -> tuple[float, float] | None:
    """From the natural start of the scale to the near end of the interval."""
    start = min(max(0.0, rail.axis_low), rail.axis_high)
    if rail.low > start:
        return _place(rail, start), _place(rail, rail.low)
    if rail.high < start:
        return _place(rail, rail.high), _place(rail, start)
    return None


def _zero(rail: Rail) -> float | None:
    if rail.axis_low < 0 < rail.axis_high:
        return _place(rail, 0.0)
    return None
