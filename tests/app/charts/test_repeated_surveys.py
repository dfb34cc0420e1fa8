"""A hundred made-up runs."""

from __future__ import annotations

import xml.etree.ElementTree as ET
from dataclasses import replace

import pytest

from app.charts.repeated_surveys import made_up_runs, runs_sentence, runs_svg
from tests.support.frozen_examples import (
    binomial_curve,
    mean_fan,
    normal_curve,
    share_fan,
    small_share_fan,
)


def _missing(fan) -> int:
    return sum(not run.reaches for run in made_up_runs(fan))


@pytest.mark.parametrize(
    ("multiple", "missing"),
    [(1.9600, 5), (1.6449, 10), (2.5759, 1), (1.0, 32)],
)
def test_as_many_runs_miss_as_the_normal_distribution_says(multiple, missing):
    # normal distribution: 5, 10, 1 and 31.7 % lie outside these multiples (common table, from
    # memory); the runs stand at 0.25, 1.25 ... 99.25 %
    fan = replace(
        mean_fan(),
        value=0.0,
        low=-multiple,
        high=multiple,
        curve=normal_curve(0.0, 1.0, points=801),
    )
    assert _missing(fan) == missing


def test_every_run_is_as_wide_as_the_interval():
    fan = mean_fan()
    runs = made_up_runs(fan)
    assert len(runs) == 100
    assert [run.high - run.low for run in runs] == pytest.approx([fan.high - fan.low] * 100)


def test_the_runs_are_the_quantiles_of_the_curve_whatever_their_order():
    fan = replace(share_fan(0.3, 0.1, 0.5), curve=binomial_curve(20, 0.3), steps=True)
    middles = sorted((run.low + run.high) / 2 for run in made_up_runs(fan))
    # independent computation: smallest count whose binomial sum reaches the chance
    wanted, total, index = [], 0.0, 0
    for point in binomial_curve(20, 0.3):
        total += point.height
        while index < 100 and (index + 0.25) / 100 <= total + 1e-12:
            wanted.append(point.value)
            index += 1
    assert middles == pytest.approx(wanted)


def test_the_same_fan_gives_the_same_runs():
    assert made_up_runs(mean_fan()) == made_up_runs(mean_fan())


def test_no_runs_where_curve_and_interval_disagree_or_nothing_is_known():
    assert made_up_runs(small_share_fan()) == ()
    assert made_up_runs(replace(mean_fan(), low=float("-inf"))) == ()
    assert made_up_runs(replace(mean_fan(), curve=())) == ()


def test_picture_and_sentence_count_alike():
    fan = mean_fan()
    runs = made_up_runs(fan)
    paths = {
        p.get("class"): p.get("d") for p in ET.fromstring(runs_svg(runs, fan.value)).iter("path")
    }
    missing = _missing(fan)
    assert paths["hr-run"].count("M") == 100 - missing
    assert paths["hr-run-open"].count("M") == missing > 0
    assert f"{100 - missing} of 100" in runs_sentence(runs, fan.value_text)
    assert f"{missing} miss" in runs_sentence(runs, fan.value_text)
