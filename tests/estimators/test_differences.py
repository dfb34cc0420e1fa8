from __future__ import annotations

import json
import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
import statsmodels.api as sm
from scipy import stats
from statsmodels.stats.weightstats import CompareMeans, DescrStatsW

from estimators import (
    Difference,
    InputError,
    SampleDesign,
    difference,
    difference_of,
    mean,
    proportion,
    total,
)
from tests.support import contracts
from tests.support.contracts import CLUSTERS, SIZES, STRATA, Estimator, N, designs

PUBLISHED = Path(__file__).parents[1] / "published_values"
COUNTS = json.loads((PUBLISHED / "differences_of_counts.json").read_text(encoding="utf-8"))
WORKED = json.loads((PUBLISHED / "differences_worked.json").read_text(encoding="utf-8"))
ROWS = np.arange(60)


def flags(count: int, n: int) -> np.ndarray:
    return np.arange(n) < count


def share_of(count: int, n: int):
    return proportion(flags(count, n), SampleDesign.simple_random(n))


def rows_with(n: int, average: float, deviation: float) -> np.ndarray:
    """n numbers with exactly this mean and standard deviation (divisor n-1)."""
    numbers = np.arange(n) - (n - 1) / 2
    return average + deviation * numbers / numbers.std(ddof=1)


def with_normal_error(share):
    """The same share with the error of the textbooks: divisor n, normal quantile."""
    error = share.standard_error * math.sqrt((share.base - 1) / share.base)
    return replace(share, standard_error=error, degrees_of_freedom=math.inf)


def of_two_groups(counts, **named) -> Difference:
    """Two groups of one endless sample, counts [(chosen, n), (chosen, n)]."""
    chosen = np.concatenate([flags(*count) for count in counts])
    first = np.arange(len(chosen)) < counts[0][1]
    design = SampleDesign.simple_random(len(chosen))
    return difference(chosen, chosen, design, first_where=first, second_where=~first, **named)


def assert_same(first: Difference, second: Difference, *, cautions: bool = True) -> None:
    contracts.assert_same(first, second, cautions=cautions)
    assert first.p_value == pytest.approx(second.p_value, rel=1e-9, abs=1e-12, nan_ok=True)


@pytest.fixture
def spend():
    return np.random.default_rng(7).lognormal(3.0, 1.0, 60)


@pytest.fixture
def later():
    return np.random.default_rng(9).lognormal(3.2, 1.0, 60)


# Published values


def is_judged_so(case) -> bool:
    """Where both shares vary the printed interval stands in test_share_differences."""
    counts = case["first"], case["second"]
    return case["method"] == "wald" or not all(0 < count < n for count, n in counts)


@pytest.mark.parametrize(
    "case",
    [c for c in COUNTS if is_judged_so(c)],
    ids=lambda case: str(case["first"] + case["second"]),
)
def test_published_differences_of_two_shares(case):
    counts = case["first"], case["second"]
    first, second = (share_of(*count) for count in counts)
    if case["method"] == "wald":
        found = difference_of(with_normal_error(first), with_normal_error(second))
    else:
        found = difference_of(first, second)
        assert_same(found, of_two_groups(counts), cautions=False)
        assert found.interval.method == "square_and_add"
    low, high = found.interval.low, found.interval.high
    assert low == pytest.approx(case["low"], abs=case["tolerance"][0])
    assert high == pytest.approx(case["high"], abs=case["tolerance"][1])


def test_the_certified_test_of_two_groups():
    case = WORKED["welch"]
    first, second = rows_with(*case["first"]), rows_with(*case["second"])
    values, group = np.concatenate([first, second]), np.arange(328) < 249
    in_one = difference(
        values, values, SampleDesign.simple_random(328), first_where=group, second_where=~group
    )
    apart = difference_of(
        mean(first, SampleDesign.simple_random(249)), mean(second, SampleDesign.simple_random(79))
    )
    assert_same(in_one, apart)
    found = {"t": apart.value / apart.standard_error, "df": apart.degrees_of_freedom}
    for wanted in case["expected"]:
        assert found[wanted["figure"]] == pytest.approx(wanted["value"], abs=wanted["tolerance"])


