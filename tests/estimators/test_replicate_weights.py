from __future__ import annotations

import importlib
import tracemalloc

import numpy as np
import pytest

from estimators import (
    InputError,
    SampleDesign,
    mean,
    replicate_sums,
    replicate_variance,
    replicate_weights,
)
from tests.support.replicate_designs import (
    ListedNumbers,
    answers,
    designs,
    listed_draws,
    variance_of_total,
)

DESIGNS = designs()
SEVERAL = 20_000


def all_weights(replicates):
    return np.concatenate(list(replicates.blocks()))


@pytest.mark.parametrize("name", DESIGNS)
def test_the_jackknife_gives_the_linearised_variance_of_a_total(name):
    design = DESIGNS[name]
    values = answers(design)
    replicates = replicate_weights(design, method="jackknife")
    found = replicate_variance(
        all_weights(replicates) @ values, design.weights @ values, replicates
    )
    assert found == pytest.approx(variance_of_total(values, design), rel=1e-9)


@pytest.mark.parametrize("name", DESIGNS)
def test_the_bootstrap_gives_it_within_its_error(name):
    design = DESIGNS[name]
    values = answers(design)
    replicates = replicate_weights(design, replicates=SEVERAL, seed=4)
    squares = (replicate_sums(values[:, None], replicates)[:, 0] - design.weights @ values) ** 2
    error = squares.std() / np.sqrt(SEVERAL)
    assert squares.mean() == pytest.approx(variance_of_total(values, design), abs=4 * error)
    assert error < 0.02 * squares.mean()


@pytest.mark.parametrize("name", DESIGNS)
def test_weights_are_right_on_average_and_not_negative(name):
    design = DESIGNS[name]
    weights = all_weights(replicate_weights(design, replicates=SEVERAL, seed=6))
    error = weights.std(axis=0) / np.sqrt(SEVERAL)
    assert (abs(weights.mean(axis=0) - design.weights) <= 4.5 * error + 1e-6).all()
    if not name.startswith(("one cluster", "two stages, one row")):
        assert weights.min() >= -1e-5


def test_all_draws_of_both_stages_together_give_the_variance_of_the_design(monkeypatch):
    """One of 2 clusters, 1 of 2 rows and 2 of 3 rows are redrawn: 2 x 2 x 9 equal chances."""
    design = SampleDesign.two_stage(
        [0, 0, 1, 1, 1], cluster_sizes={0: 5, 1: 9}, population_clusters=7
    )
    values = np.array([2.0, 7.0, 1.0, 1.5, 9.0])
    replicates = replicate_weights(design, replicates=1)
    squares = []
    for first in listed_draws(replicates.units):
        for second in listed_draws(replicates.rows):
            chance = ListedNumbers(first, second)
            monkeypatch.setattr(np.random, "default_rng", lambda _, chance=chance: chance)
            (weights,) = next(replicates.blocks())
            squares.append((weights @ values - design.weights @ values) ** 2)
    assert len(squares) == 36
    assert np.mean(squares) == pytest.approx(variance_of_total(values, design), rel=1e-6)


@pytest.mark.parametrize(
    ("name", "apart"), [("stratified", 1e-9), ("two stages", 1e-9), ("systematic", 0.03)]
)
def test_means_of_those_who_answered_are_as_uncertain_as_told(name, apart):
    """Drawing and answering are one draw here; neighbours of a list lose each other by it."""
    design = DESIGNS[name]
    values, gave = answers(design), np.random.default_rng(2).random(design.n) < 0.8
    expected = mean(values, design, answered=gave)
    replicates = replicate_weights(design, answered=gave, method="jackknife")
    weights = all_weights(replicates)
    means = weights @ values / weights.sum(axis=1)
    error = replicate_variance(means, expected.value, replicates) ** 0.5
    assert error == pytest.approx(expected.standard_error, rel=apart)


def test_a_census_does_not_vary():
    design = SampleDesign.simple_random(12, population_size=12)
    assert (all_weights(replicate_weights(design, replicates=50)) == 1).all()
    assert replicate_weights(design, method="jackknife").replicates == 0


def test_the_seed_decides():
    design = DESIGNS["two stages"]
    first = replicate_weights(design, replicates=30, seed=1)
    assert (all_weights(first) == all_weights(first)).all()
    again = all_weights(replicate_weights(design, replicates=30, seed=1))
    assert (all_weights(first) == again).all()
    assert (all_weights(replicate_weights(design, replicates=30, seed=2)) != again).any()


def test_blocks_do_not_change_the_jackknife(monkeypatch):
    design = DESIGNS["two stages"]
    whole = all_weights(replicate_weights(design, method="jackknife"))
    module = importlib.import_module("estimators.replicate_weights")
    monkeypatch.setattr(module, "_ENTRIES", 100)
    assert (all_weights(replicate_weights(design, method="jackknife")) == whole).all()
    assert len(list(replicate_weights(design, method="jackknife").blocks())) > 5


def test_answers_missing_leave_a_smaller_sample():
    """The draw of answers is one more phase: r of N units, as if r had been drawn (13.5)."""
    values = np.random.default_rng(8).normal(size=40)
    gave = np.arange(40) % 3 > 0
    design = SampleDesign.simple_random(40, population_size=100)
    replicates = replicate_weights(design, answered=gave, method="jackknife")
    weights = all_weights(replicates)
    assert (weights[:, ~gave] == 0).all()
    found = replicate_variance(weights @ values, replicates.weights @ values, replicates)
    r = int(gave.sum())
    assert found == pytest.approx(100**2 * (1 - r / 100) * values[gave].var(ddof=1) / r)


def test_memory_does_not_grow_with_the_replicates():
    design = SampleDesign.two_stage(
        np.arange(5_000) // 10,
        cluster_sizes=dict.fromkeys(range(500), 30),
        population_clusters=900,
    )
    values = np.random.default_rng(0).normal(size=(5_000, 3))
    peaks = []
    for replicates in (1_000, 4_000):
        tracemalloc.start()
        replicate_sums(values, replicate_weights(design, replicates=replicates))
        peaks.append(tracemalloc.get_traced_memory()[1])
        tracemalloc.stop()
    assert peaks[1] < 1.1 * peaks[0] < 90e6


@pytest.mark.parametrize(
    ("call", "message"),
    [
        ({"method": "guess"}, "method must be bootstrap or jackknife"),
        ({"replicates": 0}, "replicates must be a whole number"),
        ({"seed": -1}, "seed must be a whole number"),
        ({"where": np.arange(48) < 1}, "must leave at least two units"),
        ({"answered": np.zeros(48, bool)}, "must leave at least two units"),
        ({"where": np.ones(3, bool)}, "where must hold one entry"),
    ],
)
def test_wrong_calls_are_named(call, message):
    with pytest.raises(InputError, match=message):
        replicate_weights(DESIGNS["simple random"], **call)
