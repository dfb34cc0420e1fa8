"""A hundred made-up runs of one plan: what the interval of each would have said."""

from __future__ import annotations

import math
from dataclasses import dataclass
from html import escape

from app.charts.fan_geometry import stepped
from app.study.pictures import Fan

RUNS = 100
HEIGHT = 84
_OFFSET = 0.25  # no run falls on an end of an interval of 90, 95 or 99 %
_PRIME, _ROOT = 101, 55  # powers of a primitive root: every run once, in an order without a slope
_FINE = 1000  # units of the picture's width


@dataclass(frozen=True, slots=True)
class MadeUpRun:
    """Interval of one made-up run.

    Parameters
    ----------
    low, high : float
        In the unit of the fan's right axis.
    reaches : bool
        Whether the interval holds the value the runs were made from.
    """

    low: float
    high: float
    reaches: bool


def made_up_runs(fan: Fan) -> tuple[MadeUpRun, ...]:
    """Return a hundred runs at evenly spaced chances of the curve; none where that would mislead.

    Nothing is drawn by lot: the runs are the quantiles 0.25 %, 1.25 % ... 99.25 % of the curve,
    each with the half-width of the printed interval. Where the two arms of the interval disagree
    the curve and the interval do not belong together, and there are no runs.

    Parameters
    ----------
    fan : Fan
        The numbers.
    """
    half_width = (fan.high - fan.low) / 2
    if not fan.hatched or not math.isfinite(half_width) or half_width <= 0:
        return ()
    estimates = _quantiles(fan)
    order = [pow(_ROOT, i, _PRIME) - 1 for i in range(1, RUNS + 1)]
    places = [estimates[i] for i in order] if estimates else []
    return tuple(
        MadeUpRun(x - half_width, x + half_width, abs(x - fan.value) <= half_width) for x in places
    )


def runs_svg(runs: tuple[MadeUpRun, ...], value: float) -> str:
    """Return the runs as short strokes around a line; those that miss it are drawn open.

    Parameters
    ----------
    runs : tuple of MadeUpRun
        The runs.
    value : float
        Where the line lies.
    """
    low, high = min(run.low for run in runs), max(run.high for run in runs)

    def down(at: float) -> str:
        return f"{2 + (HEIGHT - 4) * (high - at) / (high - low):.1f}"

    slot = _FINE / len(runs)
    closed = open_ = ""
    for i, run in enumerate(runs):
        middle = (i + 0.5) * slot
        if run.reaches:
            closed += f"M{middle:g},{down(run.high)}V{down(run.low)}"
        else:
            left, right = middle - 0.32 * slot, middle + 0.32 * slot
            closing = f"V{down(run.low)}H{left:g}Z"
            open_ += f"M{left:g},{down(run.high)}H{right:g}{closing}"
    return (
        f'<svg class="hr-runs" role="img" width="100%" height="{HEIGHT}" '
        f'viewBox="0 0 {_FINE} {HEIGHT}" preserveAspectRatio="none">'
        "<title>A hundred made-up runs of this same plan</title>"
        f"{_path('hr-run', closed)}{_path('hr-run-open', open_)}"
        f"{_path('hr-run-line', f'M0,{down(value)}H{_FINE}')}</svg>"
    )


def runs_sentence(runs: tuple[MadeUpRun, ...], value_text: str) -> str:
    """Return what the strokes mean, as plain text.

    Parameters
    ----------
    runs : tuple of MadeUpRun
        The runs.
    value_text : str
        The estimate as printed.
    """
    missing = sum(not run.reaches for run in runs)
    reaching = len(runs) - missing
    return (
        f"Suppose a count of everybody gave exactly {value_text}. Each stroke is then a made-up "
        f"run of this same plan: {reaching} of {len(runs)} intervals reach that value, "
        f"{missing} miss it and are drawn open."
    )


def _path(name: str, steps: str) -> str:
    if not steps:
        return ""
    return f'<path class="{escape(name)}" vector-effect="non-scaling-stroke" d="{steps}"/>'


def _quantiles(fan: Fan) -> list[float]:
    """Return the estimates at a hundred evenly spaced chances of the curve."""
    cells = _cells(fan)
    total = math.fsum(mass for *_, mass in cells)
    if not total > 0:
        return []
    found: list[float] = []
    below = 0.0
    for start, end, mass in cells:
        share = mass / total
        while len(found) < RUNS and (len(found) + _OFFSET) / RUNS <= below + share + 1e-12:
            part = ((len(found) + _OFFSET) / RUNS - below) / share if share > 0 else 0.0
            found.append(start + (end - start) * min(max(part, 0.0), 1.0))
        below += share
    return found + [cells[-1][1]] * (RUNS - len(found))


def _cells(fan: Fan) -> list[tuple[float, float, float]]:
    """Start, end and mass of the stretch each point owns; a step's mass stands at its value."""
    points = list(fan.curve)
    if fan.steps:
        return [(p.value, p.value, p.height) for p in points]
    corners = stepped(points)
    pairs = zip(corners[::2], corners[1::2], strict=True)
    return [(start, end, height * (end - start)) for (start, height), (end, _) in pairs]
