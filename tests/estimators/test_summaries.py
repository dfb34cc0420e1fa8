"""A stratified mean from summaries: the textbooks' numbers, and those of mean() on rows."""

from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from estimators import SampleDesign, mean, mean_interval
from estimators.errors import InputError
from estimators.summaries import stratified_mean

PUBLISHED = Path(__file__).parents[1] / "published_values"
CASES = json.loads((PUBLISHED / "coverage_strata.json").read_text(encoding="utf-8"))

FIELDS = ("value", "standard_error", "half_width", "degrees_of_freedom", "base", "weighted_base")
FIELDS += ("design_effect", "effective_base", "equivalent_base")


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["name"])
def test_published_summaries(case):
    # Siniff and Skoog (1964), in print; Scheaffer, Mendenhall and Ott (2012), from memory
    units = sum(case["population_sizes"])
    found = stratified_mean(
        case["population_sizes"],
        case["sample_sizes"],
        case["means"],
        np.sqrt(case["variances"]),
    )
    got = {
        "mean": found.value,
        "standard_error": found.standard_error,
        "variance": found.standard_error**2,
        "bound": 2 * found.standard_error,
        "total": units * found.value,
        "standard_error_of_total": units * found.standard_error,
        "upper_limit_of_total": units * (found.value + 1.96 * found.standard_error),
    }
    for name, (value, tolerance) in case["printed"].items():
        assert got[name] == pytest.approx(value, abs=tolerance), name
    assert found.degrees_of_freedom == sum(case["sample_sizes"]) - len(case["means"])


def summaries_and_rows(strata):
    """Summaries of lists of rows, and what mean() says of the rows."""
    labels = np.concatenate([np.full(len(rows), str(h + 1)) for h, (rows, _) in enumerate(strata)])
    sizes = {str(h + 1): units for h, (_, units) in enumerate(strata)}
    design = SampleDesign.stratified(labels, population_sizes=sizes)
    rows = mean(np.concatenate([rows for rows, _ in strata]), design, confidence=0.9)
    deviations = [np.std(r, ddof=1) if len(r) > 1 else math.nan for r, _ in strata]
    summary = stratified_mean(
        [units for _, units in strata],
        [len(r) for r, _ in strata],
        [np.mean(r) for r, _ in strata],
        deviations,
        confidence=0.9,
    )
    return summary, rows


def assert_same(summary, rows):
    close = {"rel": 1e-9, "abs": 1e-9, "nan_ok": True}
    for name in FIELDS:
        assert getattr(summary, name) == pytest.approx(getattr(rows, name), **close), name
    assert (summary.interval.low, summary.interval.high) == pytest.approx(
        (rows.interval.low, rows.interval.high), **close
    )
    assert (summary.interval.method, summary.interval.confidence) == ("t", 0.9)
    assert summary.cautions == rows.cautions


ROWS = [
    [([3.0, 5.0, 4.0], 30), ([10.0, 12.0], 9), ([1.0, 1.5, 2.5, 7.0], 4)],  # one asked completely
    [([3.0, 5.0, 4.0], 30), ([10.0], 9)],  # one answer, not all there is
    [([3.0, 5.0, 4.0], 30), ([10.0], 1)],  # one answer, all there is
    [([3.0, 5.0], 2), ([10.0, 1.0], 2)],  # a census
    [([3.0], 5), ([4.0], 6), ([9.0], 7)],  # one answer each
    [([3.0], 5)],
    [([3.0], 1)],
    [([2.0, 2.0, 2.0], 7), ([2.0, 2.0], 50)],  # nothing varies
    [([2.0, 2.0, 2.0], 7), ([5.0, 5.0], 50)],  # nothing varies within strata
    [([1.0, 2.0, 4.0, 8.0], 90)],  # a simple random sample
]


@pytest.mark.parametrize("strata", ROWS, ids=range(len(ROWS)))
def test_rows_with_these_summaries_say_the_same(strata):
    assert_same(*summaries_and_rows(strata))


@settings(deadline=None)
@given(
    st.lists(
        st.tuples(
            st.lists(st.integers(-50, 50).map(float), min_size=1, max_size=6),
            st.integers(0, 40),
        ),
        min_size=1,
        max_size=5,
    )
)
def test_any_rows_say_the_same(strata):
    assert_same(*summaries_and_rows([(rows, len(rows) + more) for rows, more in strata]))


def test_one_stratum_is_a_simple_random_sample():
    found = stratified_mean([1184], [90], [420.0], [610.0])
    plain = mean_interval(420.0, 610.0, 90, population_size=1184)
    assert (found.interval.low, found.interval.high) == pytest.approx(
        (plain.low, plain.high), rel=1e-12
    )


def test_a_small_spread_far_from_zero_keeps_its_digits():
    """By hand: (1/2)^2 x 0.9 x (1e-3)^2 / 10, twice."""
    found = stratified_mean([100, 100], [10, 10], [1e9, 1e9], [1e-3, 1e-3])
    assert found.standard_error == pytest.approx(math.sqrt(0.5 * 0.9 * 1e-6 / 10), rel=1e-12)


def test_large_samples_are_quick_and_arrays_are_left_alone():
    sizes = np.array([500_000, 400_000])
    kept = sizes.copy()
    found = stratified_mean(sizes, sizes // 10, [1.0, 2.0], [1.0, 1.0])
    assert found.degrees_of_freedom == 89_998
    assert (sizes == kept).all()


@pytest.mark.parametrize(
    ("call", "argument"),
    [
        (([10, 20], [5], [1, 2], [1, 1]), "sample_sizes"),
        (([10, 20], [5, 0], [1, 2], [1, 1]), "sample_sizes[1]"),
        (([10, 20], [5, 2.5], [1, 2], [1, 1]), "sample_sizes[1]"),
        (([10, 4], [5, 5], [1, 2], [1, 1]), "population_sizes[1]"),
        (([10, 20.5], [5, 5], [1, 2], [1, 1]), "population_sizes[1]"),
        (([10, 20], [5, 5], [1, math.nan], [1, 1]), "means[1]"),
        (([10, 20], [5, 5], [1, 2, 3], [1, 1]), "means"),
        (([10, 20], [5, 5], [1, 2], [-1, 1]), "standard_deviations[0]"),
        (([10, 20], [5, 5], [1, 2], [1, math.inf]), "standard_deviations[1]"),
        (([10, 20], [5, 5], [1, 2], ["a", "b"]), "standard_deviations"),
        (([], [], [], []), "number of strata"),
        (({"a": 10}, [5], [1], [1]), "population_sizes"),
    ],
)
def test_wrong_calls_are_refused_by_name(call, argument):
    with pytest.raises(InputError) as refused:
        stratified_mean(*call)
    assert refused.value.argument == argument
    with pytest.raises(InputError, match="confidence must"):
        stratified_mean([10], [5], [1], [1], confidence=95)