def test_the_order_of_statements_moves_the_answer():
    case = WORKED["order_of_statements"]
    shares = [with_normal_error(share_of(*case[side])) for side in ("first", "second")]
    found = difference_of(*shares, confidence=case["confidence"])
    figures = {
        "p1": shares[0].value,
        "p2": shares[1].value,
        "difference": found.value,
        "se": found.standard_error,
        "lower": found.interval.low,
        "upper": found.interval.high,
    }
    for wanted in case["expected"]:
        assert figures[wanted["figure"]] == pytest.approx(
            wanted["value"], abs=wanted["tolerance"]
        ), wanted["figure"]


@pytest.mark.parametrize("case", WORKED["margins"], ids=["states", "periods"])
def test_published_tests_of_two_margins(case):
    plain = share_of(1, 2)  # carries value and error of the printed figures
    first, second = (
        replace(
            plain,
            value=value,
            standard_error=margin / case["quantile"],
            degrees_of_freedom=math.inf,
        )
        for value, margin in (case["first"], case["second"])
    )
    found = difference_of(first, second, correlation=case["correlation"])
    z = found.value / found.standard_error
    assert z == pytest.approx(case["z"], abs=case["tolerance"])
    assert found.p_value == pytest.approx(2 * stats.norm.sf(abs(z)), rel=1e-12)


@pytest.mark.parametrize("case", WORKED["worked"], ids=["two answers", "net"])
def test_two_answers_to_one_question(case):
    first, second, n = case["first"], case["second"], case["n"]
    answers = np.repeat([1, 2, 0], [first, second, n - first - second])
    found = difference(answers == 1, answers == 2, SampleDesign.simple_random(n))
    exact = (first + second - (first - second) ** 2 / n) / n / (n - 1)
    assert found.standard_error**2 == pytest.approx(exact, rel=1e-12)
    divisor = math.sqrt((n - 1) / n) if case.get("divisor") == "n" else 1.0
    half_width = stats.norm.ppf(0.975) * found.standard_error * divisor
    assert half_width == pytest.approx(case["half_width"], abs=case["tolerance"])
    score = np.select([answers == 1, answers == 2], [1, -1], 0)
    alone = mean(score, SampleDesign.simple_random(n))
    assert (found.value, found.half_width) == pytest.approx((alone.value, alone.half_width))


# Second opinions


def test_two_groups_equal_the_test_of_welch(spend):
    first, second = spend[:20], spend[25:]
    found = difference(
        spend,
        spend,
        SampleDesign.simple_random(60),
        first_where=ROWS < 20,
        second_where=ROWS >= 25,
        confidence=0.9,
    )
    wanted = stats.ttest_ind(first, second, equal_var=False)
    assert found.p_value == pytest.approx(wanted.pvalue, rel=1e-10)
    assert found.degrees_of_freedom == pytest.approx(wanted.df, rel=1e-12)
    comparison = CompareMeans(DescrStatsW(first), DescrStatsW(second))
    limits = comparison.tconfint_diff(alpha=0.1, usevar="unequal")
    assert (found.interval.low, found.interval.high) == pytest.approx(limits, rel=1e-10)
    assert found.interval.method == "t"
    assert found.design_effect == 1


def test_two_answers_equal_the_paired_test_of_scipy(spend, later):
    found = difference(spend, later, SampleDesign.simple_random(60))
    wanted = stats.ttest_rel(spend, later)
    assert found.p_value == pytest.approx(wanted.pvalue, rel=1e-10)
    assert found.degrees_of_freedom == wanted.df == 59
    interval = wanted.confidence_interval(0.95)
    assert (found.interval.low, found.interval.high) == pytest.approx(tuple(interval), rel=1e-10)


