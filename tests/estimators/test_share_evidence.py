"""What stands in for the equivalent base where a share does not vary."""

from __future__ import annotations

import math

import numpy as np

from estimators.share_evidence import ShareEvidence


def test_measured_base_is_used_where_answers_vary():
    evidence = ShareEvidence(0.4, 100, 62.5)
    assert evidence.usable_equivalent_base == 62.5
    assert not evidence.does_not_vary


def test_stand_in_is_base_over_effect_and_unseen_part():
    # the rule by hand: 60 / (1.5 x (1 + (5 - 1) x 0.05) x (1 - 0.25))
    evidence = ShareEvidence(0.0, 60, math.nan, 0.25, stand_in_effect=1.5 * (1 + 4 * 0.05))
    assert evidence.does_not_vary
    assert math.isclose(evidence.usable_equivalent_base, 60 / (1.5 * 1.2 * 0.75))


def test_variance_of_rounding_noise_counts_as_none():
    # v < 1e-14 p(1-p)/n is an equivalent base above 1e14 n
    assert ShareEvidence(0.5, 10, 1.1e15).does_not_vary
    assert not ShareEvidence(0.5, 10, 0.9e15).does_not_vary


def test_census_needs_no_stand_in_and_knows_everything():
    evidence = ShareEvidence(1.0, 10, math.nan, 1.0)
    assert not evidence.does_not_vary
    assert evidence.usable_equivalent_base == math.inf


def test_nobody_answered_is_not_a_lack_of_variation():
    evidence = ShareEvidence(np.array([np.nan]), np.array([0.0]), np.array([np.nan]))
    assert not evidence.does_not_vary.any()
