from __future__ import annotations

import pandas as pd
import pytest

from app.study.answer_orders import order_labels
from app.study.column_profiles import profile_column


def order(labels):
    return order_labels(profile_column("Q1", pd.Series(labels)))


@pytest.mark.parametrize(
    "expected",
    [
        ["Yes", "No"],
        ["small", "medium", "large", "very large"],
        ["Very dissatisfied", "Dissatisfied", "Satisfied", "Very satisfied"],
        ["Strongly disagree", "Disagree", "Neither agree nor disagree", "Agree", "Strongly agree"],
        ["never", "rarely", "sometimes", "often", "always"],
        ["Less", "About the same", "A little more", "Much more"],
        ["nie", "selten", "oft", "immer"],
    ],
)
def test_labels_of_a_known_scale_stand_in_its_order(expected):
    found, said = order(sorted(expected))
    assert list(found) == expected
    assert said == "in the order of a known scale"


def test_labels_with_numbers_stand_in_their_order():
    found, said = order(["65+", "18 to 24", "under 18", "25-34", "35-64"])
    assert found == ("under 18", "18 to 24", "25-34", "35-64", "65+")
    assert said == "in the order of their numbers"


def test_all_other_labels_stand_by_frequency_with_other_near_the_end():
    labels = ["Post"] * 2 + ["Web"] * 5 + ["Other"] * 9 + ["Shop"] * 3 + ["Don't know"] * 20
    found, said = order(labels)
    assert found == ("Web", "Shop", "Post", "Other", "Don't know")
    assert said == "the most frequent answer first"


def test_labels_that_only_mention_a_number_are_not_ordered_by_it():
    assert order(["Model 3"] * 2 + ["Model 2"] * 5)[0] == ("Model 2", "Model 3")
    assert order(["Model 3"] * 5 + ["Model 2"] * 2)[1] == "the most frequent answer first"
