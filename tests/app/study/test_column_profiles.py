from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from app.study.column_profiles import code_text, leading_numbers, numbers_of, profile_column


def test_numbers_are_counted_in_rising_order():
    profile = profile_column("Q1", pd.Series([3.0, 1.0, np.nan, 3.0, 2.5]))
    assert list(profile.texts) == ["1", "2.5", "3"]
    assert profile.counts.tolist() == [1, 1, 2]
    assert (profile.filled, profile.distinct, profile.rows) == (4, 3, 5)
    assert not profile.is_text


@pytest.mark.parametrize("dtype", ["str", object])
def test_labels_are_trimmed_and_blanks_are_no_answers(dtype):
    column = pd.Series([" Yes", "No", "", None, "Yes ", "  "], dtype=dtype)
    profile = profile_column("Q1", column)
    assert list(profile.texts) == ["Yes", "No"]
    assert profile.counts.tolist() == [2, 1]
    assert np.isnan(profile.numbers).all()


def test_words_among_numbers_stand_after_the_numbers():
    profile = profile_column("Q5", pd.Series(["refused", "10", "2,5", "9"]))
    assert list(profile.texts) == ["2,5", "9", "10", "refused"]
    assert profile.numbers[:3].tolist() == [2.5, 9.0, 10.0]
    assert not profile.all_numbers
    assert profile.without({"refused"}).all_numbers


def test_a_profile_without_codes_forgets_their_cells():
    profile = profile_column("Q1", pd.Series([1, 2, 2, 99, 99, 99]))
    rest = profile.without({"99", "98"})
    assert list(rest.texts) == ["1", "2"]
    assert rest.filled == 3
    assert profile.count_of("99") == 3
    assert profile.count_of("98") == profile.count_of("word") == 0
    assert profile.without(set()) is profile


def test_a_code_is_found_only_as_it_is_written():
    profile = profile_column("Q1", pd.Series([5.0, 6.0]))
    assert profile.holds("5")
    assert not profile.holds("5.0")
    assert not profile.holds("05")


def test_arrays_are_read_only():
    for column in (pd.Series([1, 2]), pd.Series(["a", "b"])):
        profile = profile_column("Q1", column)
        assert not profile.counts.flags.writeable
        assert not profile.numbers.flags.writeable


@pytest.mark.parametrize(
    ("value", "code"), [(5.0, "5"), (-1.0, "-1"), (2.5, "2.5"), (99999.0, "99999"), (0.0, "0")]
)
def test_whole_numbers_are_written_without_decimals(value, code):
    assert code_text(value) == code


def test_a_comma_is_a_decimal_mark_unless_it_may_separate_thousands():
    assert numbers_of(("12,5", "1,234")).tolist() == [12.5, 1.234]
    assert np.isnan(numbers_of(("1,234", "12,345"))).all()
    assert numbers_of(("-1", "+2", ".5", "3.25")).tolist() == [-1, 2, 0.5, 3.25]


@pytest.mark.parametrize("text", ["nan", "inf", "1e5", "1_000", "0x10", "12 kg", "", "5-10"])
def test_other_texts_are_no_numbers(text):
    assert np.isnan(numbers_of((text,))[0])


def test_leading_numbers_of_scale_labels():
    texts = ("10 - very good", "9", "0 (not at all)", "1 = bad", "18-24", "good")
    found = leading_numbers(texts)
    assert found[:4].tolist() == [10, 9, 0, 1]
    assert np.isnan(found[4:]).all()
