"""Codes for no answer are proposed where they lie outside the other values, and nowhere else.

Which numbers fieldwork uses for no answer is common practice, no single source.
"""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from app.study.column_profiles import profile_column
from app.study.missing_codes import number_codes, number_proposals, word_codes, word_proposals
from app.study.questions import MissingReason


def codes(values, text=""):
    return set(number_codes(profile_column("Q1", pd.Series(values, dtype=float)), text))


@pytest.mark.parametrize(
    ("values", "expected"),
    [
        ([*range(11)] * 5 + [98, 99], {"98", "99"}),
        ([1, 2, 3, 4, 5] * 5 + [9], {"9"}),
        ([1, 2, 3, 4, 5] * 5 + [8, 9], {"8", "9"}),
        ([1, 2, 3, 4, 5, 6, 7] * 5 + [9], {"9"}),
        ([1, 2, 3, 4, 5, 6] * 5 + [8, 9], {"8", "9"}),
        ([1, 2, 3, 4, 5] * 5 + [-1, -9, -99], {"-1", "-9", "-99"}),
        ([0, 1] * 5 + [99], {"99"}),
        ([1, 2, 3] * 5 + [999], {"999"}),
        ([0, 1, 2] * 5 + [-1, 9], {"-1", "9"}),
        (list(range(18, 88)) * 2 + [99] * 12, {"99"}),
        (list(range(18, 80)) * 2 + [999], {"999"}),
        (list(range(100, 5100, 10)) + [99999] * 3, {"99999"}),
    ],
)
def test_codes_outside_the_range_are_proposed(values, expected):
    assert codes(values) == expected


@pytest.mark.parametrize(
    "values",
    [
        list(range(11)) * 5,  # 9 lies inside 0 to 10
        list(range(1, 10)) * 5,  # 9 follows 8
        list(range(1, 9)) * 3 + [9],
        list(range(-3, 4)) * 5,  # a scale around zero
        list(range(-8, 31)) * 2,  # degrees: negative numbers are real
        list(range(18, 100)) * 2,  # 99 can be an age
        list(range(50, 150)) * 2,  # 97, 98, 99 lie inside
        [12.5, 14.0, 99.5, 1200.25],
        [99, 99, 99],  # nothing else to compare with
    ],
)
def test_numbers_inside_the_range_are_answers(values):
    assert codes(values) == set()


def test_a_code_inside_the_range_is_proposed_when_it_is_far_too_frequent():
    rng = np.random.default_rng(3)
    spend = np.round(rng.lognormal(8, 2, 600), 2)
    assert spend.max() > 2 * 99999
    assert codes([*spend, *[99999] * 20]) == {"99999"}
    assert codes([*spend, *[99999] * 2]) == set()


def test_the_question_text_decides_where_it_speaks():
    assert codes([1, 2, 3, 4, 5, 6, 9] * 3, "How good? (1 to 10)") == set()
    found = number_codes(
        profile_column("Q1", pd.Series([1, 2, 3, 4, 77])), "1 = low, 4 = high, 77 = refused"
    )
    assert found == {"77": MissingReason.REFUSED}


def test_usual_reasons():
    scale = profile_column("Q1", pd.Series([*range(11), 97, 98, 99]))
    assert number_codes(scale) == {
        "97": MissingReason.NOT_ASKED,
        "98": MissingReason.REFUSED,
        "99": MissingReason.DONT_KNOW,
    }
    amount = profile_column("Q5", pd.Series([*range(100, 200), 99999, 99999]))
    assert number_codes(amount) == {"99999": MissingReason.REFUSED}
    short = profile_column("Q6", pd.Series([1, 2, 3, 4, 5, -1, 9]))
    assert number_codes(short) == {"-1": MissingReason.NOT_ASKED, "9": MissingReason.NO_ANSWER}


def test_the_consequence_gives_the_average_without_and_with_the_code():
    # Worked by hand: (10 * 6 + 20 * 4) / 10 = 14; with two 99s: (140 + 198) / 12 = 28.1667.
    values = [10.0] * 6 + [20.0] * 4 + [99.0] * 2
    profile = profile_column("Q5", pd.Series(values))
    (proposal,) = number_proposals(profile, {"99": MissingReason.REFUSED})
    assert proposal.consequence == "average 14.0 without · 28.2 with"
    assert proposal.evidence == "99 is far outside 10 to 20; 2 answers"
    assert (proposal.code, proposal.reason, proposal.kind) == ("99", MissingReason.REFUSED, None)


def test_each_code_is_weighed_alone_against_the_rest():
    # (0 + 10) / 2 = 5 without; with 98 alone (0 + 10 + 98) / 3 = 36, with 99 alone 109 / 3 = 36.33.
    profile = profile_column("Q1", pd.Series([0, 10, 98, 99]))
    reasons = {"98": MissingReason.REFUSED, "99": MissingReason.DONT_KNOW}
    first, second = number_proposals(profile, reasons)
    assert first.consequence == "average 5.00 without · 36.0 with"
    assert second.consequence == "average 5.00 without · 36.3 with"


def test_words_among_numbers_are_proposed_with_the_average_of_the_others():
    profile = profile_column("Q5", pd.Series(["10", "20", "refused", "refused"]))
    found = word_codes(profile)
    assert found == {"refused": MissingReason.REFUSED}
    (proposal,) = number_proposals(profile, found)
    assert proposal.consequence == "average 15.0, made from the other 2 answers"
    assert proposal.evidence == "“refused” is a word among numbers; 2 answers"


def test_a_word_of_a_choice_comes_with_the_share_of_the_top_answer():
    # 6 of 10 without, 6 of 12 with.
    labels = ["Yes"] * 6 + ["No"] * 4 + ["Don't know"] * 2
    profile = profile_column("Q4", pd.Series(labels))
    (proposal,) = word_proposals(profile, word_codes(profile))
    assert proposal.consequence == "Yes 60\u00a0% without · 50\u00a0% with"
    assert proposal.evidence == "“Don't know” is no answer to the question; 2 answers"


def test_shares_that_round_alike_are_written_finer():
    labels = ["Yes"] * 600 + ["No"] * 400 + ["k. A."]
    profile = profile_column("Q4", pd.Series(labels))
    (proposal,) = word_proposals(profile, word_codes(profile))
    assert proposal.consequence == "Yes 60.0\u00a0% without · 59.9\u00a0% with"
    assert proposal.evidence.startswith(
        "“k. A.” is no answer to the question and means no answer; 1 a"
    )


def test_codes_never_use_up_all_values():
    assert codes([99, 99], "99 = refused") == set()
    assert codes([-1, 99, -1]) == set()


def test_numbers_beyond_reading_are_written_short():
    profile = profile_column("Q5", pd.Series([1e300, 2e300, -99.0]))
    (proposal,) = number_proposals(profile, {"-99": MissingReason.NO_ANSWER})
    assert proposal.evidence == "−99 is far outside 1.00e+300 to 2.00e+300; 1 answer"
    largest = profile_column("Q5", pd.Series([1.7e308, 1.6e308, -99.0]))
    (proposal,) = number_proposals(largest, {"-99": MissingReason.NO_ANSWER})
    assert proposal.consequence == "average unknown without · unknown with"
