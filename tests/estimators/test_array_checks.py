from __future__ import annotations

import numpy as np
import pytest

from estimators import InputError
from estimators.array_checks import (
    as_confidence,
    as_count,
    as_labels,
    as_mask,
    as_numbers,
    as_weights,
    as_zero_or_one,
    numbers_of_base,
)


class Unequal:
    """A missing value that refuses to say whether it equals itself."""

    def __ne__(self, other):
        return self

    def __bool__(self):
        raise TypeError("neither true nor false")

    __hash__ = object.__hash__


def test_numbers_come_from_anything_numeric():
    assert as_numbers([1, 2], "values", 2).tolist() == [1.0, 2.0]
    assert as_numbers([True, False], "values", 2).tolist() == [1.0, 0.0]
    assert as_numbers(np.array([1, 2.5], dtype=object), "values", 2).tolist() == [1.0, 2.5]
    for missing in (None, float("nan"), Unequal()):
        numbers = as_numbers(np.array([missing, 2.5], dtype=object), "values", 2)
        assert np.isnan(numbers[0])
        assert numbers[1] == 2.5


@pytest.mark.parametrize(
    "values",
    [["1", "2"], np.array(["1", 2], dtype=object), [1j, 2], np.array(["2026-01-01"] * 2, "M8[D]")],
    ids=["texts", "a text among numbers", "complex", "dates"],
)
def test_numbers_are_not_guessed(values):
    with pytest.raises(InputError, match=r"^spend must hold numbers only"):
        as_numbers(values, "spend", 2)


def test_rows_must_match():
    with pytest.raises(InputError, match=r"values must hold one entry for each of the 1,200 rows"):
        as_numbers([1.0], "values", 1200)


def test_what_stands_outside_the_base_becomes_zero():
    base = np.array([True, False, True])
    assert numbers_of_base([1.0, np.nan, 3.0], "values", 3, base).tolist() == [1.0, 0.0, 3.0]
    assert as_zero_or_one([1, 7, 0], "chosen", 3, base).tolist() == [1.0, 0.0, 0.0]


def test_missing_numbers_are_named_with_their_row():
    with pytest.raises(InputError, match=r"but got nan in row 1 \(2 such rows\)"):
        numbers_of_base([1.0, np.nan, np.inf], "values", 3, None)


def test_masks_are_true_or_false():
    assert as_mask(None, "where", 2) is None
    assert as_mask(np.array([True, False], dtype=object), "where", 2).dtype == bool
    for wrong in ([1, 0], [1.0, 0.0], ["yes", "no"], np.array([True, None], dtype=object)):
        with pytest.raises(InputError, match="where must hold true or false for every row"):
            as_mask(wrong, "where", 2)


def test_labels_are_coded_once_and_in_any_kind():
    codes, labels = as_labels(["b", "a", "b"], "strata")
    assert [labels[code] for code in codes] == ["b", "a", "b"]
    codes, labels = as_labels(np.array(["b", 7, "b"], dtype=object), "strata")
    assert [labels[code] for code in codes] == ["b", 7, "b"]


def test_labels_of_a_list_keep_their_kind():
    codes, labels = as_labels([7, "b", 7], "strata")
    assert [labels[code] for code in codes] == [7, "b", 7]
    with pytest.raises(InputError, match="strata must have a label in every row"):
        as_labels(["b", float("nan")], "strata")


@pytest.mark.parametrize("missing", [None, float("nan"), np.datetime64("NaT"), Unequal()])
def test_missing_labels_are_refused(missing):
    with pytest.raises(InputError, match=r"strata must have a label in every row, .* in row 1"):
        as_labels(np.array(["a", missing], dtype=object), "strata")


@pytest.mark.parametrize("confidence", [0, 1, 95, -0.1, "0.95", float("nan"), None])
def test_confidence_lies_between_zero_and_one(confidence):
    with pytest.raises(InputError, match="confidence must lie between 0 and 1"):
        as_confidence(confidence)
    assert as_confidence(np.float32(0.5)) == 0.5


@pytest.mark.parametrize("number", [0, -3, 2.5, "7", True, None, float("inf"), float("nan")])
def test_counts_are_whole_and_positive(number):
    with pytest.raises(InputError, match="n must be a whole number of 1 or more"):
        as_count(number, "n")


def test_counts_may_come_from_numpy():
    assert as_count(np.int64(7), "n") == 7
    assert as_count(7.0, "n") == 7


def test_weights_need_no_design():
    assert as_weights([1, 2]).tolist() == [1.0, 2.0]
    with pytest.raises(InputError, match="weights must not all be zero"):
        as_weights([])
