from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pytest
import statsmodels.api as sm
from scipy import stats

from estimators import SampleDesign, mean, mean_interval, ratio, total
from tests.support import contracts

PUBLISHED = Path(__file__).parents[1] / "published_values"
WORKED = json.loads((PUBLISHED / "design_based.json").read_text(encoding="utf-8"))
NIST = json.loads((PUBLISHED / "nist_univariate.json").read_text(encoding="utf-8"))


def rows_with(n: int, average: float, deviation: float) -> np.ndarray:
    """n numbers with exactly this mean and standard deviation (divisor n-1)."""
    numbers = np.arange(n) - (n - 1) / 2
    return average + deviation * numbers / numbers.std(ddof=1)


def values_of(case) -> np.ndarray:
    if "summary" in case:
        return np.concatenate([rows_with(*row) for row in case["summary"]])
    return np.array(case["values"], dtype=float)


def design_of(case) -> SampleDesign:
    told = dict(case["design"])
    kind, n = told.pop("kind"), len(values_of(case))
    if kind == "simple_random":
        return SampleDesign.simple_random(n, **told)
    if kind == "stratified":
        return SampleDesign.stratified(told["strata"], population_sizes=told["population_sizes"])
    if kind == "clustered":
        return SampleDesign.clustered(**told)
    return SampleDesign.weighted(told["weights"])


def by_likeness(case, design_effect: float) -> float:
    """1 + (M-1) rho, where the design effect times the variance is the mean square between."""
    values = values_of(case)
    size = case["design"]["clusters"].count(0)
    clusters = len(values) // size
    between = design_effect * values.var(ddof=1)
    squares = (len(values) - 1) * values.var(ddof=1) - (clusters - 1) * between
    within = squares / (clusters * (size - 1))
    return 1 + (size - 1) * (between - within) / (between + (size - 1) * within)


def figures_of(case) -> dict[str, float]:
    """Every figure a printed example may give, by our functions."""
    values, design = values_of(case), design_of(case)
    found = {}
    if not design.relative_weights:
        whole = total(values, design)
        found |= {"total": whole.value, "total_error": whole.standard_error}
        found["total_variance"] = whole.standard_error**2
        if "known_size" in case:
            found["known_mean"] = whole.value / case["known_size"]
            found["known_mean_error"] = whole.standard_error / case["known_size"]
    average = mean(values, design)
    found |= {"mean": average.value, "mean_error": average.standard_error}
    found["mean_variance"] = average.standard_error**2
    endless = mean(values, design.without_correction())
    found["variance"] = endless.standard_error**2 * len(values)
    if case["design"]["kind"] == "clustered":
        found["design_effect_by_likeness"] = by_likeness(case, average.design_effect)
    found["share_positive"] = mean(values > 0, design).value
    for label in set(case["design"].get("strata", [])):
        here = np.array(case["design"]["strata"]) == label
        found[f"mean in {label}"] = mean(values, design, where=here).value
    if "denominators" in case:
        quotient = ratio(values, case["denominators"], design)
        found["ratio"] = quotient.value
        found["ratio_total"] = quotient.value * case.get("known_total", 1)
    return found


@pytest.mark.parametrize("case", WORKED["cases"], ids=lambda case: case["name"])
def test_published_examples(case):
    found = figures_of(case)
    for wanted in case["expected"]:
        figure = found[wanted["figure"]] * wanted.get("multiplier", 1)
        assert figure == pytest.approx(wanted["value"], abs=wanted["tolerance"]), wanted["figure"]


def nist_values(case) -> np.ndarray:
    if isinstance(case["values"], list):
        return np.array(case["values"], dtype=float)
    middle = case["mean"]["value"]
    return np.array([middle] + [round(middle + s, 1) for s in (-0.1, 0.1)] * 500)


@pytest.mark.parametrize("case", NIST["cases"], ids=lambda case: case["name"])
def test_certified_means_and_deviations(case):
    values = nist_values(case)
    found = mean(values, SampleDesign.simple_random(len(values)))
    deviation = found.standard_error * math.sqrt(len(values))
    assert found.value == pytest.approx(case["mean"]["value"], rel=1e-14)
    assert deviation == pytest.approx(case["two_pass_sd"], rel=1e-9)
    assert deviation == pytest.approx(case["sd"]["value"], rel=1e-8)  # digits the data can hold


