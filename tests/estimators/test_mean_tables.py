from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from estimators import InputError, SampleDesign, mean, tabulate_means
from tests.support import contracts
from tests.support.slow_variance import loop_mean, loop_mean_contributions, loop_variance
from tests.support.table_designs import assert_same_figures, figures_of, random_design, rows_of

N = contracts.N


def cell_by_cell(values, groupings, design, table, where=None):
    """The same table from one call of mean() for every cell."""
    found = []
    for row in range(len(table)):
        numbers, mask = values[table.question[row]], where
        if table.grouping[row]:
            group = groupings[table.grouping[row]] == table.group[row]
            mask = group if where is None else group & where
        estimate = mean(numbers, design, where=mask, answered=~np.isnan(numbers))
        found.append(figures_of(estimate))
    return np.array(found)


@settings(max_examples=150, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_every_cell_is_what_mean_says(seed):
    draw = np.random.default_rng(seed)
    n = int(draw.choice([1, 2, 3, 5, 8, 13, 30, 60]))
    _, design = random_design(draw, n)
    values = {"spend": draw.gamma(2, 5, n), "rating": draw.integers(0, 3, n) + 7.1}
    missing = draw.choice([0.0, 0.1, 0.6])
    for numbers in values.values():
        numbers[draw.random(n) < missing] = np.nan
    groupings = {"region": draw.integers(-1, 3, n), "size": draw.integers(0, 2, n)}
    where = None if draw.random() < 0.5 else draw.random(n) < 0.6
    codes = {"region": 3, "size": 2}
    table = tabulate_means(values, groupings, design, where=where, codes=codes)
    assert len(table) == 2 * (1 + 3 + 2)
    wanted = cell_by_cell(values, groupings, design, table, where)
    assert_same_figures(rows_of(table), wanted)


@pytest.mark.parametrize("name", list(contracts.designs()))
def test_every_design_with_enough_rows(name, rng):
    design = contracts.designs()[name]
    values = {"spend": np.where(rng.random(N) < 0.2, np.nan, rng.gamma(2, 5, N))}
    groupings = {"wave": rng.integers(0, 2, N)}
    for used in (design, design.without_correction()):
        table = tabulate_means(values, groupings, used)
        wanted = cell_by_cell(values, groupings, used, table)
        np.testing.assert_allclose(rows_of(table), wanted, rtol=1e-12, atol=1e-13)
        assert np.isfinite(table.standard_error).all()


def test_a_weighted_mean_against_plain_loops(rng):
    """Linearised weighted mean of everyone, with replacement (Woodruff 1971), by loops."""
    weights, spend, everyone = rng.gamma(2, 1, 25), rng.gamma(2, 5, 25), np.ones(25, bool)
    table = tabulate_means({"spend": spend}, {}, SampleDesign.weighted(weights))
    added = loop_mean_contributions(spend, weights, everyone)
    variance = loop_variance(added, ["all"] * 25, range(25))
    assert table.value[0] == pytest.approx(loop_mean(spend, weights, everyone)[0], rel=1e-13)
    assert table.standard_error[0] == pytest.approx(math.sqrt(variance), rel=1e-12)


def test_few_digits_are_lost_far_from_zero(rng):
    """Adding a million to every answer moves the mean and nothing else."""
    spend, wave = rng.normal(0, 1, N), {"wave": np.arange(N) % 2}
    for design in contracts.designs().values():
        near = tabulate_means({"spend": spend}, wave, design)
        far = tabulate_means({"spend": spend + 1e6}, wave, design)
        assert far.value - 1e6 == pytest.approx(near.value, abs=1e-9)
        assert far.standard_error == pytest.approx(near.standard_error, rel=1e-8)


def test_rows_come_by_question_grouping_and_group():
    codes, design = np.array([0, 1, 1, 0]), SampleDesign.quota(4)
    table = tabulate_means({"b": codes, "a": codes}, {"z": codes}, design)
    assert table.question.tolist() == ["b"] * 3 + ["a"] * 3
    assert table.grouping.tolist() == ["", "z", "z"] * 2
    assert table.group.tolist() == [0, 0, 1] * 2
    assert table.value.tolist() == [0.5, 0.0, 1.0] * 2
    assert table.no_variation.tolist() == [False, True, True] * 2
    assert tuple(table.columns) == (
        "question",
        "grouping",
        "group",
        "base",
        "value",
        "standard_error",
        "low",
        "high",
        "effective_base",
        "degrees_of_freedom",
    )
    assert [c.code for c in table.cautions] == ["quota_sample"]


def test_a_group_without_numbers_is_no_number():
    spend, wave = [1.0, 2.0, None, math.nan], np.array([0, 0, 1, 1])
    table = tabulate_means(
        {"spend": spend}, {"wave": wave}, SampleDesign.simple_random(4), codes={"wave": 3}
    )
    assert table.base.tolist() == [2, 2, 0, 0]
    for name in ("value", "standard_error", "low", "high", "degrees_of_freedom"):
        assert np.isnan(table.columns[name]).tolist() == [False, False, True, True]
    assert len(tabulate_means({}, {"wave": wave}, SampleDesign.simple_random(4))) == 0


@pytest.mark.parametrize(
    ("message", "values", "named"),
    [
        (r"^values must be a dict of numbers", [1.0, 2.0], {}),
        (r"^values\['q'\] must be a finite number", {"q": [1.0, np.inf]}, {}),
        (r"^values\['q'\] must hold numbers only", {"q": ["a", "b"]}, {}),
        (r"^values\['q'\] must hold one entry", {"q": [1.0]}, {}),
        (r"^codes must name only answers and groupings", {"q": [1, 2]}, {"codes": {"q": 2}}),
        (r"^where must hold", {"q": [1, 2]}, {"where": [1, 2]}),
        (r"^confidence must lie", {"q": [1, 2]}, {"confidence": 0}),
    ],
)
def test_wrong_calls_are_refused_by_name(message, values, named):
    with pytest.raises(InputError, match=message):
        tabulate_means(values, {}, SampleDesign.simple_random(2), **named)


def test_infinite_numbers_outside_the_base_do_not_matter():
    table = tabulate_means(
        {"q": [1.0, 3.0, np.inf]}, {}, SampleDesign.simple_random(3), where=[True, True, False]
    )
    assert table.value.tolist() == [2.0]
