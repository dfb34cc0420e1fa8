"""Each method against published tables, a second program, and the test it inverts."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats
from statsmodels.stats.proportion import proportion_confint

from estimators.proportion_methods import METHODS, clopper_pearson, jeffreys, logit, mid_p, wald

PUBLISHED = Path(__file__).parents[1] / "published_values"
ONE_SHARE = json.loads((PUBLISHED / "intervals_one_share.json").read_text(encoding="utf-8"))
NONE_SEEN = json.loads((PUBLISHED / "intervals_none_seen.json").read_text(encoding="utf-8"))
INSIDE = sorted(set(METHODS) - {"wald"})


@pytest.mark.parametrize("case", ONE_SHARE, ids=lambda c: f"{c['method']}-{c['count']}-{c['n']}")
def test_published_limits(case):
    low, high = METHODS[case["method"]](case["count"] / case["n"], case["n"], case["confidence"])
    # some of Wald's limits are printed after being cut at 0
    assert max(low, 0) * case["unit"] == pytest.approx(case["low"], abs=case["tolerance"])
    assert high * case["unit"] == pytest.approx(case["high"], abs=case["tolerance"])


@pytest.mark.parametrize("case", NONE_SEEN, ids=lambda c: str(c["n"]))
def test_published_upper_limit_when_none_was_seen(case):
    # one-sided 95 percent is the upper end of two-sided 90 percent
    high = clopper_pearson(0.0, case["n"], 0.90)[1]
    assert 100 * high == pytest.approx(case["upper_percent"], abs=case["tolerance"])
    assert high == pytest.approx(1 - 0.05 ** (1 / case["n"]), rel=1e-12)


@pytest.mark.parametrize(
    ("method", "second"),
    [
        ("wald", "normal"),
        ("wilson", "wilson"),
        ("agresti_coull", "agresti_coull"),
        ("jeffreys", "jeffreys"),
        ("clopper_pearson", "beta"),
        ("korn_graubard", "beta"),
    ],
)
@pytest.mark.parametrize("confidence", [0.8, 0.95, 0.999])
def test_second_program_agrees(method, second, confidence):
    # statsmodels.stats.proportion.proportion_confint(count, n, alpha=1 - confidence, method=second)
    for n in (1, 7, 50, 2000):
        # the edges of these three differ by rule (Wald is cut there, Jeffreys is not opened)
        edge = method in ("wald", "jeffreys", "agresti_coull")
        counts = np.unique(np.linspace(0, n, 12).astype(int))
        for count in counts[1:-1] if edge else counts:
            low, high = METHODS[method](count / n, n, confidence)
            expected = proportion_confint(count, n, alpha=1 - confidence, method=second)
            if method == "wald":
                low, high = max(low, 0), min(high, 1)
            assert (low, high) == pytest.approx(expected, rel=1e-9, abs=1e-12)


@pytest.mark.parametrize(("count", "n"), [(1, 8), (3, 17), (40, 41), (200, 1000)])
def test_exact_binomial_limits_invert_their_tests(count, n):
    low, high = clopper_pearson(count / n, n, 0.95)
    assert stats.binom.sf(count - 1, n, low) == pytest.approx(0.025, rel=1e-9)
    assert stats.binom.cdf(count, n, high) == pytest.approx(0.025, rel=1e-9)
    low, high = mid_p(count / n, n, 0.95)
    half = stats.binom.pmf(count, n, [low, high]) / 2
    assert stats.binom.sf(count, n, low) + half[0] == pytest.approx(0.025, rel=1e-9)
    assert stats.binom.cdf(count - 1, n, high) + half[1] == pytest.approx(0.025, rel=1e-9)


def test_mid_p_where_all_or_none_chose_it():
    # the tail is half of p^n, so the limit solves p^n / 2 = 0.025
    assert mid_p(1.0, 12, 0.95)[0] == pytest.approx(0.05 ** (1 / 12), rel=1e-12)
    assert mid_p(0.0, 12, 0.95)[1] == pytest.approx(1 - 0.05 ** (1 / 12), rel=1e-12)


def test_score_limits_invert_the_score_test():
    z2 = stats.norm.ppf(0.975) ** 2
    for bound in METHODS["wilson"](0.07, 41.5, 0.95):
        assert (0.07 - bound) ** 2 == pytest.approx(z2 * bound * (1 - bound) / 41.5, rel=1e-12)


def test_logit_is_symmetric_in_log_odds_and_exact_at_the_ends():
    low, high = logit(0.2, 50, 0.95)
    middle = (np.log(low / (1 - low)) + np.log(high / (1 - high))) / 2
    assert middle == pytest.approx(np.log(0.25), rel=1e-12)
    assert logit(0.0, 50, 0.95) == pytest.approx(clopper_pearson(0.0, 50, 0.95))
    assert logit(1.0, 50, 0.95) == pytest.approx(clopper_pearson(1.0, 50, 0.95))


def test_jeffreys_is_0_at_none_and_1_at_all_and_wald_stays_wald():
    assert jeffreys(0.0, 20, 0.95)[0] == 0.0
    assert jeffreys(1.0, 20, 0.95)[1] == 1.0
    assert wald(0.0, 20, 0.95) == (0.0, 0.0)
    assert wald(0.02, 20, 0.95)[0] < 0


@pytest.mark.parametrize("method", METHODS)
def test_many_shares_at_once_are_the_same_numbers(method):
    shares, bases = np.array([0.0, 0.03, 0.5, 1.0]), np.array([20.0, 33.3, 7.0, 900.0])
    low, high = METHODS[method](shares, bases, 0.9)
    each = [METHODS[method](p, n, 0.9) for p, n in zip(shares, bases, strict=True)]
    np.testing.assert_array_equal(low, [pair[0] for pair in each])
    np.testing.assert_array_equal(high, [pair[1] for pair in each])


@given(
    method=st.sampled_from(sorted(METHODS)),
    share=st.one_of(st.sampled_from([0.0, 1.0]), st.floats(1e-6, 1 - 1e-6)),
    n_star=st.floats(1, 1e5),
    confidence=st.floats(0.5, 0.99),
)
def test_limits_hold_the_share_widen_with_confidence_and_mirror(method, share, n_star, confidence):
    low, high = METHODS[method](share, n_star, confidence)
    wider_low, wider_high = METHODS[method](share, n_star, confidence + 0.005)
    assert wider_low <= low + 1e-12
    assert wider_high >= high - 1e-12
    mirrored = METHODS[method](1 - share, n_star, confidence)
    assert (1 - high, 1 - low) == pytest.approx(mirrored, abs=1e-9)
    if method in INSIDE:
        assert 0 <= low <= high <= 1
    if method in ("wald", "wilson", "clopper_pearson", "logit"):
        assert low - 1e-12 <= share <= high + 1e-12