def test_loss_by_unequal_weights_is_that_of_kish():
    """Rows in inverse proportion to their weights, values that vary alike in both groups."""
    for row in WORKED["weight_loss"]["rows"]:
        k = row["ratio"]
        first, second = round(k * 200), 200  # weights 1 and k
        weights = np.repeat([1.0, k], [first, second])
        design = SampleDesign.quota(first + second, weights=weights)
        flags = np.zeros(first + second)
        loss = mean(flags, design).design_effect - 1
        assert loss == pytest.approx(row["loss"], abs=row["tolerance"])


@pytest.fixture
def spend():
    return np.random.default_rng(7).lognormal(3.0, 1.0, 60)


def test_mean_equals_the_t_interval_of_scipy(spend):
    found = mean(spend, SampleDesign.simple_random(60), confidence=0.9)
    low, high = stats.ttest_1samp(spend, 0.0).confidence_interval(0.9)
    assert (found.interval.low, found.interval.high) == pytest.approx((low, high), rel=1e-12)
    assert found.degrees_of_freedom == 59
    assert found.interval.method == "t"


def test_mean_equals_mean_interval(spend):
    found = mean(spend, SampleDesign.simple_random(60, population_size=200))
    summary = mean_interval(spend.mean(), spend.std(ddof=1), 60, population_size=200)
    assert (found.interval.low, found.interval.high) == pytest.approx(
        (summary.low, summary.high), rel=1e-12
    )


def test_weighted_clustered_mean_equals_cluster_robust_least_squares(spend):
    """A regression on a constant with cluster-robust errors is the weighted mean."""
    rng = np.random.default_rng(8)
    weights, clusters = rng.uniform(1, 5, 60), rng.integers(0, 12, 60)
    fit = sm.WLS(spend, np.ones(60), weights=weights).fit(
        cov_type="cluster", cov_kwds={"groups": clusters}
    )
    found = mean(spend, SampleDesign.weighted(weights, clusters=clusters))
    assert found.value == pytest.approx(fit.params[0], rel=1e-12)
    assert found.standard_error == pytest.approx(fit.bse[0], rel=1e-10)


def test_subgroup_of_a_simple_sample_is_the_simple_sample_of_the_subgroup(spend):
    group = np.arange(60) % 7 == 0
    found = mean(spend, SampleDesign.simple_random(60), where=group)
    alone = mean(spend[group], SampleDesign.simple_random(int(group.sum())))
    assert found.value == pytest.approx(alone.value, rel=1e-14)
    assert found.standard_error == pytest.approx(alone.standard_error, rel=1e-12)
    assert found.degrees_of_freedom == alone.degrees_of_freedom == 8
    assert found.interval.high == pytest.approx(alone.interval.high, rel=1e-12)


def test_a_stratum_as_subgroup_is_the_simple_sample_of_the_stratum(spend):
    strata = np.repeat(["a", "b"], [20, 40])
    design = SampleDesign.stratified(strata, population_sizes={"a": 50, "b": 900})
    found = mean(spend, design, where=strata == "a")
    alone = mean(spend[:20], SampleDesign.simple_random(20, population_size=50))
    assert found.standard_error == pytest.approx(alone.standard_error, rel=1e-12)
    assert found.degrees_of_freedom == 19
    assert found.design_effect == pytest.approx(1.0, rel=1e-9)


def test_subgroup_of_five_covers_as_promised():
    """With 999 degrees of freedom and no factor the same interval covers 84.6 percent."""
    rng = np.random.default_rng(5)
    where = np.arange(1000) < 5
    design = SampleDesign.simple_random(1000)
    values = np.zeros(1000)
    hits, repeats = 0, 4000
    for _ in range(repeats):
        values[:5] = rng.normal(size=5)
        found = mean(values, design, where=where)
        hits += found.interval.low <= 0 <= found.interval.high
    assert hits / repeats == pytest.approx(0.95, abs=3 * math.sqrt(0.95 * 0.05 / repeats))


def test_any_simple_random_figure_has_design_effect_one(spend):
    design = SampleDesign.simple_random(60, population_size=150)
    group = np.arange(60) % 4 == 0
    for estimator in (mean, total):
        for where, rows in ((None, 60), (group, 15)):
            found = estimator(spend, design, where=where)
            assert found.design_effect == pytest.approx(1.0, rel=1e-9)
            assert found.effective_base == pytest.approx(rows, rel=1e-9)
            assert found.equivalent_base == pytest.approx(rows / (1 - 60 / 150), rel=1e-9)


