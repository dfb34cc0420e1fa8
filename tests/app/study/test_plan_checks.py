"""Every contradiction between plan and file: which field, what is wrong, what to do."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from app.study.plan_checks import (
    check_plan,
    known_universe,
    label_texts,
    stratum_rows,
    universe_from_strata,
)
from app.study.sampling_plan import SamplingMethod
from tests.support.studies import chance, strata

FILE = pd.DataFrame({"area": ["N", "N", "S"], "code": [1.0, 2.0, 2.0], "w": [1.0, 2.0, 0.5]})


def problems(plan, answers=FILE):
    return [(p.field, p.sentence, p.blocks) for p in check_plan(plan, answers)]


def only(plan, answers=FILE):
    found = problems(plan, answers)
    assert len(found) == 1
    return found[0]


def test_a_plan_that_fits_has_no_problem():
    assert problems(chance(10)) == []
    assert problems(chance(30, strata_column="area", strata=strata(N=20, S=10))) == []


def test_a_universe_smaller_than_the_file():
    field, sentence, blocks = only(chance(2))
    assert (field, blocks) == ("universe_size", True)
    assert sentence == (
        "The file has 3 answers but the universe only 2: correct the universe, or say that each "
        "could be drawn twice."
    )
    assert problems(chance(2, replacement=True)) == []


def test_the_switch_for_drawing_twice_counts_only_where_it_can_be_seen():
    plan = chance(2, replacement=True, method=SamplingMethod.EVERYBODY)
    assert only(plan)[1] == (
        "The file has 3 answers but the universe only 2: correct the universe."
    )


def test_strata_that_do_not_add_up_are_said_but_do_not_block():
    field, sentence, blocks = only(chance(31, strata_column="area", strata=strata(N=20, S=10)))
    assert (field, blocks) == ("universe_size", False)
    assert sentence == (
        "The strata add up to 30 but the universe is given as 31: correct one of them. Until then "
        "the strata count."
    )


@pytest.mark.parametrize(
    ("sizes", "sentence", "blocks"),
    [
        ({"N": 20}, "S: 1 answer but no universe count: type it or merge the stratum.", True),
        ({"N": 1, "S": 9}, "N: 2 answers but only 1 in the universe: correct the count.", True),
        (
            {"N": 20, "S": 10, "E": 5},
            "E: 5 in the universe but no answer in the file: merge it with another stratum or take "
            "it out.",
            True,
        ),
        (
            {"N": 20, "S": 10, "E": None},
            "E: neither an answer in the file nor a universe count: take it out.",
            False,
        ),
    ],
)
def test_each_stratum_is_named(sizes, sentence, blocks):
    assert only(chance(strata_column="area", strata=strata(**sizes))) == (
        "strata",
        sentence,
        blocks,
    )


@pytest.mark.parametrize("method", [SamplingMethod.QUOTA, SamplingMethod.NOT_SURE])
def test_counts_are_not_asked_for_where_they_are_not_used(method):
    assert problems(chance(method=method, strata_column="area")) == []


def test_a_stratum_column_that_is_gone_or_has_blanks():
    assert only(chance(strata_column="region"))[:2] == (
        "strata_column",
        "The file has no column region: choose another.",
    )
    blank = FILE.assign(area=["N", None, " "])
    found = problems(chance(strata_column="area", strata=strata(N=5)), blank)
    assert found == [
        (
            "strata_column",
            "2 answers have no area: fill it in the file, or do not separate the draw by it.",
            True,
        )
    ]


def test_strata_labelled_by_numbers_match_what_is_typed():
    assert stratum_rows(chance(strata_column="code"), FILE) == {"1": 1, "2": 2}
    plan = chance(strata_column="code", strata=strata(**{"1": 10, "2": 10}))
    assert problems(plan) == []
    odd = pd.Series([1.5, np.nan, np.inf, 7.0])
    assert label_texts(odd).tolist() == ["1.5", "", "inf", "7"]


def test_weights_that_cannot_be_used():
    assert only(chance(weights_column="weight"))[1] == (
        "The file has no column weight: choose another."
    )
    bad = FILE.assign(w=["1", "-2", "x"])
    assert only(chance(weights_column="w"), bad)[:2] == (
        "weights_column",
        "2 weights in w are missing, no number, zero or negative (answers 2, 3): mend them in the "
        "file, or choose another column.",
    )
    many = pd.DataFrame({"w": [0.0] * 9})
    assert "(answers 1, 2, 3, 4, 5 ...)" in only(chance(weights_column="w"), many)[1]


def groups(**more):
    return chance(method=SamplingMethod.GROUPS, **more)


def test_groups_need_a_column():
    assert only(groups())[1] == "Say which column names the group drawn first."
    assert only(groups(clusters_column="shop"))[1] == (
        "The file has no column shop: choose another."
    )


def test_groups_against_the_file():
    assert only(groups(clusters_column="code", universe_clusters=1))[:2] == (
        "universe_clusters",
        "The file has 2 groups but the universe only 1: correct the number.",
    )
    blank = FILE.assign(code=[1.0, np.nan, 2.0])
    assert only(groups(clusters_column="code"), blank)[1] == (
        "1 answer has no code: fill it in the file, or choose another column."
    )
    one = FILE.assign(code=1.0)
    field, sentence, blocks = only(groups(clusters_column="code"), one)
    assert (field, blocks) == ("clusters_column", False)
    assert sentence.startswith("All answers have the same code")


def test_a_group_in_two_strata_is_named():
    plan = groups(clusters_column="code", strata_column="area")
    field, sentence, blocks = only(plan)
    assert (field, blocks) == ("clusters_column", True)
    assert sentence == (
        "2: its answers have different area, but a group lies in one stratum: correct the file, or "
        "do not separate the draw by it."
    )


def test_one_number_of_groups_does_not_do_for_strata():
    apart = FILE.assign(code=[1.0, 2.0, 3.0])
    plan = groups(clusters_column="code", strata_column="area", universe_clusters=9)
    field, sentence, blocks = only(plan, apart)
    assert (field, blocks) == ("universe_clusters", False)
    assert "counted as endless" in sentence


def test_the_universe_comes_from_complete_strata_else_from_its_field():
    assert universe_from_strata(chance(7, strata_column="area", strata=strata(N=3, S=5))) == 8
    assert known_universe(chance(7, strata_column="area", strata=strata(N=3, S=5))) == 8
    assert known_universe(chance(7, strata_column="area", strata=strata(N=3, S=None))) == 7
    assert universe_from_strata(chance(7, strata=strata(N=3))) is None
    assert known_universe(chance()) is None


def test_counts_are_written_in_the_language_of_the_study():
    file = pd.DataFrame({"area": ["A"] * 1200})
    plan = chance(1100)
    for mark, counts in ((".", ("1,200", "1,100")), (",", ("1.200", "1.100"))):
        (problem,) = check_plan(plan, file, decimal_mark=mark)
        assert all(count in problem.sentence for count in counts)
