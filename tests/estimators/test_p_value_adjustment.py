from __future__ import annotations

import json
import math
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from statsmodels.stats.multitest import multipletests

from estimators import InputError, adjust_p_values
from estimators.p_value_adjustment import ADJUSTMENTS

PUBLISHED = Path(__file__).parents[1] / "published_values"
CASES = json.loads((PUBLISHED / "p_values_adjusted.json").read_text(encoding="utf-8"))
SECOND_OPINION = {
    "bonferroni": "bonferroni",
    "holm": "holm",
    "hochberg": "simes-hochberg",
    "benjamini_hochberg": "fdr_bh",
    "benjamini_yekutieli": "fdr_by",
}
FAMILIES = st.lists(st.floats(0, 1), min_size=1, max_size=30)


def offered(case) -> bool:
    return case["method"] in ADJUSTMENTS


@pytest.mark.parametrize("case", [c for c in CASES if offered(c)], ids=lambda case: case["method"])
def test_published_examples(case):
    found = adjust_p_values(case["p_values"], case["method"])
    for mine, (printed, tolerance) in zip(found, case["adjusted"], strict=False):
        assert mine == pytest.approx(printed, abs=tolerance)
    if case["rejected"] is not None:
        assert int((found <= case["level"]).sum()) == case["rejected"]


def test_the_published_values_of_hommel_lie_between_hochberg_and_benjamini_hochberg():
    """Hommel (1988) never exceeds Hochberg and never falls below Benjamini-Hochberg."""
    (case,) = (c for c in CASES if c["method"] == "hommel")
    printed = np.array([value for value, _ in case["adjusted"]])
    assert (adjust_p_values(case["p_values"], "hochberg") >= printed - 1e-12).all()
    assert (adjust_p_values(case["p_values"], "benjamini_hochberg") <= printed + 1e-12).all()


@pytest.mark.parametrize("method", ADJUSTMENTS)
def test_second_opinion(method, rng):
    for m in (1, 2, 7, 40):
        p_values = rng.uniform(size=m) ** 3
        p_values[m // 2 :] = p_values[: m - m // 2]  # ties
        wanted = multipletests(p_values, method=SECOND_OPINION[method])[1]
        assert adjust_p_values(p_values, method) == pytest.approx(wanted, rel=1e-13)


@pytest.mark.parametrize("method", ADJUSTMENTS)
@given(FAMILIES)
def test_adjusted_values_rise_with_the_given_ones_and_never_fall_below_them(method, p_values):
    found = adjust_p_values(p_values, method)
    order = np.argsort(p_values)
    assert (np.diff(found[order]) >= -1e-15).all()
    assert (found >= np.array(p_values)).all()
    assert (found <= 1).all()


@given(FAMILIES)
def test_which_method_is_stricter(p_values):
    found = {name: adjust_p_values(p_values, name) for name in ADJUSTMENTS}
    falling = ("bonferroni", "holm", "hochberg", "benjamini_hochberg")
    for stricter, milder in pairwise(falling):
        assert (found[stricter] >= found[milder] - 1e-15).all()
    assert (found["benjamini_yekutieli"] >= found["benjamini_hochberg"]).all()


@pytest.mark.parametrize("method", ADJUSTMENTS)
def test_a_comparison_that_was_not_made_does_not_count(method):
    p_values = np.array([0.01, math.nan, 0.2, 0.03, math.nan])
    made = ~np.isnan(p_values)
    found = adjust_p_values(p_values, method)
    assert np.isnan(found[~made]).all()
    assert (found[made] == adjust_p_values(p_values[made], method)).all()
    assert np.isnan(adjust_p_values([math.nan, None], method)).all()


@pytest.mark.parametrize("method", ADJUSTMENTS)
def test_any_shape_is_one_family(method, rng):
    table = rng.uniform(size=(3, 4))
    found = adjust_p_values(table, method)
    assert (found == adjust_p_values(table.ravel(), method).reshape(3, 4)).all()
    assert adjust_p_values([], method).shape == (0,)
    assert float(adjust_p_values(0.3, method)) == 0.3


def test_holm_is_the_default_and_the_input_stays():
    p_values = np.array([0.04, 0.01])
    assert (adjust_p_values(p_values) == adjust_p_values(p_values, "holm")).all()
    assert p_values.tolist() == [0.04, 0.01]


@pytest.mark.parametrize(
    ("argument", "p_values", "method"),
    [
        ("p_values", [0.1, 1.2], "holm"),
        ("p_values", [-0.1], "holm"),
        ("p_values", ["small"], "holm"),
        ("method", [0.1], "tukey"),
    ],
)
def test_wrong_calls_are_refused_by_name(argument, p_values, method):
    with pytest.raises(InputError, match=f"^{argument} must ") as refusal:
        adjust_p_values(p_values, method)
    assert refusal.value.argument == argument