def test_drawing_with_replacement_loses_the_correction(spend):
    """Against drawing without replacement its design effect is 1/(1-f)."""
    found = mean(spend, SampleDesign.simple_random(60, population_size=150, replacement=True))
    assert found.design_effect == pytest.approx(1 / (1 - 60 / 150), rel=1e-9)
    assert found.equivalent_base == pytest.approx(60, rel=1e-9)


def test_one_stratum_is_a_simple_random_sample(spend):
    design = SampleDesign.stratified(["x"] * 60, population_sizes={"x": 300})
    contracts.assert_same(
        mean(spend, design), mean(spend, SampleDesign.simple_random(60, population_size=300))
    )


def test_equal_weights_are_a_simple_random_sample(spend):
    design = SampleDesign.weighted(np.full(60, 5.0), population_size=300)
    simple = SampleDesign.simple_random(60, population_size=300)
    contracts.assert_same(mean(spend, design), mean(spend, simple))
    contracts.assert_same(total(spend, design), total(spend, simple))


def test_weights_of_a_stratified_sample_are_the_stratified_sample(spend):
    strata = np.repeat(["a", "b", "c"], 20)
    sizes = {"a": 100, "b": 40, "c": 700}
    plain = SampleDesign.stratified(strata, population_sizes=sizes)
    for size in (sizes, 840):
        weighted = SampleDesign.weighted(plain.weights, strata=strata, population_size=size)
        contracts.assert_same(mean(spend, weighted), mean(spend, plain))
        contracts.assert_same(total(spend, weighted), total(spend, plain))


def test_doubled_weights_change_no_mean_and_double_totals(spend):
    weights = np.random.default_rng(3).uniform(2, 9, 60)
    once, twice = SampleDesign.weighted(weights), SampleDesign.weighted(2 * weights)
    assert mean(spend, twice).value == pytest.approx(mean(spend, once).value, rel=1e-13)
    assert mean(spend, twice).interval.high == pytest.approx(mean(spend, once).interval.high)
    assert total(spend, twice).value == pytest.approx(2 * total(spend, once).value)
    assert total(spend, twice).standard_error == pytest.approx(
        2 * total(spend, once).standard_error
    )


def test_relative_weights_scaled_to_the_universe_give_universe_times_mean(spend):
    weights = np.random.default_rng(3).uniform(0.2, 2, 60)
    weights /= weights.mean()
    design = SampleDesign.weighted(weights, population_size=5000)
    average, whole = mean(spend, design), total(spend, design)
    assert whole.value == pytest.approx(5000 * average.value, rel=1e-12)
    assert whole.standard_error == pytest.approx(5000 * average.standard_error, rel=1e-12)


def test_clusters_of_one_row_are_a_simple_random_sample(spend):
    design = SampleDesign.clustered(np.arange(60), population_clusters=300)
    simple = SampleDesign.simple_random(60, population_size=300)
    contracts.assert_same(mean(spend, design), mean(spend, simple))


def test_two_stages_with_all_clusters_drawn_are_strata(spend):
    clusters = np.repeat([1, 2, 3], 20)
    sizes = {1: 100, 2: 40, 3: 700}
    design = SampleDesign.two_stage(clusters, cluster_sizes=sizes, population_clusters=3)
    strata = SampleDesign.stratified(clusters, population_sizes=sizes)
    assert design.population_size == 840
    group = np.arange(60) % 3 == 0
    answered = np.arange(60) % 4 != 0
    for kind in ({}, {"where": group}, {"answered": answered}):
        contracts.assert_same(mean(spend, design, **kind), mean(spend, strata, **kind))
        contracts.assert_same(total(spend, design, **kind), total(spend, strata, **kind))


def test_two_stages_with_all_members_are_one_stage(spend):
    clusters = np.repeat(np.arange(12), 5)
    design = SampleDesign.two_stage(
        clusters, cluster_sizes=dict.fromkeys(range(12), 5), population_clusters=40
    )
    contracts.assert_same(
        mean(spend, design), mean(spend, SampleDesign.clustered(clusters, population_clusters=40))
    )


