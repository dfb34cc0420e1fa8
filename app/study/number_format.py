"""How numbers are written: one place for screen, picture, sentence, alternative text and page."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from decimal import MAX_EMAX, MIN_EMIN, ROUND_HALF_UP, Context, Decimal
from statistics import median

MINUS = "\u2212"
NO_BREAK = "\u00a0"
SHARE_STEP_FLOOR = 0.1  # shares are never written finer than a tenth of a point
_WORDS = ((10**9, "billion"), (10**6, "million"))
_EXACT = Context(prec=800, rounding=ROUND_HALF_UP, Emax=MAX_EMAX, Emin=MIN_EMIN)  # any two floats
_NEAR = Decimal("1e-9")  # points of a share that are rounding noise


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
    step = _power_of_ten(math.floor(math.log10(half_width) - math.log10(2) + 1e-12))
    return max(step, SHARE_STEP_FLOOR) if share else step


def _step_without_width(value: float, *, share: bool) -> float:
    """Without a width to go by: tenths of a point, whole numbers as they are, else four figures."""
    if share:
        return SHARE_STEP_FLOOR
    if not math.isfinite(value) or value == round(value):
        return 1.0
    return _power_of_ten(math.floor(math.log10(abs(value))) - 3)


def _power_of_ten(exponent: int) -> float:
    """Return the float nearest to a power of ten; no float is finer than 1e-323."""
    return float(f"1e{max(exponent, -323)}")


def column_step(
    half_widths: Iterable[float], *, share: bool, values: Iterable[float] = ()
) -> float:
    """Return the one step of a table column: that of its median half-width.

    Parameters
    ----------
    half_widths, values : iterable of float
        In the unit printed: points for a share. The values matter where nothing has a width.
    share : bool
        Shares are never finer than 0.1.
    """
    widths = [w for w in half_widths if math.isfinite(w) and w > 0]
    if widths:
        return step_for(median(widths), share=share)
    uneven = [abs(v) for v in values if math.isfinite(v) and v != round(v)]
    return _step_without_width(max(uneven, default=0.0), share=share)


def column_scale(values: Iterable[float], step: float) -> int:
    """Return what one counts of in a column of numbers: 1, a million, a billion.

    Parameters
    ----------
    values : iterable of float
        The numbers of the column.
    step : float
        Its step; the largest number as rounded decides.
    """
    finite = [abs(v) for v in values if math.isfinite(v)]
    return _scale_word(_decimal(max(finite, default=0.0)), step)[0]


def figure_words(
    value: float,
    low: float,
    high: float,
    *,
    share: bool,
    decimal_mark: str = ".",
    step: float | None = None,
    scale: int | None = None,
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
    scale : int, optional
        What one counts of in the column it stands in, from :func:`column_scale`; else its own.
    """
    factor = Decimal(100 if share else 1)
    numbers = [_EXACT.multiply(_decimal(x), factor) for x in (value, low, high)]
    if step is None:
        step = step_for(_half_width(numbers), share=share, value=float(numbers[0]))
    if share:
        scale, unit = 1, "%"
    elif scale is None:
        scale, unit = _scale_word(numbers[0], step)
    else:
        unit = dict(_WORDS).get(scale, "")
    value_text, low_text, high_text = (
        _written(x, step, scale, decimal_mark, share=share) for x in numbers
    )
    tail = f"{NO_BREAK}{unit}" if unit else ""
    return FigureWords(
        value=value_text,
        low=low_text,
        high=high_text,
        unit=unit,
        between=_between(low_text, high_text, numbers, tail),
        full=value_text + tail,
        plus_minus=_plus_minus(numbers, step, scale, decimal_mark),
        step=step,
    )


def write_count(count: float, decimal_mark: str = ".") -> str:
    """Write a whole number with thousands separated: "1,184"."""
    return _grouped(f"{round(count):d}", decimal_mark) if math.isfinite(count) else "unknown"


