from __future__ import annotations

import pandas as pd
import pytest

from app.study.column_profiles import profile_column
from app.study.scale_guessing import labelled_points, scale_ends


def ends(values, text=""):
    return scale_ends(profile_column("Q1", pd.Series(values)), text)


@pytest.mark.parametrize(
    ("values", "text", "expected"),
    [
        (range(11), "", (0, 10)),
        (range(1, 11), "", (1, 10)),
        ([1, 2, 3, 4, 5], "", (1, 5)),
        ([2, 3, 4, 5], "", None),
        ([2, 3, 4, 5, 6, 7], "", (1, 7)),
        ([3, 6, 7, 8, 9, 10], "", (1, 10)),
        ([5, 6, 7, 8, 9], "How good (0 to 10)?", (0, 10)),
        ([3, 4], "1 = not at all, 5 = very", (1, 5)),
        ([-2, -1, 0, 1, 2], "", (-2, 2)),
        ([1, 2, 3, 4], "", None),
        (range(13), "", None),
        ([1, 2, 2.5, 3, 4], "", None),
        (range(9), "On how many days did you attend?", None),
        (range(1, 7), "In which region do you work?", None),
        (range(12), "How good (0 to 10)?", None),
    ],
)
def test_ends(values, text, expected):
    assert ends(list(values), text) == expected


def test_a_scale_with_words_at_some_points():
    texts = ["10 - very good", "2", "3", "4", "5", "6", "7", "8", "9", "1 - very bad"]
    found = labelled_points(profile_column("Q1", pd.Series(texts)))
    assert found == ("1 - very bad", "2", "3", "4", "5", "6", "7", "8", "9", "10 - very good")


@pytest.mark.parametrize(
    "texts",
    [
        ["18-24", "25-34", "35-44", "45-54", "55+"],
        ["1 time", "2 times", "3 times", "4 times", "5 or more times"],
        ["a", "b", "c", "d", "e"],
        ["1", "2", "3", "4", "7 - good"],
    ],
)
def test_labels_that_are_no_scale(texts):
    assert labelled_points(profile_column("Q1", pd.Series(texts))) == ()
