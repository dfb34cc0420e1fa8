from __future__ import annotations

import csv

from app.study.sample_studies import garden_centres
from app.study.sampling_plan import SamplingMethod


def test_the_files_of_the_sample_are_there():
    study = garden_centres()
    assert [path.name for path in study.files] == [
        "garden_centres_spring.csv",
        "garden_centres_autumn.csv",
    ]
    assert all(path.is_file() for path in study.files)


def test_the_plan_is_a_confirmed_draw_by_region():
    plan = garden_centres().plan
    assert plan.method is SamplingMethod.CHANCE
    assert not plan.replacement
    assert not plan.provisional
    assert plan.universe_size == sum(s.population_size for s in plan.strata) == 1184


def test_every_stratum_of_the_plan_is_a_region_of_the_file():
    study = garden_centres()
    with study.files[0].open(encoding="utf-8-sig", newline="") as file:
        rows = list(csv.DictReader(file, delimiter=";"))[1:]
    assert {s.label for s in study.plan.strata} == {row["REGION"] for row in rows}
