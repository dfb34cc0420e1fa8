"""From what a caller passes to checked arrays; every message names its argument."""

from __future__ import annotations

from collections.abc import Mapping
from numbers import Real
from typing import Any, TypeVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.errors import InputError

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
Codes = NDArray[np.intp]
Kind = TypeVar("Kind", bound=np.generic)


def as_confidence(confidence: float) -> float:
    """Return a confidence level strictly between 0 and 1."""
    if isinstance(confidence, Real) and 0 < confidence < 1:
        return float(confidence)
    raise InputError(
        "confidence", confidence, "must lie between 0 and 1", "write 95 percent as 0.95"
    )


def as_count(number: object, name: str, *, least: int = 1) -> int:
    """Return a whole number that is at least ``least``."""
    if isinstance(number, Real) and not isinstance(number, bool):
        value = float(number)
        if np.isfinite(value) and value == int(value) and value >= least:
            return int(value)
    raise InputError(
        name, repr(number), f"must be a whole number of {least} or more", "correct the number"
    )


def as_numbers(values: ArrayLike, name: str, n: int) -> Floats:
    """Return one number per row; NaN is allowed here and judged by :func:`numbers_of_base`."""
    found = np.asarray(values)
    try:
        if found.dtype.kind not in "biufO":
            raise TypeError
        numbers = _of_objects(found) if found.dtype == object else found.astype(float, copy=False)
    except (TypeError, ValueError) as error:
        raise InputError(
            name, _kind(found), "must hold numbers only", "turn the answers into numbers first"
        ) from error
    _check_length(numbers, name, n)
    return numbers


def _of_objects(found: NDArray[np.object_]) -> Floats:
    """Numbers of any class, NaN for whatever marks a missing one; a text is no number."""
    if any(isinstance(value, str) for value in found.flat):
        raise TypeError
    missing = [_is_missing(value) for value in found.flat]
    filled = found.copy()
    filled[np.array(missing, dtype=bool).reshape(found.shape)] = np.nan
    return filled.astype(np.float64)


def numbers_of_base(values: ArrayLike, name: str, n: int, base: Bools | None) -> Floats:
    """Return one finite number per row inside the base, and zero for every other row."""
    numbers = as_numbers(values, name, n)
    _refuse_nan(numbers, name, base)
    return numbers if base is None else np.where(base, numbers, 0.0)


def _refuse_nan(numbers: Floats, name: str, base: Bools | None) -> None:
    """Refuse numbers inside the base that are NaN or infinite."""
    bad = ~np.isfinite(numbers)
    if base is not None:
        bad &= base
    if bad.any():
        row = int(np.flatnonzero(bad)[0])
        raise InputError(
            name,
            f"{numbers[row]} in row {row} ({int(bad.sum())} such rows)",
            "must be a finite number wherever where and answered are true",
            "mark these rows as not answered",
        )


def as_mask(mask: ArrayLike | None, name: str, n: int) -> Bools | None:
    """Return one true or false per row, or None when nothing was said."""
    if mask is None:
        return None
    flags = np.asarray(mask)
    _check_length(flags, name, n)
    if flags.dtype == object and all(isinstance(flag, bool | np.bool_) for flag in flags):
        flags = flags.astype(bool)
    if flags.dtype != np.bool_:
        raise InputError(
            name, _kind(flags), "must hold true or false for every row", "compare with == first"
        )
    return flags


def as_zero_or_one(chosen: ArrayLike, name: str, n: int, base: Bools | None) -> Floats:
    """Return 0.0 or 1.0 per row from true and false or 0 and 1; zero outside the base."""
    numbers = numbers_of_base(chosen, name, n, base)
    other = (numbers != 0) & (numbers != 1)
    if other.any():
        raise InputError(
            name,
            numbers[np.flatnonzero(other)[0]],
            "must say true or false (or 1 or 0) for every row in the base",
            "compare the answers with the one that counts",
        )
    return numbers


