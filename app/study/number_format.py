"""How numbers are written: one place for screen, picture, sentence, alternative text and page."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from decimal import ROUND_HALF_UP, Decimal
from statistics import median

MINUS = "\u2212"
NO_BREAK = "\u00a0"
SHARE_STEP_FLOOR = 0.1  # shares are never written finer than a tenth of a point
_WORDS = ((10**9, "billion"), (10**6, "million"))


@dataclass(frozen=True, slots=True)
class FigureWords:
    """A figure as printed.

    Parameters
    ----------
    value, low, high : str
        Without the unit; all three rounded to the same step from their unrounded numbers.
    unit : str
        "%", "million" or "".
    between : str
        "38 to 46 %".
    full : str
        "42 %".
    plus_minus : str
        "±4" where both arms round to the same number, else "".
    step : float
        The step all were rounded to; points for a share.
    """

    value: str
    low: str
    high: str
    unit: str
    between: str
    full: str
    plus_minus: str
    step: float


def step_for(half_width: float, *, share: bool, value: float = 0.0) -> float:
    """Return the largest power of ten not above half of the half-width.

    Parameters
    ----------
    half_width, value : float
        In the unit printed: points for a share.
    share : bool
        Shares are never finer than 0.1.
    """
    if not math.isfinite(half_width) or half_width <= 0:
        return _step_without_width(value, share=share)
    exponent = math.floor(math.log10(half_width / 2) + 1e-12)
    step = float(10.0**exponent)
    return max(step, SHARE_STEP_FLOOR) if share else step


def _step_without_width(value: float, *, share: bool) -> float:
    """Without a width to go by: tenths of a point, whole numbers as they are, else four figures."""
    if share:
        return SHARE_STEP_FLOOR
    if not math.isfinite(value) or value == round(value):
        return 1.0
    return float(10.0 ** (math.floor(math.log10(abs(value))) - 3))


def column_step(half_widths: Iterable[float], *, share: bool) -> float:
    """Return the one step of a table column: that of its median half-width."""
    widths = [w for w in half_widths if math.isfinite(w) and w > 0]
    return step_for(median(widths), share=share) if widths else (0.1 if share else 1.0)


def figure_words(
    value: float,
    low: float,
    high: float,
    *,
    share: bool,
    decimal_mark: str = ".",
    step: float | None = None,
) -> FigureWords:
    """Write an estimate and its interval.

    Parameters
    ----------
    value, low, high : float
        Shares as parts of one, everything else in its own unit; ends may be infinite.
    share : bool
        True writes percent.
    decimal_mark : str
        "." or ",".
    step : float, optional
        The step of the column or figure it stands beside; else its own.
    """
    numbers = [_decimal(x) * (100 if share else 1) for x in (value, low, high)]
    if step is None:
        step = step_for(float(numbers[2] - numbers[1]) / 2, share=share, value=float(numbers[0]))
    scale, unit = (1, "%") if share else _scale_word(float(numbers[0]), step)
    texts = [_written(x, step, scale, decimal_mark, share=share) for x in numbers]
    tail = f"{NO_BREAK}{unit}" if unit else ""
    return FigureWords(
        *texts,
        unit=unit,
        between=_between(texts[1], texts[2], numbers, tail),
        full=texts[0] + tail,
        plus_minus=_plus_minus(numbers, step, scale, decimal_mark),
        step=step,
    )


def write_count(count: float, decimal_mark: str = ".") -> str:
    """Write a whole number with thousands separated: "1,184"."""
    return _grouped(f"{round(count):d}", decimal_mark)


def write_number(value: float, step: float, decimal_mark: str = ".") -> str:
    """Write a number rounded to a step, without a unit."""
    return _written(_decimal(value), step, 1, decimal_mark, share=False)


def write_plain(value: float, decimal_mark: str = ".") -> str:
    """Write a number as it stands in a file: no rounding, no thousands ("2.5", "10")."""
    text = str(int(value)) if value == int(value) else repr(float(value))
    return text.replace(".", decimal_mark).replace("-", MINUS)


def write_about(value: float, decimal_mark: str = ".") -> str:
    """Write a number to three figures, for sentences that only compare sizes."""
    if value == 0 or not math.isfinite(value):
        return "0" if value == 0 else "unknown"
    return write_number(value, 10.0 ** (math.floor(math.log10(abs(value))) - 2), decimal_mark)


def write_share(part: float, decimal_mark: str = ".") -> str:
    """Write a part of answers as a whole percentage without its sign, for bars."""
    return _written(_decimal(part) * 100, 1.0, 1, decimal_mark, share=True)


def _decimal(value: float) -> Decimal:
    """Return the shortest decimal of a float, so that 0.285 is 28.5 % and not 28.499."""
    return Decimal(repr(float(value)))


def _scale_word(value: float, step: float) -> tuple[int, str]:
    for scale, word in _WORDS:
        if abs(value) >= scale and step >= scale / 100:
            return scale, word
    return 1, ""


def _rounded(value: Decimal, step: float) -> Decimal:
    unit = Decimal(repr(step)) if step < 1 else Decimal(round(step))
    return (value / unit).quantize(Decimal(1), rounding=ROUND_HALF_UP) * unit


def _written(value: Decimal, step: float, scale: int, decimal_mark: str, *, share: bool) -> str:
    if not value.is_finite():
        return "unknown"
    rounded = _rounded(value, step)
    if share and (edge := _edge_words(value, rounded, step, decimal_mark)):
        return edge
    places = max(0, -round(math.log10(step / scale)))
    return _signed(f"{rounded / scale:.{places}f}", decimal_mark)


def _edge_words(value: Decimal, rounded: Decimal, step: float, decimal_mark: str) -> str:
    """Words where rounding would claim nobody or everybody: "under 1", "over 99"."""
    places = max(0, -round(math.log10(step)))
    if rounded == 0 and value > Decimal("1e-9"):
        return "under " + _signed(f"{Decimal(repr(step)):.{places}f}", decimal_mark)
    if rounded == 100 and value < 100 - Decimal("1e-9"):
        return "over " + _signed(f"{100 - Decimal(repr(step)):.{places}f}", decimal_mark)
    return ""


def _signed(text: str, decimal_mark: str) -> str:
    negative = text.startswith("-") and any(c in "123456789" for c in text)
    return (MINUS if negative else "") + _grouped(text.lstrip("-"), decimal_mark)


def _grouped(text: str, decimal_mark: str) -> str:
    negative, text = text.startswith("-"), text.lstrip("-")
    whole, _, part = text.partition(".")
    mark = "." if decimal_mark == "," else ","
    grouped = f"{int(whole):,}".replace(",", mark)
    return (MINUS if negative else "") + grouped + (decimal_mark + part if part else "")


def _between(low: str, high: str, numbers: list[Decimal], tail: str) -> str:
    if not (numbers[1].is_finite() and numbers[2].is_finite()):
        return "too few answers to say"
    return f"{low}{tail}" if low == high else f"{low} to {high}{tail}"


def _plus_minus(numbers: list[Decimal], step: float, scale: int, decimal_mark: str) -> str:
    value, low, high = numbers
    if not (low.is_finite() and high.is_finite()):
        return ""
    below, above = _rounded(value - low, step), _rounded(high - value, step)
    if below != above or above == 0:
        return ""
    return "±" + _written(above, step, scale, decimal_mark, share=False)
