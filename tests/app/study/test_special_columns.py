from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from app.study.column_profiles import profile_column
from app.study.questions import QuestionKind
from app.study.special_columns import guess_special


def guess(values, name="Q1"):
    return guess_special(profile_column(name, pd.Series(values)), "")


def test_an_empty_column_is_set_aside():
    question = guess([np.nan] * 5)
    assert question.set_aside
    assert question.evidence == "set aside, because every cell is empty"


def test_a_column_with_one_value_is_set_aside():
    question = guess(["complete"] * 1200)
    assert question.set_aside
    assert question.evidence == "set aside, because all cells say “complete”"
    partly = guess([1.0] * 3 + [np.nan] * 2)
    assert partly.evidence == "set aside, because the 3 cells that are filled all say “1”"


@pytest.mark.parametrize(
    ("values", "name"),
    [
        ([f"{i:05d}" for i in range(1, 400, 3)], "X"),
        (list(range(1, 101)), "X"),
        (list(range(10, 2000, 7)), "resp_id"),
        ([f"A{i * 7}z" for i in range(50)], "X"),
        ([4_900_000_000 + 77 * i for i in range(50)], "X"),
    ],
)
def test_identifiers(values, name):
    question = guess(values, name)
    assert question.kind is QuestionKind.IDENTIFIER
    assert question.evidence.startswith("identifier, because ")


@pytest.mark.parametrize(
    ("values", "name"),
    [
        (list(range(10, 2000, 7)), "paid"),
        ([250_000 + 77 * i for i in range(50)], "turnover"),
        ([f"we like comment {i}" for i in range(50)], "Q14"),
        ([10.5 * i for i in range(50)], "spend"),
        (["01", "02", "03"] * 40, "district"),
    ],
)
def test_columns_that_are_no_identifiers(values, name):
    found = guess(values, name)
    assert found is None or found.kind is not QuestionKind.IDENTIFIER


def test_repeated_identifiers_are_named_in_the_evidence():
    values = [f"{i:04d}" for i in range(95)] + ["0001", "0002", "0003"]
    assert guess(values, "id").evidence.endswith("although 3 of them occur more than once")


@pytest.mark.parametrize("date", ["02.03.2026", "2026-03-02 14:05", "3/14/2026", "14:05"])
def test_dates_stay_text(date):
    question = guess([date] * 20 + [date[:-1] + "7"] * 20)
    assert question.kind is QuestionKind.TEXT
    assert date in question.evidence


def test_weights_are_proposed_and_not_imposed():
    rng = np.random.default_rng(5)
    raw = rng.uniform(0.3, 2.5, 500)
    question = guess(raw / raw.mean(), "WGT")
    (proposal,) = question.proposals
    assert question.kind is QuestionKind.NUMBER
    assert proposal.kind is QuestionKind.WEIGHT
    assert "its name says so and its mean is 1" in proposal.evidence
    assert question.settled(accept=True).kind is QuestionKind.WEIGHT
    assert question.settled(accept=False).kind is QuestionKind.NUMBER


def test_the_consequence_of_weights_is_how_many_rows_they_count_like():
    # (sum of weights) ** 2 / sum of squares (Kish 1965, from memory): 4 ** 2 / 5 = 3.2
    (proposal,) = guess([0.5, 0.5, 1.5, 1.5], "weight").proposals
    assert proposal.consequence == (
        "as weights from 0.50 to 1.50 they let 4 rows count like 3 · "
        "as a number it has the average 1.00"
    )


@pytest.mark.parametrize(
    ("values", "name"), [([1.5, 2.5, -1.0], "w"), ([1.0, 2.0, 3.0], "weight"), ([80.5, 70.5], "kg")]
)
def test_no_weights(values, name):
    found = guess(values, name)
    assert found is None or not found.proposals
