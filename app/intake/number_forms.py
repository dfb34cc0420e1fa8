"""How numbers are written in a column: whole, with a decimal mark, grouped, or open to doubt."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

import numpy as np
import pyarrow as pa  # type: ignore[import-untyped]
import pyarrow.compute as pc  # type: ignore[import-untyped]

from app.intake.cell_table import as_flags

# Leading zeros make a code, whole numbers of more than 15 digits do not fit a float64, and
# 1.23457E+11 is a long code that a spreadsheet has rounded.
_WHOLE = "(?:0|[1-9][0-9]{0,14})"
_SIGN = "[-+−]?"
_EXPONENT = "(?:[eE](?:-[0-9]{1,2}|\\+0?[0-9]))?"
_SPACES = "[ \\x{00a0}\\x{202f}\\x{2009}]"
_PAD = "[ \\t\\x{00a0}\\x{202f}]*"
_CLASS = {".": "\\.", ",": ",", " ": _SPACES, "'": "['’]"}
_OTHER = {".": ",", ",": "."}
_GROUPINGS = ((",", "."), (".", ","), (" ", "."), (" ", ","), ("'", "."), ("'", ","))

_START = 64

MADE_OF_DIGITS = f"^{_PAD}[-+−]?[0-9.,'’eE \\x{{00a0}}\\x{{202f}}\\x{{2009}}+-]*[0-9]{_PAD}$"


class Form(StrEnum):
    """How the numbers of a column are written."""

    WHOLE = "whole"
    DECIMAL = "decimal"
    GROUPED = "grouped"
    DOUBTFUL = "doubtful"  # 1,234 may be 1234 or 1.234
    WORDS = "words"


@dataclass(frozen=True, slots=True)
class NumberForm:
    """The form of a column and its marks.

    Parameters
    ----------
    form : Form
        How numbers are written.
    decimal_mark : str
        "." or ","; "" where no number has a decimal part.
    thousands_mark : str
        ".", ",", " ", "'"; "" where no number is grouped.
    mark : str
        The mark in doubt, for doubtful columns.
    """

    form: Form
    decimal_mark: str = ""
    thousands_mark: str = ""
    mark: str = ""


WORDS = NumberForm(Form.WORDS)


def number_form(cells: pa.Array) -> NumberForm:
    """Return how the cells of one column are written as numbers.

    Parameters
    ----------
    cells : pyarrow array of str
        Different cells, blank ones left out, at least one.
    """
    if _all(cells, f"^{_PAD}{_SIGN}{_WHOLE}{_PAD}$"):
        return NumberForm(Form.WHOLE)
    for mark in (".", ","):
        if _all(cells, _plain(mark)):
            return _decimal_form(cells, mark)
    if not _all(cells, MADE_OF_DIGITS):
        return WORDS
    for thousands, decimal in _GROUPINGS:
        if _all(cells, _grouped(thousands, decimal)):
            has_decimals = _any(cells, _CLASS[decimal])
            return NumberForm(Form.GROUPED, decimal if has_decimals else "", thousands)
    return WORDS


def fits(cells: pa.Array, decimal_mark: str, thousands_mark: str) -> bool:
    """Return whether every cell is a number with exactly these marks.

    Leading zeros are allowed here: a person has said that the column is a number.
    """
    decimal = _CLASS.get(decimal_mark, "\\.")
    loose = f"^{_PAD}{_SIGN}(?:[0-9]{{1,15}}(?:{decimal}[0-9]+)?|{decimal}[0-9]+){_EXPONENT}{_PAD}$"
    if not thousands_mark:
        return _all(cells, loose)
    return _all(cells, _grouped(thousands_mark, decimal_mark or _OTHER.get(thousands_mark, ".")))


def number_flags(cells: pa.Array, decimal_mark: str) -> np.ndarray:
    """Return (cells,) bool: which cells are plain numbers with this decimal mark."""
    return as_flags(pc.match_substring_regex(cells, _plain(decimal_mark or ".")))


def to_numbers(cells: pa.Array, decimal_mark: str, thousands_mark: str) -> np.ndarray:
    """Return (cells,) float: the cells as numbers; all of them fit the marks."""
    if decimal_mark != "," and not thousands_mark:
        try:
            return np.asarray(pc.cast(cells, pa.float64()).to_numpy(zero_copy_only=False))
        except pa.ArrowInvalid:  # spaces around, or a typographic minus
            pass
    text = pc.utf8_trim(cells, " \t\u00a0\u202f")
    text = pc.replace_substring(text, "−", "-")
    if thousands_mark:
        text = pc.replace_substring_regex(text, _CLASS[thousands_mark], "")
    if decimal_mark == ",":
        text = pc.replace_substring(text, ",", ".")
    return np.asarray(pc.cast(text, pa.float64()).to_numpy(zero_copy_only=False))


def _decimal_form(cells: pa.Array, mark: str) -> NumberForm:
    """Tell decimals from groups of three digits: only where a cell cannot be both."""
    grouped = _all(cells, _grouped(mark, _OTHER[mark]))
    if not grouped:
        return NumberForm(Form.DECIMAL, mark)
    return NumberForm(Form.DOUBTFUL, mark=mark)


def _plain(mark: str) -> str:
    decimal = _CLASS[mark]
    return f"^{_PAD}{_SIGN}(?:{_WHOLE}(?:{decimal}[0-9]+)?{_EXPONENT}|{decimal}[0-9]+){_PAD}$"


def _grouped(thousands: str, decimal: str) -> str:
    group, point = _CLASS[thousands], _CLASS[decimal]
    whole = f"(?:0|[1-9][0-9]{{0,2}}(?:{group}[0-9]{{3}}){{0,4}})"
    return f"^{_PAD}{_SIGN}{whole}(?:{point}[0-9]+)?{_PAD}$"


def _all(cells: pa.Array, pattern: str) -> bool:
    """Whether every cell has the pattern; most columns that do not show it at the start."""
    if len(cells) > _START:
        start = cells.slice(0, _START)
        if not as_flags(pc.match_substring_regex(start, pattern)).all():
            return False
    return bool(as_flags(pc.match_substring_regex(cells, pattern)).all())


def _any(cells: pa.Array, pattern: str) -> bool:
    return bool(as_flags(pc.match_substring_regex(cells, pattern)).any())
