"""From the plan to the design: what the estimators are told, and what a figure then says."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from app.study.design_building import build_design
from app.study.sampling_plan import SamplingMethod
from tests.support.studies import chance, strata

N = 12
FILE = pd.DataFrame(
    {
        "area": ["N"] * 8 + ["S"] * 4,
        "shop": [float(i // 2) for i in range(N)],
        "w": [2.0] * 8 + [5.0] * 4,
    }
)
BY_AREA = {"strata_column": "area", "strata": strata(N=80, S=10)}


def codes(built):
    return [caution.code for caution in built.design.cautions]


def test_a_simple_draw_from_a_known_universe():
    design = build_design(chance(60), FILE).design
    assert (design.population_size, design.weights.tolist()) == (60, [5.0] * N)
    assert design.stages.fractions.tolist() == [0.2]


def test_drawn_twice_has_no_finite_correction():
    design = build_design(chance(60, replacement=True), FILE).design
    assert design.replacement
    assert design.stages.fractions.tolist() == [0.0]


def test_strata_give_their_weights():
    built = build_design(chance(**BY_AREA), FILE)
    assert built.design.weights.tolist() == [10.0] * 8 + [2.5] * 4
    assert built.design.population_size == 90
    assert sorted(built.design.stages.fractions) == [0.1, 0.4]
    assert not built.endless.stages.is_corrected
    assert built.endless.weights.tolist() == built.design.weights.tolist()


def test_a_stratum_without_rows_and_without_count_is_passed_over():
    plan = chance(strata_column="area", strata=strata(N=80, S=10, E=None))
    built = build_design(plan, FILE)
    assert not built.fallback
    assert built.design.population_size == 90


def test_an_attempted_census_says_what_it_assumes():
    everybody = SamplingMethod.EVERYBODY
    for plan in (
        chance(60, method=everybody),
        chance(method=everybody, **BY_AREA),
        chance(60, method=everybody, weights_column="w"),
    ):
        assert codes(build_design(plan, FILE)) == ["attempted_census"]
    design = build_design(chance(method=everybody, **BY_AREA), FILE).design
    assert design.weights.tolist() == [10.0] * 8 + [2.5] * 4


def test_the_two_methods_that_promise_nothing_carry_a_caution_on_every_figure():
    not_sure = build_design(chance(60, method=SamplingMethod.NOT_SURE), FILE)
    assert codes(not_sure) == ["not_sure"]
    assert not_sure.design.population_size is None
    assert [c.code for c in not_sure.endless.cautions] == ["not_sure"]
    assert codes(build_design(chance(method=SamplingMethod.QUOTA), FILE)) == ["quota_sample"]


def test_weights_from_the_file():
    design = build_design(chance(weights_column="w"), FILE).design
    assert design.weights.tolist() == FILE["w"].tolist()
    assert not design.stages.is_corrected


def test_weights_with_counts_by_stratum_correct_each_stratum_by_its_own():
    design = build_design(chance(weights_column="w", **BY_AREA), FILE).design
    assert sorted(design.stages.fractions) == [0.1, 0.4]


def test_weights_and_drawing_twice_leave_out_the_correction():
    design = build_design(chance(90, weights_column="w", replacement=True), FILE).design
    assert design.replacement
    assert not design.stages.is_corrected


def test_groups_drawn_first():
    plan = chance(method=SamplingMethod.GROUPS, clusters_column="shop", universe_clusters=30)
    design = build_design(plan, FILE).design
    assert design.stages.units_drawn.tolist() == [6]
    assert design.stages.fractions.tolist() == [0.2]
    assert design.degrees_of_freedom == 5


def test_groups_within_strata_of_known_size_count_for_their_stratum():
    plan = chance(method=SamplingMethod.GROUPS, clusters_column="shop", **BY_AREA)
    design = build_design(plan, FILE).design
    np.testing.assert_allclose(design.weights, [10.0] * 8 + [2.5] * 4)
    assert codes(build_design(plan, FILE)) == ["endless_first_stage"]


@pytest.mark.parametrize(
    "plan",
    [
        chance(5),
        chance(strata_column="area", strata=strata(N=80)),
        chance(weights_column="gone"),
        chance(method=SamplingMethod.GROUPS),
    ],
)
def test_a_plan_that_contradicts_the_file_gives_way_to_a_simple_draw(plan):
    built = build_design(plan, FILE)
    assert built.fallback
    assert [p.blocks for p in built.problems] == [True]
    assert built.design.population_size is None
    assert built.design.weights.tolist() == [1.0] * N
    assert codes(built) == ["plan_not_used"]


def test_what_only_the_estimators_see_is_told_in_one_sentence():
    plan = chance(strata_column="area", weights_column="w", strata=strata(N=7, S=10))
    built = build_design(plan, FILE)
    assert built.fallback
    assert built.problems[-1].field == "method"
    assert built.problems[-1].sentence.startswith("The plan does not fit the file: ")


def test_a_file_without_rows_still_has_a_design():
    assert build_design(chance(), FILE.iloc[:0]).design.n == 1
