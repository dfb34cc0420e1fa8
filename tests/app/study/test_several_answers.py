from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from app.study.column_profiles import profile_column
from app.study.questions import Answer, MissingReason, QuestionKind
from app.study.several_answers import column_stem, find_sets, set_question, split_text


def profiles(columns):
    return tuple(profile_column(name, pd.Series(values)) for name, values in columns.items())


def sets(columns, texts=None):
    return [[p.name for p in run] for run in find_sets(profiles(columns), texts or {})]


def question(columns, texts=None, taken=()):
    return set_question(profiles(columns), texts or {}, set(taken))


BLANK = np.nan
YES_NO = {
    "numbers": ([0, 1, 1, 0], [1, 0, 0, 0]),
    "one or blank": ([1, BLANK, BLANK, 1], [BLANK, 1, BLANK, BLANK]),
    "one and two": ([1, 2, 2, 1], [2, 2, 1, 1]),
    "words": (["Yes", "No", "No", "No"], ["No", "No", "Yes", "Yes"]),
    "label or blank": (["Elm", None, None, "Elm"], [None, None, "Oak", None]),
    "cross or blank": (["x", None, None, "x"], [None, None, "x", None]),
    "true and false": (["TRUE", "FALSE", "FALSE", "TRUE"], ["FALSE", "FALSE", "TRUE", "TRUE"]),
    "with codes": ([0, 1, 99, 0], [1, 0, 99, 0]),
}


@pytest.mark.parametrize("coding", YES_NO)
def test_every_usual_coding_is_one_question(coding):
    first, second = YES_NO[coding]
    assert sets({"A": [1, 2, 3, 4], "Q7_1": first, "Q7_2": second, "B": [5, 6, 7, 8]}) == [
        ["Q7_1", "Q7_2"]
    ]


def test_neighbours_of_another_stem_or_coding_stay_apart():
    first, second = YES_NO["numbers"]
    assert sets({"Q7_1": first, "Q8_1": second}) == []
    assert sets({"Q7_1": first, "Q7_2": [1, 2, 3, 4]}) == []
    assert sets({"Q7_1": first, "Q7_2": ["Yes", "No", "No", "No"]}) == []
    assert sets({"Q7": first, "Q8": second}) == []


def test_a_grid_of_ratings_is_no_set():
    assert sets({"Q2_1": [1, 2, 3, 4], "Q2_2": [2, 3, 4, 5]}) == []


def test_an_option_nobody_chose_stays_in_the_set():
    columns = {"Q7_1": [1, BLANK, 1], "Q7_2": [BLANK] * 3, "Q7_3": [BLANK, 1, BLANK]}
    assert sets(columns) == [["Q7_1", "Q7_2", "Q7_3"]]


def test_columns_named_by_question_and_option_are_found():
    first, second = YES_NO["numbers"]
    columns = {"Which trees? - Elm": first, "Which trees? - Oak": second}
    found = question(columns)
    assert sets(columns) == [list(columns)]
    assert [a.label for a in found.answers] == ["Elm", "Oak"]
    assert found.text == "Which trees?"


def test_one_question_with_an_answer_for_each_column():
    first, second = YES_NO["numbers"]
    texts = {"Q7_1": "Which trees? - Elm", "Q7_2": "Which trees? - Semi-dwarf oak"}
    found = question({"Q7_1": first, "Q7_2": second}, texts)
    assert found.key == "Q7"
    assert found.kind is QuestionKind.SEVERAL
    assert found.columns == ("Q7_1", "Q7_2")
    assert found.answers == (Answer("Q7_1", "Elm"), Answer("Q7_2", "Semi-dwarf oak"))
    assert found.text == "Which trees?"
    assert found.proposals == ()
    assert found.evidence == (
        "several answers, because 2 neighbouring columns start Q7_ and hold only 0 and 1"
    )


def test_labels_come_from_the_cells_where_they_stand_there():
    first, second = YES_NO["label or blank"]
    found = question({"Q7_1": first, "Q7_2": second}, {"Q7_1": "Trees", "Q7_2": "Trees"})
    assert [a.label for a in found.answers] == ["Elm", "Oak"]
    assert found.text == "Trees"
    assert found.evidence.endswith("a row with nothing in all of them counts as no answer")


def test_the_key_never_is_a_column_of_the_file():
    first, second = YES_NO["numbers"]
    assert question({"Q7_1": first, "Q7_2": second}, taken=("Q7",)).key == "Q7 (Q7_1 to Q7_2)"


def test_an_option_that_is_no_answer_is_proposed():
    texts = {"Q7_1": "Trees? - Elm", "Q7_2": "Trees? - Oak", "Q7_3": "Trees? - Don't know"}
    found = question({"Q7_1": [1, 0, 1], "Q7_2": [1, 1, 0], "Q7_3": [0, 0, 1]}, texts)
    (proposal,) = found.proposals
    assert (proposal.code, proposal.reason) == ("Q7_3", MissingReason.DONT_KNOW)
    assert "ticked 1 time" in proposal.evidence
    assert [a.code for a in found.settled(accept=True).answers] == ["Q7_1", "Q7_2"]


def test_codes_in_the_cells_are_proposed():
    found = question({"Q7_1": [1, 0, 99], "Q7_2": [0, 0, 99]})
    (proposal,) = found.proposals
    assert (proposal.code, proposal.reason) == ("99", MissingReason.DONT_KNOW)
    assert proposal.consequence.endswith("at most 1 of 3")


@pytest.mark.parametrize(
    ("name", "stem"),
    [("Q7_1", "Q7_"), ("Q7.12", "Q7."), ("Q7r3", "Q7r"), ("q7a", "q7"), ("brand-2", "brand-")],
)
def test_stems_of_names(name, stem):
    assert column_stem(name, {}) == stem


def test_texts_are_split_at_the_last_dash():
    assert split_text("Which trees - in all? - Semi-dwarf oak") == (
        "Which trees - in all?",
        "Semi-dwarf oak",
    )
    assert split_text("Which trees: Elm") == ("Which trees", "Elm")
    assert split_text("Which trees? [Elm]") == ("Which trees?", "Elm")
    assert split_text("Elm") == ("", "Elm")
