"""Small studies in a store, made from files written in code."""

from __future__ import annotations

from dataclasses import replace

from app.store import Database
from app.study.sample_studies import garden_centres
from app.study.sampling_plan import SamplingMethod, SamplingPlan, StratumCount
from app.widgets.deliveries import deliver, open_sample

REGIONS = ("North", "South")
ROWS = 120


def orchard_csv(rows: int = ROWS) -> bytes:
    """Return a file of growers: register number, region, village, size, a scale, a number."""
    head = (
        "ID,REGION,VILLAGE,SIZE,Q1,Q2,Q3,W\n"
        "Register number,Region,Village,Size,How satisfied are you? (0 to 10),"
        "Will you plant more trees?,How much did you harvest?,Weight\n"
    )
    lines = (
        f"{i + 1:05d},{REGIONS[i % 2]},V{i % 12:02d},{('small', 'large')[i % 3 == 0]},"
        f"{99 if i % 40 == 7 else (i * 7) % 11},{('Yes', 'No', 'Perhaps')[i % 3]},"
        f"{10 + (i * 37) % 211}.5,{0.5 + (i % 4) * 0.3333:.4f}\n"
        for i in range(rows)
    )
    return (head + "".join(lines)).encode()


def orchard(store: Database, plan: SamplingPlan | None = None, *, settled: bool = True) -> str:
    """Make a study of growers; with a plan it is confirmed, settled means no open proposal."""
    study = deliver(store, "", orchard_csv(), "growers.csv").study_id
    if settled:
        settle(store, study)
    if plan is not None:
        save_plan(store, study, plan)
    return study


def settle(store: Database, study: str) -> None:
    """Accept every proposal."""
    store.save_questions(
        study,
        [
            replace(s, question=s.question.settled(accept=True))
            for s in store.stored_questions(study)
            if s.question.needs_you
        ],
    )


def save_plan(store: Database, study: str, plan: SamplingPlan) -> None:
    store.save_plan(study, plan, store.plan(study).version)


CHANCE = SamplingPlan(
    universe="all growers of the valley",
    unit_one="grower",
    unit_many="growers",
    universe_size=400,
    method=SamplingMethod.CHANCE,
    provisional=False,
)
SEPARATE = replace(
    CHANCE,
    universe_size=None,
    strata_column="REGION",
    strata=(StratumCount("North", 150), StratumCount("South", 250)),
)


def sample(store: Database) -> str:
    """Open the sample study that comes with the program and accept every proposal."""
    study = open_sample(store, garden_centres())
    settle(store, study)
    return study
