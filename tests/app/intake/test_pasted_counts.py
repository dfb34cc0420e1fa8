"""Counts pasted from a spreadsheet: what is read, and what is named with its line."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.intake import PastedCounts, read_pasted_counts


@pytest.mark.parametrize(
    "line",
    [
        "North\t1184", "North;1184", "North; 1184;", "North: 1184", "North = 1184", "North | 1184",
        "North   1184", "North 1184", "North,1184", "North, 1,184", "North: 1.184",
        "North\t1 184", "North\t1\u00a0184", "North\t1\u202f184", "North 1\u202f184",
        "North   1 184", "North\t1'184", "North 1’184", "North\t1,184", "North 1.184",
        '"North"\t"1184"', "North\t1184.0", "North\t1.184,00", "  North \t 1184  ", "North\t+1184",
    ],
)  # fmt: skip
def test_each_way_of_writing_a_count(line):
    assert read_pasted_counts(line) == PastedCounts((("North", 1184),))


@pytest.mark.parametrize(
    ("line", "label", "count"),
    [
        ("Region 3: 12", "Region 3", 12),
        ("18-24\t300", "18-24", 300),
        ("65+ 1184", "65+", 1184),
        ("Upper, lower\t7", "Upper, lower", 7),
        ("a: b: 12", "a: b", 12),
        ("e\u0301t\u00e9\t5", "été", 5),
        ("Large\t1,184,000", "Large", 1184000),
        ("None\t0", "None", 0),
    ],
)
def test_labels_stay_whole(line, label, count):
    assert read_pasted_counts(line) == PastedCounts(((label, count),))


def test_a_heading_and_a_matching_total_are_left_out():
    read = read_pasted_counts("Region\tCount\n\nNorth\t402\nSouth\t331\n\nTotal\t733\n")
    assert read.counts == (("North", 402), ("South", 331))
    assert read.problems == ()
    assert read.remarks == (
        "Line 1 is a heading and was left out: Region Count.",
        "Line 6 is the total, 733, equal to the sum; it was left out.",
    )


@pytest.mark.parametrize(
    ("text", "problem"),
    [
        ("", "Nothing was pasted: paste a group and its count on each line."),
        ("A\t5\nB\t1.5", "Line 2: 1.5 is not a whole number (“.” stands before its decimals)."),
        ("A\tfew", "Line 1: “few” is not a whole number."),
        ("A\t12 %", "Line 1: “12 %” is not a whole number."),
        ("A\t-3", "Line 1: a count cannot be negative, but -3 is."),
        ("A\t1e3", "Line 1: “1e3” is not a whole number."),
        ("A\t5\nB", "Line 2: no count is found behind “B”."),
        ("402\nA\t5", "Line 1: the count 402 has no group in front of it."),
        ("A\t1\t2", "Line 1: 3 cells stand where a group and its count are expected."),
        ("A\t1\n\na\t2", "Line 3: “a” stands in line 1 already, with 1; keep one of them."),
        (
            "A\t1\nTotal\t3",
            "Line 2: the total is 3, but the groups add up to 1; correct the groups or remove "
            "the total.",
        ),
        ("A\t1\nTotal\t1\nSum\t1", "Two lines are called a total (lines 2 and 3): remove one."),
        (
            "Zone 1 184",
            "Line 1: it is unclear where the count begins in “Zone 1 184”; put a tab or a "
            "semicolon between group and count.",
        ),
        (
            "A\t99999999999999999999",
            "Line 1: 99,999,999,999,999,999,999 is too large for a count of units.",
        ),
    ],
)
def test_problems_name_their_line(text, problem):
    assert read_pasted_counts(text).problems == (problem,)


def test_a_mark_with_two_meanings_is_named():
    read = read_pasted_counts("A\t1.5\nB\t1.184\nC\t12")
    assert len(read.problems) == 2
    assert read.problems[1].startswith("Line 2: the “.” in the count of “B” may stand before")


def test_a_total_is_not_compared_while_lines_are_unread():
    read = read_pasted_counts("A\t1\nB\tx\nTotal\t3")
    assert read.problems == ("Line 2: “x” is not a whole number.",)
    assert read.remarks == ("Line 3 is a total and was left out.",)


@given(st.text(max_size=80))
def test_any_text_gives_a_result(text):
    read = read_pasted_counts(text)
    assert read.counts or read.problems
    assert all(count >= 0 for _, count in read.counts)


@given(st.lists(st.integers(0, 10**9), min_size=1, max_size=9), st.sampled_from(",.'’\u202f "))
def test_grouped_numbers_are_read_back(counts, mark):
    lines = [f"Group {chr(65 + i)}\t{count:,}".replace(",", mark) for i, count in enumerate(counts)]
    read = read_pasted_counts("\n".join(lines))
    assert read.problems == ()
    assert [count for _, count in read.counts] == counts