def write_number(value: float, step: float, decimal_mark: str = ".") -> str:
    """Write a number rounded to a step, without a unit."""
    return _written(_decimal(value), step, 1, decimal_mark, share=False)


def write_amount(value: float, step: float, decimal_mark: str = ".") -> str:
    """Write a number rounded to a step, large ones in words as a figure is: "2.1 million"."""
    number = _decimal(value)
    scale, unit = _scale_word(number, step)
    text = _written(number, step, scale, decimal_mark, share=False)
    return f"{text}{NO_BREAK}{unit}" if unit else text


def write_plain(value: float, decimal_mark: str = ".") -> str:
    """Write a number as it stands in a file: no rounding, no thousands ("2.5", "10")."""
    if not math.isfinite(value):
        return "unknown"
    text = str(int(value)) if value == int(value) else f"{_decimal(value):f}"
    return text.replace(".", decimal_mark).replace("-", MINUS)


def write_about(value: float, decimal_mark: str = ".") -> str:
    """Write a number to three figures, for sentences that only compare sizes."""
    if value == 0 or not math.isfinite(value):
        return "0" if value == 0 else "unknown"
    step = _power_of_ten(math.floor(math.log10(abs(value))) - 2)
    return write_number(value, step, decimal_mark)


def write_share(part: float, decimal_mark: str = ".") -> str:
    """Write a part of answers as a whole percentage without its sign, for bars."""
    return _written(_decimal(part) * 100, 1.0, 1, decimal_mark, share=True)


def _decimal(value: float) -> Decimal:
    """Return the shortest decimal of a float, so that 0.285 is 28.5 % and not 28.499."""
    return Decimal(repr(float(value)))


def _half_width(numbers: list[Decimal]) -> float:
    """Return half of high minus low; infinite or not a number where an end is."""
    low, high = float(numbers[1]), float(numbers[2])
    if not (math.isfinite(low) and math.isfinite(high)):
        return math.inf
    return float(_EXACT.subtract(numbers[2], numbers[1])) / 2


def _scale_word(value: Decimal, step: float) -> tuple[int, str]:
    """Return the word a number is written with, told by the number as it is rounded."""
    if not value.is_finite():
        return 1, ""
    rounded = abs(_rounded(value, step))
    for scale, word in _WORDS:
        if rounded >= scale and step >= scale / 100:
            return scale, word
    return 1, ""


def _rounded(value: Decimal, step: float) -> Decimal:
    if not value.is_finite():
        return value
    unit = _decimal(step)
    whole = _EXACT.divide(value, unit).to_integral_value(ROUND_HALF_UP, _EXACT)
    return _EXACT.multiply(whole, unit)


def _written(value: Decimal, step: float, scale: int, decimal_mark: str, *, share: bool) -> str:
    if not value.is_finite():
        return "unknown"
    rounded = _rounded(value, step)
    if share and (edge := _edge_words(value, rounded, step, decimal_mark)):
        return edge
    places = max(0, -round(math.log10(step / scale)))
    exact = _EXACT.divide(rounded, Decimal(scale))
    return _signed(f"{exact:.{places}f}", decimal_mark)


def _edge_words(value: Decimal, rounded: Decimal, step: float, decimal_mark: str) -> str:
    """Words where rounding would claim nobody or everybody: "under 1", "over 99"."""
    places = max(0, -round(math.log10(step)))
    unit = _decimal(step)
    if rounded <= 0 < value - _NEAR:
        return "under " + _signed(f"{unit:.{places}f}", decimal_mark)
    if rounded >= 100 > value + _NEAR:
        return "over " + _signed(f"{100 - unit:.{places}f}", decimal_mark)
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
    if not all(number.is_finite() for number in numbers):
        return ""
    below = _rounded(_EXACT.subtract(value, low), step)
    above = _rounded(_EXACT.subtract(high, value), step)
    if below != above or above == 0:
        return ""
    return "±" + _written(above, step, scale, decimal_mark, share=False)
