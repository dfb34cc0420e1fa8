"""What one column of a fieldwork file holds: its distinct values and how often each occurs."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypeVar, overload

import numpy as np
import numpy.typing as npt
import pandas as pd

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.int64]
Number = TypeVar("Number", bound=np.generic)

_PLAIN_NUMBER = re.compile(r"[+-]?(\d+([.,]\d+)?|[.,]\d+)")
_GROUPED = re.compile(r"[+-]?\d{1,3}([.,]\d{3})+")
_NUMBER_AND_WORDS = re.compile(r"([+-]?\d+)(?:\s*[-–—=:(.]\s*|\s+)[^\W\d]")
_LEADING_ZERO = re.compile(r"0\d+")


class NumberCodes(Sequence[str]):
    """The codes of rising numbers, written only when looked at: a column may hold 10,000.

    Parameters
    ----------
    numbers : ndarray
        (d,) float, rising.
    """

    __slots__ = ("_numbers",)

    def __init__(self, numbers: FloatArray) -> None:
        self._numbers = numbers

    def __len__(self) -> int:
        return int(self._numbers.size)

    @overload
    def __getitem__(self, item: int) -> str: ...
    @overload
    def __getitem__(self, item: slice) -> tuple[str, ...]: ...
    def __getitem__(self, item: int | slice) -> str | tuple[str, ...]:
        if isinstance(item, slice):
            return tuple(map(code_text, self._numbers[item].tolist()))
        return code_text(float(self._numbers[item]))

    def position(self, code: str) -> int:
        """Return the position of a code, -1 where it does not occur."""
        number = float(numbers_of((code,))[0])
        found = int(np.searchsorted(self._numbers, number))
        inside = found < self._numbers.size and self._numbers[found] == number
        return found if inside and code_text(number) == code else -1


@dataclass(frozen=True, slots=True, eq=False)
class ColumnProfile:
    """Distinct values of a column.

    Parameters
    ----------
    name : str
        The column.
    rows : int
        Rows of the file.
    texts : sequence of str
        (d,) distinct values as codes: numbers rising, then other texts by first appearance.
    numbers : ndarray
        (d,) float, the same values as numbers; NaN where a text is none.
    counts : ndarray
        (d,) int, how often each occurs.
    is_text : bool
        True where the file holds text.
    """

    name: str
    rows: int
    texts: Sequence[str]
    numbers: FloatArray
    counts: IntArray
    is_text: bool

    @property
    def filled(self) -> int:
        """Cells that are not blank."""
        return int(self.counts.sum())

    @property
    def distinct(self) -> int:
        """How many different values there are."""
        return len(self.texts)

    @property
    def all_numbers(self) -> bool:
        """Whether every value is a number."""
        return not bool(np.isnan(self.numbers).any())

    @property
    def leading_zeros(self) -> bool:
        """Whether there are codes such as "007", which are no numbers to compute with."""
        return self.is_text and any(map(_LEADING_ZERO.fullmatch, self.texts))

    def without(self, codes: set[str]) -> ColumnProfile:
        """Return the profile as if the cells with these codes were blank."""
        away = [place for code in codes if (place := self._place(code)) >= 0]
        if not away:
            return self
        kept = np.delete(np.arange(self.distinct), away)
        numbers = locked(self.numbers[kept])
        texts = (
            NumberCodes(numbers)
            if not self.is_text
            else tuple(self.texts[i] for i in kept.tolist())
        )
        return ColumnProfile(
            self.name, self.rows, texts, numbers, locked(self.counts[kept]), self.is_text
        )

    def count_of(self, code: str) -> int:
        """Return how often a code occurs."""
        place = self._place(code)
        return int(self.counts[place]) if place >= 0 else 0

    def holds(self, code: str) -> bool:
        """Whether a code occurs."""
        return self._place(code) >= 0

    def _place(self, code: str) -> int:
        if isinstance(self.texts, NumberCodes):
            return self.texts.position(code)
        return self.texts.index(code) if code in self.texts else -1


def profile_column(name: str, column: pd.Series) -> ColumnProfile:
    """Return the profile of a column.

    Parameters
    ----------
    name : str
        The column.
    column : Series
        (n,) numbers or text; NaN and blank text are no answer.
    """
    if pd.api.types.is_numeric_dtype(column):
        return _profile_numbers(name, column)
    positions, texts = text_positions(column)
    counts = np.bincount(positions[positions >= 0], minlength=len(texts))
    numbers = numbers_of(texts)
    order = np.argsort(numbers, kind="stable")
    ordered = tuple(texts[i] for i in order.tolist())
    return ColumnProfile(
        name, len(column), ordered, locked(numbers[order]), locked(counts[order]), True
    )


def _profile_numbers(name: str, column: pd.Series) -> ColumnProfile:
    values = column_numbers(column)
    distinct, counts = np.unique(values[np.isfinite(values)], return_counts=True)
    distinct, counts = locked(distinct), locked(counts.astype(np.int64))
    return ColumnProfile(name, len(column), NumberCodes(distinct), distinct, counts, False)


def column_numbers(column: pd.Series) -> FloatArray:
    """Return a numeric column as (n,) float, NaN where nothing stands."""
    return np.asarray(column.to_numpy(dtype=np.float64, na_value=np.nan), dtype=np.float64)


def text_positions(column: pd.Series) -> tuple[IntArray, tuple[str, ...]]:
    """Return (n,) positions into the distinct texts, -1 for blanks, and those texts, trimmed.

    Parameters
    ----------
    column : Series
        (n,) text; values that are no text are written as text.
    """
    raw, found = pd.factorize(column, use_na_sentinel=True)
    trimmed = [str(value).strip() for value in found]
    place = {text: i for i, text in enumerate(dict.fromkeys(t for t in trimmed if t))}
    table = np.array([place.get(text, -1) for text in trimmed] + [-1], dtype=np.int64)
    return table[raw], tuple(place)


def code_text(value: float) -> str:
    """Return a number as the code it is known by: "5", "2.5"."""
    return str(int(value)) if value == int(value) else repr(value)


def numbers_of(texts: tuple[str, ...]) -> FloatArray:
    """Return texts as (d,) numbers, NaN where a text is none or its commas are ambiguous.

    A comma is a decimal mark unless every number with a comma could hold thousands ("1,234").
    """
    plain = [bool(_PLAIN_NUMBER.fullmatch(text)) for text in texts]
    commas = [text for text, is_plain in zip(texts, plain, strict=True) if is_plain and "," in text]
    if commas and all(map(_GROUPED.fullmatch, commas)):
        plain = [p and "," not in text for p, text in zip(plain, texts, strict=True)]
    return np.array(
        [float(t.replace(",", ".")) if p else np.nan for t, p in zip(texts, plain, strict=True)],
        dtype=np.float64,
    )


def leading_numbers(texts: tuple[str, ...]) -> FloatArray:
    """Return texts as (d,) numbers, also where words follow the number: "10 - very good"."""
    numbers = numbers_of(texts)
    found = [_NUMBER_AND_WORDS.match(text) for text in texts]
    leading = np.array([float(m.group(1)) if m else np.nan for m in found], dtype=np.float64)
    return np.where(np.isnan(numbers), leading, numbers)


def locked(array: npt.NDArray[Number]) -> npt.NDArray[Number]:
    """Return the array, made read only."""
    array.setflags(write=False)
    return array