def test_groups_within_clusters_equal_cluster_robust_least_squares(spend):
    """The slope on a group mark, with errors by cluster; every cluster has people of both."""
    rng = np.random.default_rng(8)
    weights, clusters = rng.uniform(1, 5, 60), ROWS % 12
    group = ROWS // 12 % 2 == 0
    spend = spend + 4 * clusters
    fit = sm.WLS(spend, np.column_stack([np.ones(60), group]), weights=weights).fit(
        cov_type="cluster", cov_kwds={"groups": clusters, "use_correction": False}
    )
    found = difference(
        spend,
        spend,
        SampleDesign.weighted(weights, clusters=clusters),
        first_where=group,
        second_where=~group,
    )
    assert found.value == pytest.approx(fit.params[1], rel=1e-10)
    assert found.standard_error == pytest.approx(fit.bse[1] * math.sqrt(12 / 11), rel=1e-10)
    assert found.degrees_of_freedom <= 11  # one sample of twelve clusters, not two


# Identities


@pytest.mark.parametrize("name", designs())
def test_a_figure_minus_itself_is_nothing(name):
    design = designs()[name]
    values = np.random.default_rng(3).gamma(2.0, 5.0, N)
    for where in (None, np.arange(N) % 3 > 0):
        found = difference(values, values, design, first_where=where, second_where=where)
        assert (found.value, found.standard_error, found.p_value) == (0, 0, 1)
        assert found.interval.low == found.interval.high == 0
        assert found.cautions == mean(values, design, where=where).cautions
        nobody = difference(np.zeros(N), z := np.zeros(N), design, first_where=where)
        assert nobody.value == 0
        assert nobody.p_value == 1
        assert difference(z, z, design).half_width == 0


@pytest.mark.parametrize("name", designs())
def test_changing_sides_changes_the_sign(name):
    rng = np.random.default_rng(4)
    first, second = rng.gamma(2.0, 5.0, N), rng.gamma(2.0, 4.0, N)
    masks = np.arange(N) % 5 > 1, np.arange(N) % 7 < 4
    answered = np.arange(N) % 11 > 0
    for values in ((first, second), (first, first), (first > 99, second > 5)):
        one = difference(
            values[0],
            values[1],
            designs()[name],
            first_where=masks[0],
            second_where=masks[1],
            answered=answered,
        )
        other = difference(
            values[1],
            values[0],
            designs()[name],
            first_where=masks[1],
            second_where=masks[0],
            answered=answered,
        )
        assert other.value == pytest.approx(-one.value, abs=1e-12)
        ends = -one.interval.high, -one.interval.low
        assert (other.interval.low, other.interval.high) == pytest.approx(ends, abs=1e-9)
        assert other.p_value == pytest.approx(one.p_value, rel=1e-9)
        assert other.degrees_of_freedom == pytest.approx(one.degrees_of_freedom)


@pytest.mark.parametrize("name", designs())
def test_two_answers_are_the_mean_of_their_difference(name):
    rng = np.random.default_rng(5)
    first, second = rng.gamma(2.0, 5.0, N), rng.gamma(2.0, 4.0, N)
    where, answered = np.arange(N) % 5 > 0, np.arange(N) % 4 > 0
    found = difference(
        first, second, designs()[name], first_where=where, second_where=where, answered=answered
    )
    wanted = mean(first - second, designs()[name], where=where, answered=answered)
    assert (found.value, found.standard_error, found.half_width) == pytest.approx(
        (wanted.value, wanted.standard_error, wanted.half_width), rel=1e-12
    )
    assert found.degrees_of_freedom == wanted.degrees_of_freedom
    assert found.design_effect == pytest.approx(wanted.design_effect)
    assert (found.base, found.weighted_base) == (wanted.base, wanted.weighted_base)
    assert found.cautions == wanted.cautions


