from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats
from statsmodels.stats.proportion import proportion_confint

from estimators import SampleDesign, mean, proportion, proportion_interval
from estimators.proportion_intervals import METHOD_NAMES
from tests.support import contracts

METHODS = [name for name in METHOD_NAMES if name != "hypergeometric"]


def flags(count: int, n: int) -> np.ndarray:
    return np.arange(n) < count


def ends(estimate) -> tuple[float, float]:
    return estimate.interval.low, estimate.interval.high


@pytest.mark.parametrize("method", METHOD_NAMES)
@pytest.mark.parametrize(("n", "size"), [(50, 1000), (340, 1000), (30, 31), (10, 10), (1, 40)])
def test_agrees_exactly_with_proportion_interval(method, n, size):
    design = SampleDesign.simple_random(n, population_size=size)
    for count in sorted({0, 1, n // 7, n // 2, n - 1, n}):
        found = proportion(flags(count, n), design, method=method)
        wanted = proportion_interval(count, n, method=method, population_size=size)
        assert found.interval == wanted
        assert found.value == count / n


@pytest.mark.parametrize("method", METHODS)
@pytest.mark.parametrize("replacement", [False, True])
def test_agrees_exactly_in_an_endless_universe(method, replacement):
    design = SampleDesign.simple_random(
        73, population_size=900 if replacement else None, replacement=replacement
    )
    for count in (0, 1, 20, 36, 72, 73):
        found = proportion(flags(count, 73), design, method=method)
        assert found.interval == proportion_interval(count, 73, method=method)


@pytest.mark.parametrize(
    ("method", "theirs"),
    [
        ("wilson", "wilson"),
        ("clopper_pearson", "beta"),
        ("wald", "normal"),
        ("jeffreys", "jeffreys"),
    ],
)
def test_agrees_with_statsmodels(method, theirs):
    design = SampleDesign.simple_random(120)
    for count in (3, 40, 61, 110):
        found = proportion(flags(count, 120), design, method=method, confidence=0.9)
        wanted = proportion_confint(count, 120, alpha=0.1, method=theirs)
        assert ends(found) == pytest.approx(wanted, rel=1e-9)


def test_standard_error_is_that_of_the_mean_of_zeros_and_ones():
    design = SampleDesign.stratified(contracts.STRATA, population_sizes=contracts.SIZES)
    chosen = contracts.PROPORTION.values(contracts.N)
    share, average = proportion(chosen, design), mean(chosen, design)
    assert share.value == pytest.approx(average.value, rel=1e-13)
    assert share.standard_error == pytest.approx(average.standard_error, rel=1e-12)
    assert share.design_effect == pytest.approx(average.design_effect, rel=1e-9)


def test_simple_random_bases():
    """Effective base = base, equivalent base = base / (1-f), whatever the share."""
    found = proportion(flags(12, 50), SampleDesign.simple_random(50, population_size=125))
    assert found.effective_base == pytest.approx(50)
    assert found.equivalent_base == pytest.approx(50 / (1 - 0.4))
    assert found.design_effect == pytest.approx(1)


def test_korn_graubard_written_out_for_clusters():
    """Equivalent base p(1-p) k/(k-1) / v times (t_(k-1) / t_df)^2, then the beta quantiles."""
    rng = np.random.default_rng(4)
    clusters, weights = np.arange(90) // 9, rng.uniform(1, 4, 90)
    chosen = (rng.random(90) < 0.3 + 0.3 * (clusters % 2)).astype(float)
    found = proportion(
        chosen, SampleDesign.weighted(weights, clusters=clusters), method="korn_graubard"
    )
    p = np.average(chosen, weights=weights)
    sums = np.bincount(clusters, weights * (chosen - p)) / weights.sum()
    variance = 10 / 9 * (sums**2).sum()
    equivalent = p * (1 - p) * 90 / 89 / variance
    factor = (stats.t.ppf(0.975, 89) / stats.t.ppf(0.975, 9)) ** 2
    n = min(equivalent * factor, 90)
    low = stats.beta.ppf(0.025, p * n, n - p * n + 1)
    high = stats.beta.ppf(0.975, p * n + 1, n - p * n)
    assert found.equivalent_base == pytest.approx(equivalent, rel=1e-10)
    assert ends(found) == pytest.approx((low, high), rel=1e-9)


def test_wilson_written_out_for_weights():
    rng = np.random.default_rng(6)
    weights, chosen = rng.uniform(1, 6, 80), rng.random(80) < 0.2
    found = proportion(chosen, SampleDesign.weighted(weights))
    p = np.average(chosen, weights=weights)
    variance = 80 / 79 * ((weights * (chosen - p) / weights.sum()) ** 2).sum()
    n = p * (1 - p) * 80 / 79 / variance
    z = stats.norm.ppf(0.975)
    middle = (p + z**2 / (2 * n)) / (1 + z**2 / n)
    half = z / (1 + z**2 / n) * math.sqrt(p * (1 - p) / n + z**2 / (4 * n**2))
    assert ends(found) == pytest.approx((middle - half, middle + half), rel=1e-10)


def test_bounds_open_to_whole_counts_and_keep_what_is_known():
    design = SampleDesign.simple_random(30, population_size=40)
    found = proportion(flags(3, 30), design)
    low, high = (end * 40 for end in ends(found))
    assert low == pytest.approx(round(low), abs=1e-9)
    assert high == pytest.approx(round(high), abs=1e-9)
    assert low >= 3 - 1e-9
    assert high <= 40 - 27 + 1e-9


def test_bounds_of_a_subgroup_leave_room_for_all_people_not_seen():
    """Of 40 people 30 were asked, 12 in the group: it has 12 + 10 members at most."""
    where = np.arange(30) < 12
    design = SampleDesign.simple_random(30, population_size=40)
    found = proportion(np.arange(30) < 11, design, where=where)
    assert found.interval.high <= 1 - 1 / 22 + 1e-12
    assert found.interval.low * 22 == pytest.approx(round(found.interval.low * 22), abs=1e-9)


def test_people_who_did_not_answer_are_not_known():
    """400 of 1,000 asked, 340 answered: 660 may have chosen it, not 600."""
    design = SampleDesign.simple_random(400, population_size=1000)
    answered = np.arange(400) < 340
    found = proportion(flags(339, 400), design, answered=answered)
    assert found.interval == proportion_interval(339, 340, population_size=1000)


def test_unequal_weights_leave_the_bounds_where_they_are():
    weights = np.tile([1.0, 3.0], 15)
    design = SampleDesign.weighted(weights, population_size=60)
    found = proportion(flags(7, 30), design)
    assert abs(found.interval.low * 60 - round(found.interval.low * 60)) > 1e-6


@pytest.mark.parametrize("method", [m for m in METHODS if m != "wald"])
@pytest.mark.parametrize("share", [0.0, 1.0])
def test_no_variation_never_has_zero_width_short_of_a_census(method, share):
    chosen = np.full(contracts.N, share)
    for name, design in contracts.designs().items():
        for where in (None, np.arange(contracts.N) % 4 == 0):
            found = proportion(chosen, design, method=method, where=where)
            assert found.half_width > 0, name
            assert "no_variation" in [c.code for c in found.cautions], name
            end = found.interval.low if share == 0 else found.interval.high
            assert end == share
            assert 0 < found.effective_base < math.inf


def test_no_variation_stand_in_is_the_base_less_weights_and_clusters():
    """k / (weighting effect (1-f) (1 + (members per cluster - 1) 0.05)), then Wilson."""
    weights = np.tile([4.0, 12.0], 60)
    clusters = np.repeat(np.arange(20), 6)
    design = SampleDesign.weighted(weights, clusters=clusters, population_clusters=50)
    found = proportion(np.zeros(120), design)
    loss = 120 * (weights**2).sum() / weights.sum() ** 2
    stand_in = 120 / (loss * (1 - 120 / weights.sum()) * (1 + 5 * 0.05))
    factor = (stats.t.ppf(0.975, 119) / stats.t.ppf(0.975, 19)) ** 2
    z2 = stats.norm.ppf(0.975) ** 2
    assert found.equivalent_base == pytest.approx(stand_in)
    assert found.interval.high == pytest.approx(z2 / (stand_in * factor + z2))


def test_clusters_that_agree_exactly_are_no_variation():
    """Half of every cluster chose it: no cluster differs, and still nothing is certain."""
    chosen = np.tile([0.0, 1.0], 30)
    found = proportion(chosen, SampleDesign.weighted(np.ones(60), clusters=np.arange(60) // 6))
    assert found.standard_error == pytest.approx(0, abs=1e-12)
    assert found.half_width > 0.05
    assert "no_variation" in [c.code for c in found.cautions]


def test_census_of_a_stratum_is_exact_and_the_rest_is_not():
    strata = np.repeat(["seen", "part"], [10, 20])
    design = SampleDesign.stratified(strata, population_sizes={"seen": 10, "part": 80})
    chosen = np.arange(30) % 3 == 0
    seen = proportion(chosen, design, where=strata == "seen")
    assert ends(seen) == (0.4, 0.4)
    assert proportion(chosen, design, where=strata == "part").half_width > 0


def test_without_degrees_of_freedom_a_share_lies_between_none_and_all():
    design = SampleDesign.weighted(np.full(8, 3.0), clusters=["one"] * 8)
    found = proportion(flags(3, 8), design)
    assert ends(found) == (0.0, 1.0)
    assert math.isnan(found.standard_error)
    assert "no_degrees_of_freedom" in [c.code for c in found.cautions]
    assert math.isinf(proportion(flags(3, 8), design, method="wald").half_width)


def test_hypergeometric_is_for_simple_random_samples_of_everyone():
    simple = SampleDesign.simple_random(20, population_size=100)
    group = np.arange(20) < 9
    for design, where in (
        (simple, group),
        (SampleDesign.simple_random(20), None),
        (SampleDesign.simple_random(20, population_size=100, replacement=True), None),
        (SampleDesign.weighted(np.tile([3.0, 7.0], 10), population_size=100), None),
        (SampleDesign.stratified(group, population_sizes={True: 45, False: 55}), None),
    ):
        with pytest.raises(ValueError, match="must fit the sample"):
            proportion(flags(5, 20), design, where=where, method="hypergeometric")
    assert proportion(flags(5, 20), simple, method="hypergeometric").half_width > 0


def test_wrong_calls_are_refused_by_name():
    design = SampleDesign.simple_random(4)
    with pytest.raises(ValueError, match=r"^chosen must say true or false .* but got 2\.0"):
        proportion([0, 1, 2, 1], design)
    with pytest.raises(ValueError, match=r"^method must be the name of a method"):
        proportion([0, 1, 1, 1], design, method="gauss")
    assert proportion([0, 1, 2, 1], design, where=[True, True, False, True]).base == 3


@pytest.mark.parametrize("check", contracts.CHECKS)
def test_contract(check):
    check(contracts.PROPORTION)
