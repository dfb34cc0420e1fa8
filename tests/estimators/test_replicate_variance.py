from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pytest

from estimators import (
    InputError,
    SampleDesign,
    mean,
    quantile,
    ratio,
    replicate_distribution,
    replicate_estimates,
    replicate_sums,
    replicate_variance,
    replicate_weights,
    total,
)
from tests.support.replicate_designs import answers, designs

PUBLISHED = Path(__file__).parents[1] / "published_values" / "replicates.json"
MICE, CITIES, _ = json.loads(PUBLISHED.read_text(encoding="utf-8"))["cases"]
DESIGNS = designs()
SEVERAL = 20_000


def near(figure):
    return pytest.approx(figure["value"], abs=figure["tolerance"])


def variance_of(statistic, replicates):
    value = statistic(replicates.weights)
    return value, replicate_variance(replicate_estimates(statistic, replicates), value, replicates)


def test_the_jackknife_of_a_published_mean():
    values = np.array(MICE["values"], dtype=float)
    replicates = replicate_weights(SampleDesign.simple_random(7), method="jackknife")
    value, variance = variance_of(lambda w: w @ values / w.sum(), replicates)
    assert value == near(MICE["expected"]["mean"])
    assert math.sqrt(variance) == near(MICE["expected"]["error"])
    assert variance == pytest.approx(values.var(ddof=1) / 7)  # the closed form


def test_the_jackknife_of_a_published_ratio():
    above, below = np.array(CITIES["values"], float), np.array(CITIES["denominator"], float)
    design = SampleDesign.simple_random(10)
    replicates = replicate_weights(design, method="jackknife")
    value, variance = variance_of(lambda w: w @ above / (w @ below), replicates)
    assert value == near(CITIES["expected"]["ratio"])
    # In print the deviations of the ten ratios are taken from their mean, not from the ratio.
    found = replicate_estimates(lambda w: w @ above / (w @ below), replicates)
    about_mean = replicate_variance(found, found.mean(), replicates)
    assert about_mean == near(CITIES["expected"]["jackknife_variance"])
    assert about_mean < variance
    linearised = ratio(above, below, design).standard_error ** 2 * 9 / 10
    assert linearised == near(CITIES["expected"]["linearised_variance"])


def test_sums_are_the_statistics_of_the_blocks():
    for design in DESIGNS.values():
        values = np.stack([answers(design), np.ones(design.n)], axis=1)
        for method in ("bootstrap", "jackknife"):
            replicates = replicate_weights(design, method=method, replicates=40)
            slow = replicate_estimates(lambda w, v=values: w @ v, replicates)
            assert replicate_sums(values, replicates) == pytest.approx(slow, rel=1e-5)


@pytest.mark.parametrize("name", DESIGNS)
def test_a_distribution_is_as_wide_as_the_interval_says(name):
    design = DESIGNS[name]
    values, where = answers(design), np.arange(design.n) % 4 > 0
    replicates = replicate_weights(design, where=where, replicates=SEVERAL, seed=3)
    found = replicate_distribution(values, replicates)
    expected = mean(values, design, where=where)
    assert found.mean == pytest.approx(expected.value, abs=0.12 * expected.standard_error)
    assert found.standard_deviation == pytest.approx(expected.standard_error, rel=0.06)
    assert not found.exact
    assert found.error == 0.5 / math.sqrt(SEVERAL)
    assert found.probabilities.sum() == pytest.approx(1)


def test_totals_ratios_and_scaled_weights():
    plain = DESIGNS["stratified"]
    scaled = SampleDesign.weighted(1 + np.arange(40) % 3 * 0.5 - 0.4875, population_size=300)
    assert scaled.scaled_weights
    for design in (plain, scaled):
        values, where = answers(design), np.arange(design.n) % 3 > 0
        replicates = replicate_weights(design, where=where, replicates=SEVERAL, seed=1)
        expected = total(values, design, where=where)
        found = replicate_distribution(values, replicates, figure="total")
        assert found.standard_deviation == pytest.approx(expected.standard_error, rel=0.05)
        below = 1 + values[::-1]
        expected = ratio(values, below, design, where=where)
        found = replicate_distribution(values, replicates, figure="ratio", denominator=below)
        assert found.standard_deviation == pytest.approx(expected.standard_error, rel=0.06)


