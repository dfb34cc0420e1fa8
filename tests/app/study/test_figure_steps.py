"""How a figure came about: each step with its count, and only what is true of the plan."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from app.study.figure_requests import FigureRequest, Statistic
from app.study.figure_steps import method_name, steps_of, uses_strata, weighted_by_stratum
from app.study.figures import compute_figure
from app.study.sampling_plan import SamplingMethod
from tests.support.studies import (
    DONT_KNOW,
    chance,
    choice,
    data_of,
    garden_data,
    number,
    strata,
    yes_no,
)

YES = FigureRequest("Q4", Statistic.SHARE, ("Yes",))


def steps(data, asked=YES):
    return {
        step.name: (step.count, step.detail)
        for step in steps_of(data, compute_figure(data, asked), file_name="kiosks.csv")
    }


def test_from_the_file_to_the_interval():
    answers = ["Yes"] * 12 + ["No"] * 18 + ["99"] * 6 + [None] * 4
    data = data_of(
        {"Q4": answers, "Q5": [1.0] * 38 + [np.nan] * 2},
        [choice("Q4", "Yes", "No", missing=(DONT_KNOW,)), number()],
        chance(400),
    )
    found = steps(data)
    assert found["file"] == ("40", "kiosks.csv")
    assert found["set aside"] == ("2", "answered nothing at all")
    assert found["asked"] == ("38", "Question Q4?")
    assert found["answered"] == ("30", "left out: 6 don't know, 2 no answer")
    assert found["weights"] == (
        "none",
        "drawn by chance from a list, universe of 400, each drawn once at most",
    )
    assert found["method"][0] == "Wilson"
    assert found["method"][1].startswith("29 degrees of freedom, design effect 1.00")
    assert found["interval"][1] == "95\u00a0% level"


def test_a_group_is_a_step_of_its_own():
    asked = FigureRequest("Q6", Statistic.AVERAGE, (), "REGION", "Lowmere", confidence=0.9)
    found = steps(garden_data(), asked)
    assert found["group"] == ("150", "Region: Lowmere")
    assert found["weights"][0] == "by stratum"
    assert found["interval"][1] == "90\u00a0% level"


def test_the_plan_in_words_claims_only_what_is_computed():
    known = 500
    quota = steps(yes_no(30, 50, chance(known, method=SamplingMethod.QUOTA)))["weights"]
    assert quota == ("none", "quotas or an online panel, counted as an endless universe")
    not_sure = steps(yes_no(30, 50, chance(known, method=SamplingMethod.NOT_SURE)))["weights"]
    assert not_sure == ("none", "not sure, counted as an endless universe")
    wrong = steps(yes_no(30, 50, chance(20)))["weights"]
    assert wrong[1].startswith("the plan contradicts the file")
    twice = steps(yes_no(30, 50, chance(known, replacement=True)))["weights"]
    assert twice[1].endswith("counted as an endless universe, each could be drawn twice")


def test_groups_drawn_first():
    data = data_of(
        {"Q4": ["Yes", "No"] * 20, "shop": [float(i // 4) for i in range(40)]},
        [choice("Q4", "Yes", "No")],
        chance(method=SamplingMethod.GROUPS, clusters_column="shop", universe_clusters=60),
    )
    assert steps(data)["weights"] == (
        "none",
        "whole groups were drawn first, 60 groups in the universe",
    )


def test_strata_and_weights():
    columns = {"Q4": ["Yes", "No"] * 20, "area": [*"NNSS"] * 10, "w": [1.5, 2.0] * 20}
    plan = chance(strata_column="area", strata=strata(N=100, S=300))
    data = data_of(columns, [choice("Q4", "Yes", "No")], plan)
    assert uses_strata(data) and weighted_by_stratum(data)
    assert steps(data)["weights"][1].startswith(
        "drawn by chance from a list, separately by area, universe of 400"
    )
    weighted = data_of(columns, [choice("Q4", "Yes", "No")], replace(plan, weights_column="w"))
    assert steps(weighted)["weights"][0] == "w"


def test_methods_by_their_names():
    data = yes_no(30, 50)
    for method, name in (("wilson", "Wilson"), ("clopper_pearson", "Clopper-Pearson")):
        assert method_name(compute_figure(data, replace(YES, method=method))) == name
    spend = FigureRequest("Q5", Statistic.AVERAGE)
    assert method_name(compute_figure(garden_data(), spend)) == "Student\u2019s t"
    median = replace(spend, statistic=Statistic.MEDIAN)
    assert method_name(compute_figure(garden_data(), median)) == "Woodruff"


def test_a_census_has_no_design_effect():
    assert "unknown" not in steps(yes_no(20, 22, chance(42)))["method"][1]
