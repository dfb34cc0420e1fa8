"""Who a figure is about, who answered, and the weights that follow."""

from __future__ import annotations

import numpy as np
import pytest

from estimators import SampleDesign
from estimators.linearized_values import (
    answered_base,
    mean_in_base,
    residuals_of_mean,
    share_in_base,
)

STRATA = np.array(["a"] * 4 + ["b"] * 6)
DESIGN = SampleDesign.stratified(STRATA, population_sizes={"a": 40, "b": 30})
ANSWERED = np.array([1, 1, 0, 0, 1, 1, 1, 1, 1, 0], bool)


def test_everyone_is_the_default():
    base = answered_base(DESIGN, None, None)
    assert (base.rows, base.asked, base.size) == (10, 10, 70.0)
    assert base.weights is DESIGN.weights
    assert base.cautions == ()


def test_answers_speak_for_the_silent_of_their_stratum():
    """Two of four answered in a, five of six in b: weights 10 x 4/2 and 5 x 6/5."""
    base = answered_base(DESIGN, None, ANSWERED)
    assert base.weights == pytest.approx(np.where(ANSWERED, [20.0] * 4 + [6.0] * 6, 0.0))
    assert (base.rows, base.asked, base.size) == (7, 10, pytest.approx(70.0))
    assert [c.code for c in base.cautions] == ["answers_missing"]


def test_what_was_answered_outside_the_base_does_not_matter():
    where = np.arange(10) >= 4
    other = np.where(where, ANSWERED, ~ANSWERED)
    one, two = answered_base(DESIGN, where, ANSWERED), answered_base(DESIGN, where, other)
    assert one.weights.tolist() == two.weights.tolist()
    assert one.row_weights.tolist() == two.row_weights.tolist()
    assert one.row_weights == pytest.approx(np.where(one.inside, one.weights, DESIGN.weights))


def test_given_weights_move_within_strata_in_proportion():
    """Stratum a has weights 1, 2, 3, 4, of which 1 and 2 answered: times 10/3."""
    weights = np.array([1.0, 2, 3, 4, 5, 5, 5, 5, 5, 5])
    base = answered_base(SampleDesign.weighted(weights, strata=STRATA), None, ANSWERED)
    wanted = weights * np.array([10 / 3] * 4 + [6 / 5] * 6) * ANSWERED
    assert base.weights == pytest.approx(wanted)
    assert base.size == pytest.approx(weights.sum())


def test_given_weights_of_clusters_move_within_strata_not_within_clusters():
    """One answer of a cluster of three is no reason to count it three times."""
    clusters = ["p", "p", "p", "q", "r", "r", "r", "s", "s", "s"]
    weights = np.full(10, 3.0)
    design = SampleDesign.weighted(weights, clusters=clusters)
    base = answered_base(design, None, ANSWERED)
    assert base.weights == pytest.approx(np.where(ANSWERED, 3.0 * 10 / 7, 0.0))


def test_a_stratum_without_answers_is_spoken_for_and_named():
    base = answered_base(DESIGN, None, np.arange(10) >= 4)
    assert base.weights == pytest.approx([0.0] * 4 + [70 / 6] * 6)
    assert [c.code for c in base.cautions] == ["answers_missing", "stratum_without_answers"]


@pytest.mark.parametrize("weights", [[5.0] * 10, [5.0] * 4 + [2.0] * 6])
def test_the_draw_of_answers_is_told_apart_where_groups_weigh_alike(weights):
    design = SampleDesign.weighted(weights, strata=STRATA)
    assert answered_base(design, None, ANSWERED).follows_response
    assert not answered_base(design, None, None).follows_response
    weights = [*weights[:-1], 9.0]
    design = SampleDesign.weighted(weights, strata=STRATA)
    assert not answered_base(design, None, ANSWERED).follows_response


def test_the_part_asked_needs_a_known_universe():
    where = np.arange(10) < 5
    assert answered_base(DESIGN, where, None).part_asked == pytest.approx(5 / 45)
    assert answered_base(SampleDesign.weighted([7.0] * 10), None, None).part_asked == 0.0
    assert answered_base(DESIGN.without_correction(), None, None).part_asked == 0.0


def test_means_keep_their_digits_far_from_zero():
    base = answered_base(DESIGN, None, None)
    values = 1e9 + np.arange(10) / 8
    wanted = 1e9 + float(DESIGN.weights @ (np.arange(10) / 8)) / 70
    assert mean_in_base(values, base) == pytest.approx(wanted, rel=1e-15)


def test_residuals_add_up_to_nothing_and_are_zero_outside():
    where = np.arange(10) % 3 > 0
    base = answered_base(DESIGN, where, ANSWERED)
    values = np.where(base.inside, np.arange(10.0) ** 2, 0.0)
    residuals = residuals_of_mean(values, mean_in_base(values, base), base)
    assert base.weights @ residuals == pytest.approx(0.0, abs=1e-10)
    assert not residuals[~(where & ANSWERED)].any()


def test_shares_of_equal_weights_are_counts_over_rows():
    base = answered_base(SampleDesign.simple_random(3, population_size=7), None, None)
    assert share_in_base(np.array([1.0, 0.0, 0.0]), base) == 1 / 3