def test_a_mixture_of_a_complete_and_a_sampled_stratum_of_clusters(spend):
    """The stratum drawn completely acts as strata of rows: the sum of two separate variances."""
    clusters = np.repeat(np.arange(6), 10)
    strata = np.repeat(["all", "some"], [20, 40])
    sizes = {c: 15 + c for c in range(6)}
    design = SampleDesign.two_stage(
        clusters,
        cluster_sizes=sizes,
        population_clusters={"all": 2, "some": 9},
        strata=strata,
    )
    complete = SampleDesign.stratified(clusters[:20], population_sizes={0: 15, 1: 16})
    sampled = SampleDesign.two_stage(clusters[20:], cluster_sizes=sizes, population_clusters=9)
    parts = total(spend[:20], complete), total(spend[20:], sampled)
    found = total(spend, design)
    assert found.value == pytest.approx(parts[0].value + parts[1].value)
    assert found.standard_error == pytest.approx(
        math.hypot(parts[0].standard_error, parts[1].standard_error)
    )
    assert found.degrees_of_freedom == (20 - 2) + (4 - 1)


def test_answers_missing_is_the_smaller_sample(spend):
    """340 answers of 400 asked are a sample of 340 of the same universe."""
    values = np.tile(spend, 7)[:400]
    answered = np.arange(400) % 20 >= 3
    design = SampleDesign.simple_random(400, population_size=1000)
    smaller = SampleDesign.simple_random(340, population_size=1000)
    for estimator in (mean, total):
        found = estimator(values, design, answered=answered)
        contracts.assert_same(found, estimator(values[answered], smaller), cautions=False)
        assert [c.code for c in found.cautions] == ["answers_missing"]
        assert "60 of 400 gave" in found.cautions[0].sentence


def test_answers_missing_in_strata_is_the_smaller_stratified_sample(spend):
    strata = np.repeat(["a", "b"], [25, 35])
    sizes = {"a": 400, "b": 90}
    answered = (np.arange(60) % 5 > 0) & ((strata == "b") | (np.arange(60) % 2 == 0))
    design = SampleDesign.stratified(strata, population_sizes=sizes)
    smaller = SampleDesign.stratified(strata[answered], population_sizes=sizes)
    for estimator in (mean, total):
        found = estimator(spend, design, answered=answered)
        contracts.assert_same(found, estimator(spend[answered], smaller), cautions=False)


def test_given_weights_speak_for_the_silent_of_their_stratum(spend):
    """Within each stratum the answers take over the weight of those who gave none."""
    weights = np.random.default_rng(3).uniform(2, 9, 60)
    strata, answered = np.arange(60) % 2, np.arange(60) % 4 > 0
    design = SampleDesign.weighted(weights, strata=strata)
    found = mean(spend, design, answered=answered)
    by_stratum = [
        np.average(spend[heard], weights=weights[heard])
        for heard in (answered & (strata == h) for h in (0, 1))
    ]
    sizes = [weights[strata == h].sum() for h in (0, 1)]
    assert found.value == pytest.approx(np.average(by_stratum, weights=sizes), rel=1e-12)
    assert found.weighted_base == pytest.approx(weights.sum())


def test_given_weights_without_strata_are_a_plain_weighted_mean_of_the_answers(spend):
    weights = np.random.default_rng(3).uniform(2, 9, 60)
    answered = np.arange(60) % 4 > 0
    design = SampleDesign.weighted(weights, population_size=600)
    found = mean(spend, design, answered=answered)
    value = np.average(spend[answered], weights=weights[answered])
    shares = (weights * (spend - value))[answered] / weights[answered].sum()
    assert found.value == pytest.approx(value, rel=1e-12)
    assert found.standard_error**2 == pytest.approx(
        (1 - 0.1 * 45 / 60) * 45 / 44 * (shares @ shares), rel=1e-12
    )


@pytest.mark.parametrize("group", [None, np.arange(60) % 7 < 4])
@pytest.mark.parametrize("estimator", [mean, total])
def test_missing_answers_are_the_same_for_strata_by_counts_and_by_weights(spend, estimator, group):
    strata = np.repeat(["a", "b"], [25, 35])
    sizes = {"a": 400, "b": 90}
    answered = (np.arange(60) % 5 > 0) & ((strata == "b") | (np.arange(60) % 2 == 0))
    design = SampleDesign.stratified(strata, population_sizes=sizes)
    weighted = SampleDesign.weighted(design.weights, strata=strata, population_size=sizes)
    found = [estimator(spend, d, where=group, answered=answered) for d in (design, weighted)]
    contracts.assert_same(*found)


