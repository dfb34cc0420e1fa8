"""Every rule of writing numbers, and what must hold for any number at all."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.study.number_format import (
    MINUS,
    NO_BREAK,
    column_step,
    figure_words,
    step_for,
    write_about,
    write_amount,
    write_count,
    write_number,
    write_plain,
    write_share,
)

NB = NO_BREAK
ANY = st.floats(allow_nan=False, allow_infinity=False)
ANY_AT_ALL = st.floats()
SCALES = {"": 1, "million": 10**6, "billion": 10**9}


def read_back(text: str, unit: str = "", decimal_mark: str = ".") -> Fraction:
    """Read a printed number by hand: thousands out, the minus sign of type set as one."""
    thousands = "." if decimal_mark == "," else ","
    plain = text.replace(thousands, "").replace(decimal_mark, ".").replace(MINUS, "-")
    return Fraction(plain) * SCALES[unit]


@pytest.mark.parametrize(
    ("half_width", "step"), [(4, 1), (1.5, 0.1), (0.18, 0.01), (310_000, 100_000)]
)
def test_the_step_of_the_examples(half_width, step):
    assert step_for(half_width, share=False) == step


@pytest.mark.parametrize(("half_width", "step"), [(2, 1), (1.999, 0.1), (0.2, 0.1), (20, 10)])
def test_the_step_is_the_largest_power_of_ten_not_above_half(half_width, step):
    assert step_for(half_width, share=False) == step


def test_shares_are_never_finer_than_a_tenth_of_a_point():
    assert step_for(0.0003, share=True) == 0.1
    assert figure_words(0.42345, 0.42344, 0.42346, share=True).value == "42.3"


def test_without_a_width_the_value_decides():
    assert step_for(0.0, share=False, value=7) == 1
    assert step_for(math.nan, share=False, value=123.456) == 0.1
    assert step_for(math.inf, share=True, value=41.7) == 0.1


def test_a_column_has_the_step_of_its_median_half_width():
    assert column_step([0.18, 4, 5, math.inf, 0.0], share=False) == 1
    assert column_step([], share=True) == 0.1
    assert column_step([0.0, 0.0], share=False, values=[3.4567, 12.0]) == 0.001
    assert column_step([math.nan], share=False, values=[3, 12]) == 1


def test_a_share_with_equal_arms():
    words = figure_words(0.42, 0.38, 0.46, share=True)
    assert (words.value, words.low, words.high, words.unit) == ("42", "38", "46", "%")
    assert (words.full, words.between) == (f"42{NB}%", f"38 to 46{NB}%")
    assert words.plus_minus == "±4"


def test_three_of_forty_has_no_plus_minus():
    """3 of 40: Wilson 2.6 to 19.9 %, arms 5 and 12."""
    words = figure_words(0.075, 0.0258, 0.1986, share=True)
    assert words.plus_minus == ""
    assert words.between == f"3 to 20{NB}%"


def test_large_numbers_are_written_in_words():
    words = figure_words(4_810_000, 4_500_000, 5_120_000, share=False)
    assert words.full == f"4.8{NB}million"
    assert words.between == f"4.5 to 5.1{NB}million"
    assert words.plus_minus == "±0.3"
    assert figure_words(4_812_345, 4_812_045, 4_812_645, share=False).full == "4,812,300"
    assert figure_words(2.5e9, 2.1e9, 2.9e9, share=False).full == f"2.5{NB}billion"
    assert write_amount(2_100_000, 100_000) == f"2.1{NB}million"
    assert write_amount(999_950, 10_000) == f"1.00{NB}million"


def test_ends_that_round_to_none_or_all_are_said_in_words():
    words = figure_words(0.03, 0.004, 0.056, share=True)
    assert words.between == f"under 1 to 6{NB}%"
    assert figure_words(0.97, 0.944, 0.996, share=True).between == f"94 to over 99{NB}%"
    assert figure_words(0.0, 0.0, 0.09, share=True).value == "0"
    assert figure_words(1.0, 0.91, 1.0, share=True).high == "100"
    assert figure_words(0.0002, 0.0001, 0.004, share=True).value == "under 0.1"
    assert figure_words(0.9998, 0.996, 0.9999, share=True).value == "over 99.9"


def test_a_tie_goes_up_as_it_is_written_not_as_it_is_stored():
    """0.285 is stored a little below; a reader sees 28.5."""
    assert figure_words(0.285, 0.245, 0.325, share=True).value == "29"
    assert write_number(-2.5, 1.0) == f"{MINUS}3"
    assert write_number(-0.4, 1.0) == "0"


def test_language_of_numbers():
    words = figure_words(-1234.56, -1234.96, -1234.16, share=False, decimal_mark=",")
    assert words.full == f"{MINUS}1.234,6"
    assert write_count(1184) == "1,184"
    assert write_count(1184, ",") == "1.184"
    assert write_plain(2.5, ",") == "2,5"
    assert write_plain(-3) == f"{MINUS}3"
    assert write_plain(1e-7) == "0.0000001"
    assert write_share(0.285) == "29"
    assert write_about(1234.5) == "1,230"
    assert write_about(0.0) == "0"


def test_all_three_share_the_step_of_the_column():
    words = figure_words(6.953, 6.77, 7.13, share=False, step=0.1)
    assert (words.value, words.low, words.high, words.step) == ("7.0", "6.8", "7.1", 0.1)


def test_unbounded_intervals_say_so():
    words = figure_words(3.2, -math.inf, math.inf, share=False)
    assert words.between == "too few answers to say"
    assert words.plus_minus == ""
    assert figure_words(math.nan, math.nan, math.nan, share=True).full == f"unknown{NB}%"
    assert write_plain(math.nan) == write_count(math.inf) == write_about(math.inf) == "unknown"


@given(ANY, ANY, ANY)
def test_what_is_written_lies_within_half_a_step(a, b, c):
    low, value, high = sorted((a, b, c))
    words = figure_words(value, low, high, share=False)
    half = Fraction(repr(words.step)) / 2
    for text, number in ((words.value, value), (words.low, low), (words.high, high)):
        assert abs(read_back(text, words.unit) - Fraction(repr(number))) <= half


@given(st.floats(0, 1), st.floats(0, 1), st.floats(0, 1), st.sampled_from([".", ","]))
def test_shares_are_written_within_half_a_step(a, b, c, mark):
    low, value, high = sorted((a, b, c))
    words = figure_words(value, low, high, share=True, decimal_mark=mark)
    for text, part in ((words.value, value), (words.low, low), (words.high, high)):
        bound = text.removeprefix("under ").removeprefix("over ")
        written = float(read_back(bound, "", mark))
        if text.startswith("under"):
            assert 0 < part * 100 < written
        elif text.startswith("over"):
            assert written < part * 100 < 100
        else:
            assert abs(written - part * 100) <= words.step / 2 + 1e-6


@given(ANY, ANY, st.integers(-8, 8))
def test_writing_keeps_the_order(a, b, exponent):
    low, high = sorted((a, b))
    step = float(f"1e{exponent}")
    assert read_back(write_number(low, step)) <= read_back(write_number(high, step))


@given(ANY_AT_ALL, ANY_AT_ALL, ANY_AT_ALL, st.booleans())
def test_nothing_makes_it_fail(value, low, high, share):
    words = figure_words(value, low, high, share=share)
    assert words.full and words.between
    assert write_amount(value, 1.0) and write_plain(value) and write_about(value)


@given(st.integers(-(10**12), 10**12), st.sampled_from([".", ","]))
def test_counts_are_read_back_whole(count, mark):
    assert read_back(write_count(count, mark), "", mark) == count