def test_a_part_against_the_whole_is_its_share_of_the_part_against_the_rest(spend):
    """(1 - W) (part - rest); with W known, as in strata, errors and degrees of freedom too."""
    strata = np.repeat(["part", "rest"], [15, 45])
    part, sizes = strata == "part", {"part": 200, "rest": 300}
    design = SampleDesign.stratified(strata, population_sizes=sizes)
    whole = difference(spend, spend, design, first_where=part)
    rest = difference(spend, spend, design, first_where=part, second_where=~part)
    assert whole.value == pytest.approx(0.6 * rest.value, rel=1e-12)
    assert whole.standard_error == pytest.approx(0.6 * rest.standard_error, rel=1e-12)
    assert whole.degrees_of_freedom == pytest.approx(rest.degrees_of_freedom, rel=0.02)
    assert whole.p_value == pytest.approx(rest.p_value, rel=0.02)
    assert (whole.base, rest.base) == (60, 60)


def test_a_part_against_the_whole_where_its_size_is_left_to_chance(spend):
    """Value (1 - W)(part - rest); the error by hand, one linearised column (Woodruff 1971)."""
    part = ROWS % 4 == 0
    design = SampleDesign.simple_random(60, population_size=90)
    whole = difference(spend, spend, design, first_where=part)
    rest = difference(spend, spend, design, first_where=part, second_where=~part)
    assert whole.value == pytest.approx(0.75 * rest.value, rel=1e-12)
    scale = math.sqrt(15 * 59 / (14 * 60))  # 15 in the part of 60
    column = np.where(part, scale * (spend - spend[part].mean()) / 15, 0)
    column = column - (spend - spend.mean()) / 60
    wanted = (1 - 60 / 90) * 60 / 59 * (column @ column)
    assert whole.standard_error**2 == pytest.approx(wanted, rel=1e-12)


def test_groups_in_different_strata_are_independent_samples(spend):
    strata = np.repeat(["a", "b"], [25, 35])
    sizes = {"a": 50, "b": 900}
    design = SampleDesign.stratified(strata, population_sizes=sizes)
    found = difference(spend, spend, design, first_where=strata == "a", second_where=strata == "b")
    wanted = difference_of(
        mean(spend[:25], SampleDesign.simple_random(25, population_size=50)),
        mean(spend[25:], SampleDesign.simple_random(35, population_size=900)),
    )
    assert_same(found, wanted)


def test_missing_answers_leave_two_smaller_samples(spend):
    """Each group has its own part of answers, as each mean has."""
    group = ROWS < 30
    answered = np.where(group, ROWS % 2 == 0, ROWS % 10 > 0)
    for design in (
        SampleDesign.simple_random(60, population_size=90),
        SampleDesign.weighted(np.full(60, 1.5), population_size=90),
    ):
        found = difference(
            spend, spend, design, first_where=group, second_where=~group, answered=answered
        )
        parts = [mean(spend, design, where=g, answered=answered) for g in (group, ~group)]
        assert_same(found, difference_of(*parts), cautions=False)
        assert found.standard_error == pytest.approx(math.hypot(*(p.standard_error for p in parts)))
        assert [c.code for c in found.cautions] == ["answers_missing"]
        assert "18 of 60 gave" in found.cautions[0].sentence


def test_missing_answers_of_pairs_are_the_smaller_sample(spend, later):
    answered = ROWS % 3 > 0
    found = difference(
        spend, later, SampleDesign.simple_random(60, population_size=200), answered=answered
    )
    smaller = SampleDesign.simple_random(40, population_size=200)
    assert_same(found, difference(spend[answered], later[answered], smaller), cautions=False)


def test_an_attempted_census_of_two_departments(spend):
    design = SampleDesign.attempted_census(60, population_size=60)
    group = ROWS < 30
    whole = difference(spend, spend, design, first_where=group, second_where=~group)
    assert whole.standard_error == 0
    assert (whole.interval.low, whole.p_value) == (whole.value, 0)
    partly = difference(
        spend, spend, design, first_where=group, second_where=~group, answered=ROWS % 2 == 0
    )
    assert partly.standard_error > 0


