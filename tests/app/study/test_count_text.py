"""Whole numbers as people type them."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.study.count_text import read_count
from app.study.number_format import write_count


@pytest.mark.parametrize(
    "typed",
    [
        "1184",
        "1,184",
        "1.184",
        "1 184",
        "1\u00a0184",
        "1\u202f184",
        "1'184",
        "1\u2019184",
        " 1184 ",
    ],
)
def test_ways_of_typing_a_thousand(typed):
    assert read_count(typed, "Universe") == 1184


def test_an_empty_field_is_no_number():
    assert read_count("  ", "Universe") is None


@pytest.mark.parametrize("typed", ["12.5", "1,18", "1,184.5", "about 90", "-5", "1.184,500", "٣"])
def test_what_is_no_whole_number_is_refused_by_name(typed):
    with pytest.raises(ValueError, match=r"^Universe: .* is no whole number; type it like 1184"):
        read_count(typed, "Universe")


@pytest.mark.parametrize("typed", ["0", "10000000001", "9" * 5000, "000"])
def test_numbers_out_of_range_say_the_range(typed):
    with pytest.raises(ValueError, match="must be at least 1 and at most ten billion"):
        read_count(typed, "Universe")


@given(st.integers(1, 10**10), st.sampled_from([".", ","]))
def test_what_the_program_writes_it_reads(count, mark):
    assert read_count(write_count(count, mark), "Universe") == count
