from __future__ import annotations

import numpy as np
import pytest

from estimators import resampled_units
from estimators.resampled_units import deletions, resampling, single_changes
from tests.support.replicate_designs import ListedNumbers, listed_draws

GROUP = np.array([0, 1, 0, 1, 0, 2, 0])
PRESENT = np.array([True, True, True, True, True, True, False])
PARTS = np.array([0.36, 1.0, 0.5])


def test_all_draws_together_give_the_variance_of_the_design():
    values = np.array([3.0, 8.0, -1.0, 5.0, 4.0, 9.0, 50.0])
    sampling = resampling(GROUP, PRESENT, PARTS)
    draws = [ListedNumbers(raw) for raw in listed_draws(sampling)]
    changes = np.concatenate([sampling.changes(draw, 1) for draw in draws]).astype(float)
    assert len(changes) == 3**2 * 2
    assert changes.mean(axis=0) == pytest.approx(np.zeros(7), abs=1e-7)
    first, second = np.array([3.0, -1.0, 4.0]), np.array([8.0, 5.0])
    expected = 0.36 * 3 * first.var(ddof=1) + 2 * second.var(ddof=1)
    assert ((changes @ values) ** 2).mean() == pytest.approx(expected, rel=1e-6)
    assert changes.min() == -1


def test_every_member_is_drawn_as_often_as_the_others():
    sampling = resampling(np.repeat([0, 1], [7, 5]), np.ones(12, bool), np.ones(2))
    changes = sampling.changes(np.random.default_rng(3), 40_000)
    counts = (1 + changes) * np.repeat([6 / 7, 4 / 5], [7, 5])
    assert abs(np.round(counts) - counts).max() < 1e-5
    assert abs(counts[:, :7].sum(axis=1) - 6).max() < 1e-5
    assert abs(counts[:, 7:].sum(axis=1) - 4).max() < 1e-5
    error = counts.std(axis=0) / np.sqrt(40_000)
    assert (abs(counts.mean(axis=0) - np.repeat([6 / 7, 4 / 5], [7, 5])) < 4.5 * error).all()


def test_pieces_do_not_change_what_is_drawn(monkeypatch):
    sampling = resampling(np.zeros(9, np.intp), np.ones(9, bool), np.ones(1))
    whole = sampling.changes(np.random.default_rng(1), 50)
    monkeypatch.setattr("estimators.resampled_units._PIECE", 9 * 50)
    assert (sampling.changes(np.random.default_rng(1), 50) == whole).all()
    assert whole.min() >= -1


def test_a_unit_alone_is_compared_with_all():
    errors, compared = np.array([0.0, 0.8, 0.0, 0.6]), np.array([True, True, False, True])
    changes = single_changes(np.random.default_rng(2), 200_000, errors, compared).astype(float)
    values = np.array([4.0, 9.0, 100.0, 2.0])
    expected = 0.64 * (9 - 5) ** 2 + 0.36 * (2 - 5) ** 2
    squares = (changes @ values) ** 2
    error = squares.std() / np.sqrt(200_000)
    assert squares.mean() == pytest.approx(expected, abs=4.5 * error)
    assert (changes[:, 2] == 0).all()


def test_what_is_left_out_is_shared_by_the_others():
    found = deletions(GROUP, PRESENT, np.array([2, 5]))
    assert found.tolist() == [[0.5, 0, -1, 0, 0.5, 0, 0], [0, 0, 0, 0, 0, 1, 0]]


@pytest.mark.parametrize("seldom", [4, 0])
def test_large_groups_are_drawn_like_small_ones(seldom, monkeypatch):
    """Variance of a count of c - 1 draws among c: (c - 1)/c times (1 - 1/c). 0: often afresh."""
    monkeypatch.setattr(resampled_units, "_SELDOM", seldom)
    sizes, replicates = np.array([400, 600]), 2_000
    group = np.repeat([0, 1], sizes)[np.random.default_rng(0).permutation(1_000)]
    sampling = resampling(group, np.ones(1_000, bool), np.ones(2))
    assert sampling.rarities is not None
    changes = sampling.changes(np.random.default_rng(5), replicates).astype(float)
    for code, size in enumerate(sizes):
        counts = (1 + changes[:, group == code]) * (size - 1) / size
        assert abs(np.round(counts) - counts).max() < 1e-4
        assert abs(counts.sum(axis=1) - (size - 1)).max() < 1e-2
        assert counts.min() > -1e-6
        squares = ((counts - (size - 1) / size) ** 2).mean(axis=1)
        error = squares.std() / np.sqrt(replicates)
        assert squares.mean() == pytest.approx(((size - 1) / size) ** 2, abs=4 * error)
        assert error < 0.003
        apart = counts.mean(axis=0) - (size - 1) / size
        assert abs(apart).max() < 4.5 / np.sqrt(replicates)


def test_poisson_counts_come_as_often_as_they_are_likely():
    counts = resampling(np.zeros(900, np.intp), np.ones(900, bool), np.ones(1)).rarities
    expected = 1 - 1 / 900 - 4 / 30
    assert counts.mean() == pytest.approx(expected, abs=1e-4)
    assert counts.var() == pytest.approx(expected, abs=3e-4)
    assert resampling(np.zeros(9, np.intp), np.ones(9, bool), np.ones(1)).rarities is None
