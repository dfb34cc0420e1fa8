"""From a count to its interval: finite universes, design effects, degrees of freedom, the ends."""

from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from estimators.errors import InputError
from estimators.proportion_intervals import (
    METHOD_NAMES,
    ShareEvidence,
    open_to_whole_counts,
    proportion_interval,
    share_bounds,
    share_interval,
)
from estimators.proportion_methods import METHODS
from estimators.proportions import proportion
from estimators.sample_designs import SampleDesign

PUBLISHED = Path(__file__).parents[1] / "published_values"
KORN_GRAUBARD = json.loads((PUBLISHED / "intervals_korn_graubard.json").read_text("utf-8"))
MENDED = [name for name in METHOD_NAMES if name != "wald"]


@pytest.mark.parametrize("row", KORN_GRAUBARD["rows"], ids=lambda row: row["group"])
def test_published_korn_graubard_limits(row):
    def limits(percent):
        found = proportion_interval(
            percent / 100 * row["n"],
            row["n"],
            method="korn_graubard",
            design_effect=row["n"] / row["effective_base"],
            degrees_of_freedom=row["degrees_of_freedom"],
        )
        return 100 * found.low, 100 * found.high

    # the printed percent may be half a digit off, and so may the printed limits
    lowest, highest = limits(row["percent"] - 0.05), limits(row["percent"] + 0.05)
    assert lowest[0] - 0.05 <= row["low_percent"] <= highest[0] + 0.05
    assert lowest[1] - 0.05 <= row["high_percent"] <= highest[1] + 0.05


@pytest.mark.parametrize("method", METHODS)
def test_endless_universe_is_the_method_itself(method):
    found = proportion_interval(81, 263, method=method)
    assert (found.low, found.high) == METHODS[method](81 / 263, 263, 0.95)
    assert (found.confidence, found.method) == (0.95, method)


def test_finite_universe_by_hand():
    # f = 0.2, so Wilson on 125 answers: 0.2904..0.4572; of 500 units that is 145.2..228.6
    low, high = METHODS["wilson"](0.37, 125, 0.95)
    found = proportion_interval(37, 100, population_size=500)
    assert found.low == math.floor(500 * low) / 500
    assert found.high == math.ceil(500 * high) / 500


def test_wald_keeps_the_textbook_formula_in_a_finite_universe():
    found = proportion_interval(37, 100, method="wald", population_size=500)
    half = stats.norm.ppf(0.975) * math.sqrt(0.8 * 0.37 * 0.63 / 100)
    assert (found.low, found.high) == pytest.approx((0.37 - half, 0.37 + half), rel=1e-13)


def test_design_effect_and_degrees_of_freedom_by_hand():
    factor = (stats.t.ppf(0.975, 399) / stats.t.ppf(0.975, 11)) ** 2
    expected = METHODS["wilson"](0.25, 400 / 1.8 * factor, 0.95)
    found = proportion_interval(100, 400, design_effect=1.8, degrees_of_freedom=11)
    assert (found.low, found.high) == pytest.approx(expected, rel=1e-12)


def test_more_degrees_of_freedom_than_answers_change_nothing():
    assert proportion_interval(3, 10, degrees_of_freedom=math.inf) == proportion_interval(3, 10)


def test_korn_graubard_is_capped_at_the_base_over_what_is_unseen():
    # a design effect of 1/4 would make 400 answers of 100; in a universe of 200 the cap is 200
    capped = METHODS["clopper_pearson"](0.3, 200.0, 0.95)
    found = proportion_interval(
        30, 100, method="korn_graubard", design_effect=0.25, population_size=200
    )
    low, high = open_to_whole_counts(*capped, 0.3, 100, 200)
    assert (found.low, found.high) == (low, high)


@pytest.mark.parametrize("method", MENDED)
@pytest.mark.parametrize("population_size", [11, 12, 20, 57, 1000])
def test_bounds_are_whole_counts_that_agree_with_what_was_seen(method, population_size):
    for count in range(11):
        found = proportion_interval(count, 10, method=method, population_size=population_size)
        units = np.array([found.low, found.high]) * population_size
        np.testing.assert_allclose(units, np.rint(units), atol=1e-9)
        assert count <= round(units[0]) <= count / 10 * population_size
        assert count / 10 * population_size <= round(units[1]) <= population_size - (10 - count)
        assert found.low < found.high  # never without width short of a census


