"""Missing answers: how far estimates and their variances are right over repeated surveys."""

from __future__ import annotations

import numpy as np
import pytest

from estimators import SampleDesign, mean, total

REPEATS = 1500
IN_STRATUM = np.repeat([0, 1], [300, 700])


def a_universe(rng):
    """Two strata with different subgroups and levels, so that a wrong centre shows."""
    group = rng.random(1000) < np.where(IN_STRATUM == 0, 0.7, 0.25)
    values = np.where(IN_STRATUM == 0, 20.0, 5.0) + rng.gamma(2.0, 3.0, 1000) + 4 * group
    return values, group


def one_survey(rng):
    first = rng.choice(300, 120, replace=False)
    second = 300 + rng.choice(700, 200, replace=False)
    return np.concatenate([first, second])


@pytest.mark.parametrize("rates", [(1.0, 1.0), (0.5, 0.5), (0.4, 0.8)])
def test_subgroups_of_strata_with_missing_answers(rates):
    """Mean of estimated variances within 15 percent of the variance over repeats; the error of
    that comparison is about sqrt(2/1500) = 4 percent. A common centre for all strata gives 198.
    """
    rng = np.random.default_rng(31)
    values, group = a_universe(rng)
    found = {"mean": [], "total": []}
    truth = {"mean": values[group].mean(), "total": values[group].sum()}
    for _ in range(REPEATS):
        rows = one_survey(rng)
        design = SampleDesign.stratified(IN_STRATUM[rows], population_sizes={0: 300, 1: 700})
        answered = rng.random(len(rows)) < np.array(rates)[IN_STRATUM[rows]]
        where = group[rows]
        for name, estimator in (("mean", mean), ("total", total)):
            one = estimator(values[rows], design, where=where, answered=answered)
            covered = one.interval.low <= truth[name] <= one.interval.high
            found[name].append((one.value, one.standard_error**2, covered))
    for name, results in found.items():
        estimates, variances, covered = np.array(results).T
        assert estimates.mean() == pytest.approx(truth[name], rel=0.01)
        assert variances.mean() == pytest.approx(estimates.var(), rel=0.15), name
        assert covered.mean() == pytest.approx(0.95, abs=0.025), name


def test_a_subgroup_with_missing_answers_in_a_simple_sample_is_the_textbook_formula():
    """(1 - n/N x r/m) s^2 / r: of 40 asked among 100, m = 6 in the subgroup, r = 4 answered."""
    values = np.arange(40.0) ** 2
    where = np.arange(40) % 7 == 2
    answered = np.arange(40) < 25
    found = mean(
        values, SampleDesign.simple_random(40, population_size=100), where=where, answered=answered
    )
    spread = values[where & answered].var(ddof=1)
    assert (found.base, found.degrees_of_freedom) == (4, 3)
    assert found.standard_error**2 == pytest.approx((1 - 0.4 * 4 / 6) * spread / 4, rel=1e-12)
    assert found.design_effect == pytest.approx(1.0, rel=1e-9)


def test_a_stratum_in_which_nobody_answered_is_taken_to_be_like_the_others():
    strata = np.repeat(["a", "b", "c"], 10)
    sizes = {"a": 50, "b": 60, "c": 90}
    values = np.arange(30.0)
    design = SampleDesign.stratified(strata, population_sizes=sizes)
    found = total(values, design, answered=strata != "c")
    rest = SampleDesign.stratified(strata[:20], population_sizes={"a": 50, "b": 60})
    average = mean(values[:20], rest)
    assert found.value == pytest.approx(200 * average.value)
    assert found.standard_error == pytest.approx(200 * average.standard_error)
    assert "stratum_without_answers" in [c.code for c in found.cautions]


def test_one_answer_in_a_stratum_borrows_the_spread_of_the_others():
    strata = np.repeat(["a", "b"], [12, 4])
    design = SampleDesign.stratified(strata, population_sizes={"a": 60, "b": 40})
    answered = np.arange(16) < 13
    values = np.array([3.0, 5.0, 4.0, 8.0, 1.0, 9.0, 2.0, 6.0, 7.0, 4.0, 5.0, 6.0, 50, 0, 0, 0])
    found = mean(values, design, answered=answered)
    spread = values[:12].var(ddof=1)
    within_a = (1 - 12 / 60) * spread / 12
    drawn_b = (1 - 4 / 40) * 3 * spread / 4**2  # three of four deviations, as far as drawn
    later_b = (1 / 1 - 1 / 4) * spread
    variance = 0.6**2 * within_a + 0.4**2 * (drawn_b + later_b)
    assert found.standard_error**2 == pytest.approx(variance, rel=1e-12)


def test_everybody_of_a_subgroup_answered_is_no_matter_of_response():
    values, strata = np.arange(40.0), np.arange(40) % 2
    design = SampleDesign.stratified(strata, population_sizes={0: 80, 1: 90})
    group = np.arange(40) < 17
    answered = np.arange(40) < 20
    assert mean(values, design, where=group, answered=answered) == mean(values, design, where=group)