def test_the_total_of_everyone_with_scaled_weights_does_not_vary():
    design = SampleDesign.weighted(1 + np.arange(40) % 3 * 0.5 - 0.4875, population_size=300)
    replicates = replicate_weights(design, replicates=100)
    found = replicate_distribution(np.ones(40), replicates, figure="total")
    assert found.support == pytest.approx(np.full(found.support.size, 300))


def test_a_quantile_is_the_smallest_value_that_reaches_the_probability():
    design = DESIGNS["several in a stratum, shuffled"]
    values = np.round(answers(design))
    replicates = replicate_weights(design, replicates=300, seed=2)

    def slow(weights):
        shares = {v: weights[values <= v].sum() / weights.sum() for v in values}
        return min(v for v, share in shares.items() if share >= 0.3 - 1e-6)

    expected = replicate_estimates(slow, replicates)
    found = replicate_distribution(values, replicates, figure="quantile", probability=0.3)
    kinds, counts = np.unique(expected, return_counts=True)
    assert found.support.tolist() == kinds.tolist()
    assert found.probabilities.tolist() == (counts / 300).tolist()


def test_medians_of_a_smooth_answer_spread_as_woodruff_says():
    design = SampleDesign.simple_random(600, population_size=1800)
    values = np.random.default_rng(0).normal(size=600)
    expected = quantile(values, 0.5, design)
    replicates = replicate_weights(design, replicates=2000)
    found = replicate_distribution(values, replicates, figure="quantile")
    assert found.standard_deviation == pytest.approx(expected.standard_error, rel=0.2)
    assert found.interval(0.95).low == pytest.approx(expected.interval.low, abs=0.03)


@pytest.mark.parametrize(
    ("call", "message"),
    [
        ({"figure": "mode"}, "figure must be one of mean, total, ratio, quantile"),
        ({"figure": "ratio"}, "denominator must be given for a ratio"),
        ({"denominator": np.ones(48)}, "denominator must be given for a ratio"),
        ({"figure": "ratio", "denominator": np.zeros(48)}, "must not add up to zero"),
        ({"figure": "quantile", "probability": 2}, "probability must lie between"),
    ],
)
def test_wrong_calls_are_named(call, message):
    design = DESIGNS["simple random"]
    with pytest.raises(InputError, match=message):
        replicate_distribution(answers(design), replicate_weights(design), **call)


def test_what_does_not_fit_is_refused():
    design = DESIGNS["simple random"]
    left_out = replicate_weights(design, method="jackknife")
    with pytest.raises(InputError, match="must come from the bootstrap"):
        replicate_distribution(answers(design), left_out)
    with pytest.raises(InputError, match="one estimate for each of the 48 replicates"):
        replicate_variance(np.ones(5), 1.0, left_out)
    with pytest.raises(InputError, match="one row for each respondent"):
        replicate_sums(np.ones(48), left_out)
    with pytest.raises(InputError, match=r"values\[:, 1\] must be a finite number"):
        replicate_sums(np.stack([np.ones(48), np.full(48, np.nan)], axis=1), left_out)
    with pytest.raises(InputError, match="must hold one entry for each of the 48 rows"):
        replicate_sums(np.ones((5, 2)), left_out)
    census = SampleDesign.simple_random(9, population_size=9)
    with pytest.raises(InputError, match="replicates must hold at least one"):
        replicate_estimates(np.sum, replicate_weights(census, method="jackknife"))
    relative = replicate_weights(SampleDesign.simple_random(9))
    with pytest.raises(InputError, match="how large the universe is"):
        replicate_distribution(np.ones(9), relative, figure="total")