@pytest.mark.parametrize("method", METHOD_NAMES)
@pytest.mark.parametrize("count", [0, 3, 7])
def test_census_has_no_width(method, count):
    found = proportion_interval(count, 7, method=method, population_size=7)
    assert found.low == found.high == pytest.approx(count / 7, abs=1e-15)


@pytest.mark.parametrize("method", METHODS)
def test_with_replacement_the_size_of_the_universe_does_not_matter(method):
    drawn_again = proportion_interval(3, 40, method=method, population_size=20, replacement=True)
    assert drawn_again == proportion_interval(3, 40, method=method)


def test_one_answer_and_none_chose_it():
    # Wilson at 0 of 1 is z^2 / (1 + z^2)
    z2 = stats.norm.ppf(0.975) ** 2
    found = proportion_interval(0, 1)
    assert (found.low, found.high) == pytest.approx((0.0, z2 / (1 + z2)))


def test_without_degrees_of_freedom_nothing_is_known_but_what_was_seen():
    found = proportion_interval(3, 10, degrees_of_freedom=0)
    assert (found.low, found.high) == (0.0, 1.0)
    found = proportion_interval(3, 10, degrees_of_freedom=0, population_size=100)
    assert (found.low, found.high) == (0.03, 0.93)
    found = proportion_interval(3, 10, degrees_of_freedom=0, method="wald")
    assert (found.low, found.high) == (-math.inf, math.inf)


def test_default_coverage_without_whole_counts_by_hypergeometric_sum():
    # independent proof of the published claim for N = 1,000, n = 50, every count of 1 to 50 percent
    coverage = _coverage(_wilson_before_opening(50, 1000), 50, 1000, np.arange(10, 501))
    assert coverage.mean() == pytest.approx(0.952, abs=0.0005)
    assert coverage.min() == pytest.approx(0.899, abs=0.0005)