def test_a_second_stratum_taken_completely_adds_no_error(spend):
    strata = np.repeat(["all", "some"], [25, 35])
    design = SampleDesign.stratified(strata, population_sizes={"all": 25, "some": 900})
    some = strata == "some"
    found = difference(spend, spend, design, first_where=some, second_where=~some)
    wanted = mean(spend, design, where=some)
    assert found.half_width == pytest.approx(wanted.half_width, rel=1e-12)
    assert found.degrees_of_freedom == pytest.approx(34)


# Degrees of freedom


def test_a_small_part_of_a_whole_keeps_its_few_degrees_of_freedom():
    values = np.random.default_rng(2).normal(size=1000)
    part = np.arange(1000) < 5
    found = difference(values, values, SampleDesign.simple_random(1000), first_where=part)
    assert 4 <= found.degrees_of_freedom < 4.5


def test_a_small_part_against_the_whole_covers_as_promised(rng):
    """With 999 degrees of freedom it would cover about 88 percent."""
    part, design, values = np.arange(200) < 5, SampleDesign.simple_random(200), rng.normal(size=200)
    hits, repeats = 0, 2000
    for _ in range(repeats):
        values[:5] = rng.normal(size=5)
        found = difference(values, values, design, first_where=part)
        truth = -values[5:].mean() * 195 / 200  # the part has mean zero, the rest is as drawn
        hits += found.interval.low <= truth <= found.interval.high
    assert hits / repeats == pytest.approx(0.95, abs=3 * math.sqrt(0.95 * 0.05 / repeats))


def test_nearly_the_same_groups_rest_on_the_few_who_differ(spend):
    first, second = ROWS != 3, ROWS != 7
    found = difference(
        spend, spend, SampleDesign.simple_random(60), first_where=first, second_where=second
    )
    assert found.value == pytest.approx((spend[7] - spend[3]) / 59)
    assert found.degrees_of_freedom < 3