def test_an_attempted_census_with_missing_answers_is_no_census(spend):
    design = SampleDesign.attempted_census(60, population_size=60)
    answered = np.arange(60) % 2 == 0
    found = mean(spend, design, answered=answered)
    alone = mean(spend[answered], SampleDesign.simple_random(30, population_size=60))
    assert found.standard_error == pytest.approx(alone.standard_error, rel=1e-12)
    assert [c.code for c in found.cautions] == ["attempted_census", "answers_missing"]


def test_a_subgroup_total_with_missing_answers_varies_less_than_the_answers_alone():
    """Who is in the subgroup is known of all asked: an all-ones answer adds no error of its own."""
    group = np.arange(100) % 2 == 0
    answered = np.arange(100) % 3 > 0
    design = SampleDesign.simple_random(100, population_size=900)
    counted = total(np.ones(100), design, where=group, answered=answered)
    known = total(np.ones(100), design, where=group)
    assert counted.value == pytest.approx(known.value)
    assert counted.standard_error == pytest.approx(known.standard_error, rel=1e-9)


def test_a_total_over_relative_weights_is_refused(spend):
    for design in (
        SampleDesign.simple_random(60),
        SampleDesign.quota(60),
        SampleDesign.weighted(np.full(60, 1.0009)),
        SampleDesign.clustered(np.arange(60) // 6),
    ):
        with pytest.raises(ValueError, match="design must say how large the universe is"):
            total(spend, design)
    assert total(spend, SampleDesign.weighted(np.full(60, 1.002))).value > 0


def test_ratio_equals_the_mean_where_every_denominator_is_one(spend):
    design = SampleDesign.stratified(np.arange(60) % 3, population_sizes={0: 90, 1: 50, 2: 70})
    contracts.assert_same(ratio(spend, np.ones(60), design), mean(spend, design))


def test_ratio_error_is_the_textbook_residual_formula():
    """Cochran (1977), equation 6.13, written out; data made up."""
    y, x = np.array([18.0, 78, 62, 132, 160]), np.array([1.0, 2, 3, 4, 5])
    found = ratio(y, x, SampleDesign.simple_random(5, population_size=8))
    residuals = y - found.value * x
    variance = (1 - 5 / 8) / (5 * x.mean() ** 2) * (residuals**2).sum() / 4
    assert found.standard_error**2 == pytest.approx(variance, rel=1e-12)


def test_ratio_without_denominator_is_no_number():
    found = ratio([1.0, 2.0], [1.0, -1.0], SampleDesign.simple_random(2))
    assert math.isnan(found.value)
    assert [c.code for c in found.cautions] == ["denominator_zero"]


def test_equal_answers_carry_a_caution():
    found = mean(np.full(30, 0.1), SampleDesign.simple_random(30, population_size=90))
    assert found.standard_error == 0
    assert [c.code for c in found.cautions] == ["no_variation"]
    assert found.equivalent_base == pytest.approx(45.0)


def test_without_degrees_of_freedom_there_are_no_bounds():
    lonely = mean([4.0], SampleDesign.simple_random(1, population_size=9))
    assert lonely.value == 4.0
    assert math.isnan(lonely.standard_error)
    assert (lonely.interval.low, lonely.interval.high) == (-math.inf, math.inf)
    assert [c.code for c in lonely.cautions] == ["no_degrees_of_freedom"]
    pairs = SampleDesign.stratified(["a", "b"], population_sizes={"a": 5, "b": 5})
    found = mean([1.0, 3.0], pairs)
    assert found.standard_error > 0
    assert math.isinf(found.half_width)


def test_relative_standard_error_is_nan_at_zero():
    found = mean([-1.0, 1.0], SampleDesign.simple_random(2))
    assert math.isnan(found.relative_standard_error)
    assert mean([1.0, 3.0], SampleDesign.simple_random(2)).relative_standard_error == 0.5


@pytest.mark.parametrize("check", contracts.CHECKS)
@pytest.mark.parametrize("estimator", [contracts.MEAN, contracts.TOTAL, contracts.RATIO], ids=str)
def test_contract(estimator, check):
    check(estimator)
