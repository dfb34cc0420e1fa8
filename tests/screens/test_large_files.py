"""Every screen with a file of 10,000 people and 300 columns."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from app.study.sampling_plan import StratumCount
from app.widgets.deliveries import deliver
from tests.support.screen_windows import Window
from tests.support.small_studies import SEPARATE, save_plan

REGIONS = ("North", "East", "South", "West")


def large_csv(rng, rows: int = 10_000, columns: int = 300) -> bytes:
    """Return scales, choices, amounts and yes-or-no columns in turn."""
    kinds = (
        lambda: rng.integers(0, 11, rows).astype(str),
        lambda: rng.choice(["Yes", "No", "Perhaps"], rows),
        lambda: np.round(rng.exponential(100, rows), 2).astype(str),
        lambda: rng.integers(0, 2, rows).astype(str),
    )
    cells = [rng.choice(REGIONS, rows), *(kinds[i % 4]() for i in range(columns - 1))]
    head = ",".join(["REGION", *(f"Q{i}" for i in range(columns - 1))])
    return "\n".join([head, *map(",".join, zip(*cells, strict=True))]).encode()


def test_every_screen_opens(store, rng):
    study = deliver(store, "", large_csv(rng), "large.csv").study_id
    strata = tuple(StratumCount(name, 10_000) for name in REGIONS)
    save_plan(store, study, replace(SEPARATE, strata=strata))
    for screen in ("studies", "file", "questions", "plan", "figure", "readouts"):
        assert Window(screen, study=study).problems == []
    for question, statistic in (("Q0", "average"), ("Q1", "share"), ("Q2", "total")):
        window = Window("figure", study=study, q=question, s=statistic)
        assert 'data-figure="value"' in window.html
        window.press("keep")
    window = Window("readouts", study=study).press("publish")
    assert len(window.test.code) == 1