def as_weights(weights: ArrayLike, n: int | None = None) -> Floats:
    """Return finite weights that are not negative, at least one of them positive."""
    numbers = as_numbers(weights, "weights", np.size(weights) if n is None else n)
    bad = ~(np.isfinite(numbers) & (numbers >= 0))
    if bad.any():
        row = int(np.flatnonzero(bad)[0])
        raise InputError(
            "weights",
            f"{numbers[row]} in row {row}",
            "must be finite and not negative",
            "mend or remove that row",
        )
    if numbers.sum() <= 0:
        raise InputError("weights", "no positive weight", "must not all be zero", "check the file")
    return numbers


def as_labels(labels: ArrayLike, name: str, n: int | None = None) -> tuple[Codes, list[object]]:
    """Return (n,) codes and the label of each code; a missing label is refused."""
    marks = _as_marks(labels)
    _check_length(marks, name, np.size(marks) if n is None else n)
    _refuse_missing(marks, name)
    if marks.dtype == object:
        return _coded_objects(marks)
    kinds, codes = np.unique(marks, return_inverse=True)
    return codes.astype(np.intp, copy=False), kinds.tolist()


def _as_marks(labels: ArrayLike) -> NDArray[Any]:
    """Labels as an array; those of a list with texts among others stay what they are."""
    marks = np.asarray(labels)
    if marks.dtype.kind in "US" and isinstance(labels, list | tuple):
        return np.array(labels, dtype=object)
    return marks


def as_counts_by_label(
    counts: Mapping[Any, object], name: str, labels: list[object], of_what: str
) -> Floats:
    """Return the whole number given for each label, and refuse labels without rows."""
    missing = [label for label in labels if label not in counts]
    if missing:
        raise InputError(
            name, missing[0], f"must say a number for every {of_what} in the rows", "add this one"
        )
    return np.array([as_count(counts[label], f"{name}[{label!r}]") for label in labels], float)


def refuse_labels_without_rows(
    counts: Mapping[Any, object], name: str, labels: list[object]
) -> None:
    """Refuse a count for a label that no row carries."""
    present = set(labels)
    extra = [label for label in counts if label not in present]
    if extra:
        raise InputError(
            name,
            repr(extra[0]),
            "must name only strata that have rows",
            "join that stratum with one that has answers, or leave it out of the universe",
        )


def frozen(array: NDArray[Kind]) -> NDArray[Kind]:
    """Return a read-only copy."""
    copy = np.array(array)
    copy.setflags(write=False)
    return copy


def _coded_objects(marks: NDArray[np.object_]) -> tuple[Codes, list[object]]:
    places: dict[object, int] = {}
    codes = np.fromiter((places.setdefault(m, len(places)) for m in marks), np.intp, len(marks))
    return codes, list(places)


def _refuse_missing(marks: NDArray[np.generic], name: str) -> None:
    if marks.dtype == object:
        missing = np.array([_is_missing(mark) for mark in marks], dtype=bool)
    elif marks.dtype.kind in "fmM":
        missing = np.asarray(marks != marks)
    else:
        return
    if missing.any():
        row = int(np.flatnonzero(missing)[0])
        raise InputError(
            name, f"nothing in row {row}", "must have a label in every row", "give that row a label"
        )


def _is_missing(mark: object) -> bool:
    """Whether a label is None or, as missing values are, not equal to itself."""
    try:
        return mark is None or bool(mark != mark)
    except (TypeError, ValueError):
        return True


def _check_length(array: NDArray[np.generic], name: str, n: int) -> None:
    if array.ndim != 1 or len(array) != n:
        raise InputError(
            name,
            f"an array of shape {array.shape}",
            f"must hold one entry for each of the {n:,} rows",
            "pass arrays with the same rows as the design",
        )


def _kind(values: object) -> str:
    return f"values of type {np.asarray(values).dtype}"
