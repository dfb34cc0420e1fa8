"""The sampling plan of a study."""

from __future__ import annotations

import pytest

from app.store import StaleVersionError, StoredPlan
from app.study.sampling_plan import SamplingMethod, SamplingPlan, StratumCount

PLAN = SamplingPlan(
    universe="all garden centres in the four regions",
    unit_one="garden centre",
    unit_many="garden centres",
    universe_size=1184,
    as_of="1 January 2026",
    source="trade register",
    method=SamplingMethod.CHANCE,
    strata_column="region",
    strata=(StratumCount("north", 310), StratumCount("south", None)),
    provisional=False,
)


def test_before_anything_was_told_the_plan_is_provisional(database, study) -> None:
    assert database.plan(study.id) == StoredPlan(SamplingPlan(), 0, study.created_at)
    assert database.plan(study.id).plan.provisional


def test_a_plan_is_found_as_it_was_saved(database, study, clock) -> None:
    saved = database.save_plan(study.id, PLAN, 0)
    assert saved == StoredPlan(PLAN, 1, clock.present)
    assert database.plan(study.id) == saved
    again = database.save_plan(study.id, SamplingPlan(), saved.version)
    assert again.version == 2
    assert database.plan(study.id) == again


@pytest.mark.parametrize("version", [0, 1, 3])
def test_another_version_is_refused(database, study, clock, version) -> None:
    database.save_plan(study.id, SamplingPlan(), 0)
    saved = database.save_plan(study.id, PLAN, 1)
    clock.go_on(minutes=2)
    with pytest.raises(StaleVersionError, match="two minutes ago") as caught:
        database.save_plan(study.id, SamplingPlan(), version)
    assert caught.value.changed_at == saved.changed_at
    assert database.plan(study.id).plan == PLAN


def test_a_version_of_a_plan_that_was_never_saved_is_refused(database, study) -> None:
    with pytest.raises(StaleVersionError):
        database.save_plan(study.id, PLAN, 1)
    assert database.plan(study.id).version == 0