def test_groups_that_share_all_clusters_are_one_sample_of_clusters(spend):
    design = SampleDesign.clustered(ROWS // 6)
    group = ROWS % 2 == 0
    shared = difference(spend, spend, design, first_where=group, second_where=~group)
    assert shared.degrees_of_freedom == 9
    half = ROWS < 30
    apart = difference(spend, spend, design, first_where=half, second_where=~half)
    assert 4 <= apart.degrees_of_freedom <= 8


def test_one_person_on_one_side_says_nothing(spend):
    found = difference(spend, spend, SampleDesign.simple_random(60), first_where=ROWS == 3)
    assert (found.interval.low, found.interval.high) == (-math.inf, math.inf)
    assert math.isnan(found.p_value)
    assert math.isnan(found.standard_error)
    assert [c.code for c in found.cautions] == ["no_degrees_of_freedom"]


# Shares that do not vary


def test_a_share_that_does_not_vary_is_judged_by_its_interval():
    found = of_two_groups([(0, 30), (6, 40)])
    assert found.interval.method == "square_and_add"
    assert [c.code for c in found.cautions] == ["no_variation_on_one_side"]
    assert "On at least one side" in found.cautions[0].sentence
    own, other = share_of(0, 30).interval, share_of(6, 40).interval
    assert found.interval.low == pytest.approx(-0.15 - (other.high - 0.15), rel=1e-12)
    assert found.interval.high == pytest.approx(-0.15 + math.hypot(own.high, 0.15 - other.low))
    assert 0.01 < found.p_value < 0.05
    assert found.interval.high < 0


@pytest.mark.parametrize("counts", [[(0, 30), (6, 40)], [(12, 12), (9, 14)], [(0, 5), (3, 5)]])
def test_the_p_value_is_where_the_interval_meets_zero(counts):
    for called in (
        of_two_groups,
        lambda both, **named: difference_of(*(share_of(*count) for count in both), **named),
    ):
        p_value = called(counts).p_value
        interval = called(counts, confidence=1 - p_value).interval
        assert min(abs(interval.low), abs(interval.high)) == pytest.approx(0, abs=1e-9)


def test_the_interval_of_a_finite_universe_and_its_test_agree():
    """Bounds go to whole counts and to what has been seen, so does the test."""
    chosen = np.repeat([0, 1, 0], [30, 6, 34])
    first = np.arange(70) < 30
    for size in (72, 90, 400):
        design = SampleDesign.simple_random(70, population_size=size)
        masks = {"first_where": first, "second_where": ~first}
        found = difference(chosen, chosen, design, **masks)
        ends = [proportion(chosen, design, where=w).interval for w in (first, ~first)]
        assert found.interval.high == pytest.approx(
            -0.15 + math.hypot(ends[0].high, 0.15 - ends[1].low)
        )
        for confidence in (0.5, 0.9, 0.95, 0.97, 0.99, 0.999):
            at_level = difference(chosen, chosen, design, **masks, confidence=confidence)
            assert (at_level.interval.high < 0) == (at_level.p_value <= 1 - confidence)
            assert at_level.p_value == found.p_value
        estimates = [proportion(chosen, design, where=w) for w in (first, ~first)]
        assert_same(found, difference_of(*estimates), cautions=False)


def test_nobody_on_either_side_is_no_proof_of_no_difference():
    found = of_two_groups([(0, 30), (0, 12)])
    assert (found.value, found.p_value) == (0, 1)
    assert found.interval.low < 0 < found.interval.high


def test_two_answers_that_nobody_or_everybody_gave():
    """Paired shares of which one does not vary are not correlated (Newcombe 1998, method 10)."""
    design = SampleDesign.simple_random(25)
    found = difference(np.zeros(25), np.arange(25) < 4, design)
    wanted = difference_of(share_of(0, 25), share_of(4, 25))
    assert (found.value, found.interval, found.p_value) == (
        wanted.value,
        wanted.interval,
        wanted.p_value,
    )
    never = difference(np.zeros(25), np.ones(25), design)
    assert never.value == -1
    assert never.half_width > 0
    assert never.p_value < 1e-6


def test_a_census_of_shares_has_no_error():
    chosen, group = np.arange(20) < 5, np.arange(20) < 5
    design = SampleDesign.simple_random(20, population_size=20)
    found = difference(chosen, chosen, design, first_where=group, second_where=~group)
    assert (found.interval.low, found.interval.high, found.p_value) == (1, 1, 0)
    assert found.cautions == ()


def test_equal_numbers_on_one_side_carry_a_caution(spend):
    group = ROWS < 30
    values = np.where(group, 7.3, spend)
    found = difference(
        values, values, SampleDesign.simple_random(60), first_where=group, second_where=~group
    )
    assert [c.code for c in found.cautions] == ["no_variation_on_one_side"]
    assert found.half_width == pytest.approx(
        mean(spend[30:], SampleDesign.simple_random(30)).half_width
    )
    pairs = difference(spend, spend + 2, SampleDesign.simple_random(60))
    assert [c.code for c in pairs.cautions] == ["no_variation"]
    level = np.full(60, 0.1)
    both = difference(
        level, level, SampleDesign.simple_random(60), first_where=group, second_where=~group
    )
    assert (both.value, both.p_value) == (0, 1)


# Separate samples


def test_waves_are_joined_as_welch_has_it(spend, later):
    first = mean(spend, SampleDesign.simple_random(60, population_size=100))
    second = mean(later[:25], SampleDesign.simple_random(25, population_size=400))
    found = difference_of(second, first, confidence=0.9)
    v, w = second.standard_error**2, first.standard_error**2
    df = (v + w) ** 2 / (v**2 / 24 + w**2 / 59)
    assert found.degrees_of_freedom == pytest.approx(df, rel=1e-12)
    assert found.half_width == pytest.approx(stats.t.ppf(0.95, df) * math.sqrt(v + w), rel=1e-12)
    t = found.value / math.sqrt(v + w)
    assert found.p_value == pytest.approx(2 * stats.t.sf(abs(t), df), rel=1e-10)
    assert (found.base, found.weighted_base) == (85, 500)
    assert found.design_effect == pytest.approx(1.0)
    assert math.isnan(found.effective_base)
    assert math.isnan(found.equivalent_base)


def test_differences_of_differences(spend, later):
    """Has the gap between two groups grown from wave to wave?"""
    design, group = SampleDesign.simple_random(60), ROWS < 20
    gaps = [
        difference(wave, wave, design, first_where=group, second_where=~group)
        for wave in (spend, later)
    ]
    found = difference_of(gaps[1], gaps[0])
    assert found.value == pytest.approx(gaps[1].value - gaps[0].value)
    assert found.standard_error == pytest.approx(
        math.hypot(gaps[0].standard_error, gaps[1].standard_error)
    )
    assert found.degrees_of_freedom < sum(gap.degrees_of_freedom for gap in gaps)


def test_the_same_people_in_both_waves_by_their_correlation(spend, later):
    design = SampleDesign.simple_random(60)
    parts = mean(later, design), mean(spend, design)
    correlation = np.corrcoef(spend, later)[0, 1]
    found = difference_of(*parts, correlation=correlation)
    paired = difference(later, spend, design)
    assert found.standard_error == pytest.approx(paired.standard_error, rel=1e-10)
    assert difference_of(parts[0], parts[0], correlation=1).p_value == 1


def test_a_correlation_narrows_square_and_add_too():
    pair = share_of(0, 30), share_of(9, 30)
    wide, narrow = difference_of(*pair), difference_of(*pair, correlation=0.5)
    assert narrow.half_width < wide.half_width
    assert narrow.p_value < wide.p_value


def test_cautions_of_both_samples_are_kept_once(spend):
    quota = mean(spend, SampleDesign.quota(60))
    census = mean(spend, SampleDesign.attempted_census(60, population_size=80))
    codes = [c.code for c in difference_of(quota, census).cautions]
    assert codes == ["quota_sample", "attempted_census"]
    assert [c.code for c in difference_of(quota, quota).cautions] == ["quota_sample"]


def test_figures_that_are_not_there(spend):
    design = SampleDesign.simple_random(60)
    nothing = mean(spend, design, where=np.zeros(60, bool))
    found = difference_of(nothing, mean(spend, design))
    assert math.isnan(found.value)
    assert math.isnan(found.interval.high)
    assert math.isnan(found.p_value)
    assert "nobody_in_base" in [c.code for c in found.cautions]
    lonely = mean(spend[:1], SampleDesign.simple_random(1))
    unknown = difference_of(lonely, mean(spend, design))
    assert math.isinf(unknown.half_width)
    assert math.isnan(unknown.p_value)
    assert "no_degrees_of_freedom" in [c.code for c in unknown.cautions]


def test_totals_of_two_universes(spend, later):
    parts = [
        total(v, SampleDesign.simple_random(60, population_size=k))
        for v, k in ((spend, 80), (later, 500))
    ]
    found = difference_of(*parts)
    assert found.value == pytest.approx(parts[0].value - parts[1].value)
    assert found.standard_error == pytest.approx(math.hypot(*(p.standard_error for p in parts)))


# Wrong calls


def test_wrong_calls_are_refused_by_name(spend):
    design, missing = SampleDesign.simple_random(60), spend.copy()
    missing[3] = math.nan
    wrong = [
        ("first", (missing, spend), {}),
        ("second", (spend, missing), {}),
        ("second", (spend, spend[1:]), {}),
        ("second", (spend, spend.astype(str)), {}),
        ("first_where", (spend, spend), {"first_where": ROWS}),
        ("second_where", (spend, spend), {"second_where": ROWS[1:] > 3}),
        ("answered", (spend, spend), {"answered": ROWS}),
        ("confidence", (spend, spend), {"confidence": 95}),
    ]
    for argument, values, named in wrong:
        with pytest.raises(InputError, match=f"^{argument} must ") as refusal:
            difference(*values, design, **named)
        assert refusal.value.argument == argument
    figure = mean(spend, design)
    for argument, call in (
        ("first", lambda: difference_of(3.0, figure)),
        ("second", lambda: difference_of(figure, figure.interval)),
        ("correlation", lambda: difference_of(figure, figure, correlation=2)),
        ("confidence", lambda: difference_of(figure, figure, confidence=0)),
    ):
        with pytest.raises(InputError, match=f"^{argument} must "):
            call()
    assert difference(missing, missing, design, answered=ROWS != 3).p_value == 1


# The contract battery

HALF = np.arange(N) // 3 % 2 == 0


def _answers(values, design, *, where=None, **named):
    """Two answers of the same people: the second is a seventh of the first."""
    numbers = np.asarray(values)
    second = numbers if numbers.dtype.kind in "US" else numbers / 7
    return difference(numbers, second, design, first_where=where, second_where=where, **named)


def _groups(values, design, *, where=None, **named):
    """Every second three people against the others."""
    masks = (HALF, ~HALF) if where is None else (HALF & where, ~HALF & where)
    return difference(values, values, design, first_where=masks[0], second_where=masks[1], **named)


BATTERY = [Estimator("two answers", _answers, "first"), Estimator("two groups", _groups, "first")]
OTHERWISE = {  # no effective base, masks of other names, groups that go by the order of rows
    contracts.check_result_is_complete,
    contracts.check_wrong_calls_are_refused_by_name,
    contracts.check_order_of_rows_does_not_matter,
}


@pytest.mark.parametrize("check", [c for c in contracts.CHECKS if c not in OTHERWISE])
@pytest.mark.parametrize("estimator", BATTERY, ids=str)
def test_contract(check, estimator):
    check(estimator)


def test_order_of_rows_does_not_matter_to_groups():
    order = np.random.default_rng(1).permutation(N)
    values = np.random.default_rng(2).gamma(2.0, 5.0, N)
    masks = {"first_where": HALF, "second_where": np.arange(N) % 5 > 1}
    answered = np.arange(N) % 7 > 0
    weights = 2 + np.arange(N) % 5
    first = SampleDesign.weighted(weights, strata=STRATA, clusters=CLUSTERS)
    second = SampleDesign.weighted(weights[order], strata=STRATA[order], clusters=CLUSTERS[order])
    moved = {name: mask[order] for name, mask in masks.items()}
    for other in (values, values[::-1]):
        assert_same(
            difference(values, other, first, **masks, answered=answered),
            difference(values[order], other[order], second, **moved, answered=answered[order]),
        )


@pytest.mark.parametrize("estimator", BATTERY, ids=str)
@pytest.mark.parametrize("name", designs())
def test_result_is_complete(estimator, name):
    found = estimator.call(estimator.values(N), designs()[name])
    assert isinstance(found, Difference)
    assert found.interval.low <= found.value <= found.interval.high
    assert found.half_width == (found.interval.high - found.interval.low) / 2
    assert 0 < found.p_value <= 1
    assert (found.p_value < 0.05) == (not found.interval.low <= 0 <= found.interval.high)
    assert found.base == N
    assert found.weighted_base == pytest.approx(designs()[name].weights.sum())
    assert found.design_effect > 0
    assert math.isnan(found.effective_base)
    assert found.relative_standard_error == found.standard_error / abs(found.value)


def test_all_strata_take_part():
    assert set(SIZES) == set(STRATA[HALF]) == set(STRATA[~HALF])
