"""What a plan does to a share of one half, in numbers and in words."""

from __future__ import annotations

import math

import pandas as pd
import pytest
from scipy import stats

from app.study.design_building import build_design
from app.study.plan_effect import PlanEffect, plan_effect
from tests.support.studies import chance, garden_data, strata
from tests.support.textbook_figures import wilson

Z = float(stats.norm.ppf(0.975))


def effect(plan, answers):
    return plan_effect(plan, build_design(plan, answers), answers)


def test_an_endless_universe_is_wilson_on_the_rows():
    found = effect(chance(), pd.DataFrame({"a": range(100)}))
    low, high = wilson(0.5, 100)
    assert found.points == pytest.approx(50 * (high - low))
    assert found.endless_points == pytest.approx(found.points)
    assert found.universe is None


def test_a_known_universe_narrows_it_to_whole_units():
    """100 of 400: worth 100 / (1 - 1/4) answers, ends opened to whole units (rule 6)."""
    found = effect(chance(400), pd.DataFrame({"a": range(100)}))
    low, high = wilson(0.5, 100 / 0.75)
    whole = (math.ceil(high * 400) - math.floor(low * 400)) / 400
    assert found.points == pytest.approx(50 * whole)
    low, high = wilson(0.5, 100)
    assert found.endless_points == pytest.approx(50 * (high - low))


def test_the_sample_study():
    data = garden_data()
    found = plan_effect(data.plan, data.built, data.answers)
    assert (found.asked, found.universe) == (395, 1184)
    assert found.points < found.endless_points


def test_halves_are_taken_within_strata():
    answers = pd.DataFrame({"area": ["N", "S"] * 20})
    plan = chance(strata_column="area", strata=strata(N=100, S=300))
    assert effect(plan, answers).points > 0


def test_a_plan_that_cannot_be_used_claims_no_universe():
    found = effect(chance(5), pd.DataFrame({"a": range(10)}))
    assert found.universe is None
    assert found.points == found.endless_points


@pytest.mark.parametrize(
    ("asked", "universe", "words"),
    [
        (395, 1184, "one in three"),
        (1184, 1184, "everybody"),
        (1183, 1184, "nearly everybody"),
        (50, 100, "one in two"),
        (40, 100, "40 in a hundred"),
        (72, 100, "72 in a hundred"),
        (100, 1000, "one in ten"),
        (3, 100, "one in 33"),
        (1, 1184, "one in 1,184"),
        (120, 100, "some more than once"),
        (40, None, ""),
    ],
)
def test_the_part_that_answered_in_words(asked, universe, words):
    assert PlanEffect(4.0, 5.0, asked, universe).fraction_words == words


@pytest.mark.parametrize("universe", range(100, 160))
@pytest.mark.parametrize("asked", [12, 33, 37, 45, 61, 88])
def test_words_are_true_within_a_few_points(asked, universe):
    numbers = ("two", "three", "four", "five", "six", "seven", "eight", "nine", "ten")
    words = PlanEffect(4.0, 5.0, asked, universe).fraction_words
    if words.endswith("in a hundred"):
        said = int(words.split()[0]) / 100
    else:
        last = words.rsplit(" ", 1)[1]
        said = 1 / (numbers.index(last) + 2 if last in numbers else int(last))
    assert abs(said - asked / universe) <= 0.031