def test_default_coverage_never_falls_below_nine_tenths():
    worst = 1.0
    for population_size, n in [(1000, 50), (40, 30), (60, 30), (200, 100), (1050, 1000), (600, 30)]:
        units = np.arange(max(1, math.ceil(population_size / 100)), population_size // 2 + 1)
        bounds = np.array(
            [
                (found.low, found.high)
                for found in (
                    proportion_interval(count, n, population_size=population_size)
                    for count in range(n + 1)
                )
            ]
        )
        coverage = _coverage(bounds, n, population_size, units)
        assert (
            coverage
            >= _coverage(_wilson_before_opening(n, population_size), n, population_size, units)
            - 1e-12
        ).all()
        worst = min(worst, coverage.min())
    assert worst >= 0.8995


@pytest.mark.parametrize("method", ["hypergeometric", "clopper_pearson", "korn_graubard"])
def test_exact_methods_cover_at_least_what_they_promise(method):
    bounds = np.array(
        [
            (found.low, found.high)
            for found in (
                proportion_interval(count, 20, method=method, population_size=60)
                for count in range(21)
            )
        ]
    )
    assert _coverage(bounds, 20, 60, np.arange(61)).min() >= 0.95


def test_counts_that_are_not_whole_are_weighted_shares_and_not_opened():
    found = proportion_interval(12.5, 100, population_size=500)
    assert (found.low, found.high) == pytest.approx(METHODS["wilson"](0.125, 125.0, 0.95))


def test_hypergeometric_refuses_other_samples():
    for extra in (
        {},
        {"population_size": 100, "replacement": True},
        {"population_size": 100, "design_effect": 1.2},
        {"population_size": 100, "degrees_of_freedom": 4},
    ):
        with pytest.raises(InputError, match="exact only for everyone"):
            proportion_interval(3, 10, method="hypergeometric", **extra)


@pytest.mark.parametrize(
    ("call", "argument"),
    [
        ({"count": -1, "n": 10}, "count"),
        ({"count": 11, "n": 10}, "count"),
        ({"count": math.nan, "n": 10}, "count"),
        ({"count": 0, "n": 0}, "n"),
        ({"count": 1, "n": 2.5}, "n"),
        ({"count": 1, "n": 10, "method": "wilsn"}, "method"),
        ({"count": 1, "n": 10, "confidence": 95}, "confidence"),
        ({"count": 1, "n": 10, "confidence": 1.0}, "confidence"),
        ({"count": 1, "n": 10, "population_size": 9}, "population_size"),
        ({"count": 1, "n": 10, "population_size": 10.5}, "population_size"),
        ({"count": 1, "n": 10, "design_effect": 0}, "design_effect"),
        ({"count": 1, "n": 10, "design_effect": math.inf}, "design_effect"),
        ({"count": 1, "n": 10, "degrees_of_freedom": -1}, "degrees_of_freedom"),
        ({"count": 1, "n": 10, "degrees_of_freedom": math.nan}, "degrees_of_freedom"),
    ],
)
def test_wrong_calls_are_refused_by_name(call, argument):
    with pytest.raises(InputError) as refused:
        proportion_interval(**call)
    assert refused.value.argument == argument


def test_many_shares_go_through_the_same_step():
    evidence = ShareEvidence(
        share=np.array([0.3, 0.0, 1.0, np.nan]),
        base=np.array([10.0, 10.0, 7.0, 0.0]),
        equivalent_base=np.array([12.5, np.nan, np.nan, np.nan]),
        sampling_fraction=np.array([0.2, 0.2, 1.0, 0.0]),
        degrees_of_freedom=np.array([9.0, 9.0, 6.0, 0.0]),
        universe=np.array([50.0, 50.0, 7.0, np.nan]),
    )
    low, high = share_bounds(evidence)
    for place, (count, n, size) in enumerate([(3, 10, 50), (0, 10, 50), (7, 7, 7)]):
        single = proportion_interval(count, n, population_size=size)
        assert (low[place], high[place]) == (single.low, single.high)
    assert np.isnan([low[3], high[3]]).all()
    assert evidence.does_not_vary.tolist() == [False, True, False, False]


def test_stand_in_where_no_answer_varies():
    # all strata alike: the share is 0.5 and its variance 0; 40 rows, weighting effect 2, f = 0.2
    evidence = ShareEvidence(0.5, 40, 1e30, 0.2, 38, stand_in_effect=2.0)
    expected = METHODS["wilson"](
        0.5, 25 * (stats.t.ppf(0.975, 39) / stats.t.ppf(0.975, 38)) ** 2, 0.95
    )
    found = share_interval(evidence)
    assert (found.low, found.high) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize("method", METHOD_NAMES)
@pytest.mark.parametrize(
    ("population_size", "replacement"), [(None, False), (23, False), (40, False), (40, True)]
)
def test_rows_and_counts_give_the_same_interval(method, population_size, replacement):
    if method == "hypergeometric" and (population_size is None or replacement):
        return  # refused there, see test_hypergeometric_refuses_other_samples
    facts = {"population_size": population_size, "replacement": replacement}
    for count in range(24):
        design = SampleDesign.simple_random(23, **facts)
        from_rows = proportion(np.arange(23) < count, design, method=method).interval
        from_count = proportion_interval(count, 23, method=method, **facts)
        assert (from_rows.low, from_rows.high) == pytest.approx(
            (from_count.low, from_count.high), rel=1e-12, abs=1e-15
        )


def test_one_unit_unseen_of_ten_million_still_leaves_width():
    found = proportion_interval(0, 10**7 - 1, population_size=10**7)
    assert (found.low, found.high) == (0.0, 1e-7)


@given(
    method=st.sampled_from(METHOD_NAMES),
    n=st.integers(1, 60),
    more=st.integers(0, 300),
    part=st.floats(0, 1),
)
def test_complement_mirrors_in_a_finite_universe(method, n, more, part):
    count = round(part * n)
    found = proportion_interval(count, n, method=method, population_size=n + more)
    mirror = proportion_interval(n - count, n, method=method, population_size=n + more)
    assert (1 - found.high, 1 - found.low) == pytest.approx((mirror.low, mirror.high), abs=1e-9)


def _wilson_before_opening(n, population_size):
    share = np.arange(n + 1) / n
    return np.column_stack(METHODS["wilson"](share, n / (1 - n / population_size), 0.95))


def _coverage(bounds, n, population_size, units):
    """Exact coverage for every number of units that have the property."""
    chances = stats.hypergeom.pmf(np.arange(n + 1), population_size, units[:, None], n)
    truth = units[:, None] / population_size
    inside = (bounds[:, 0] <= truth + 1e-12) & (bounds[:, 1] >= truth - 1e-12)
    return (chances * inside).sum(axis=1)
