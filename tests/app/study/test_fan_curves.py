"""Curves by the way the sample was drawn: which law, where it stands, and how wide it is."""

from __future__ import annotations

import itertools
import math
from collections import Counter
from dataclasses import replace
from datetime import UTC, datetime

import numpy as np
import pandas as pd
import pytest

from app.study.fan_curves import CURVE_POINTS, curve_of, factor_of
from app.study.fans import fan_of
from app.study.figure_requests import FigureRequest, Statistic
from app.study.figures import compute_figure
from app.study.questions import Answer, MissingCode, MissingReason, Question, QuestionKind
from app.study.sampling_plan import SamplingMethod, SamplingPlan, StratumCount
from app.study.study import Study
from app.study.study_data import prepare_study

NOW = datetime(2026, 3, 2, tzinfo=UTC)
STUDY = Study("s", "Study", NOW, NOW, 1)
REGION = Question(
    "REGION",
    ("REGION",),
    QuestionKind.CHOICE,
    "Region",
    (Answer("a", "A"), Answer("b", "B"), Answer("c", "C")),
)
SPEND = Question("SPEND", ("SPEND",), QuestionKind.NUMBER, "Spend")
SERVICE = Question(
    "SERVICE",
    ("SERVICE",),
    QuestionKind.SCALE,
    "Service",
    tuple(Answer(str(k), str(k)) for k in range(11)),
    missing=(MissingCode("98", MissingReason.NOT_ASKED),),
)
BUYS = Question(
    "BUYS", ("BUYS",), QuestionKind.CHOICE, "Buys", (Answer("y", "Yes"), Answer("n", "No"))
)
AVERAGE = FigureRequest("SERVICE", Statistic.AVERAGE)
SHARE = FigureRequest("BUYS", Statistic.SHARE, ("y",))
TOTAL = FigureRequest("SPEND", Statistic.TOTAL)
BUYERS = FigureRequest("BUYS", Statistic.TOTAL, ("y",))
SIZES = {"a": (60, 310), "b": (45, 160), "c": (30, 45)}


def rows(sizes=None, seed=5):
    source = np.random.default_rng(seed)
    parts = []
    for shift, (label, (n, _)) in enumerate((sizes or SIZES).items()):
        parts.append(
            pd.DataFrame(
                {
                    "REGION": label,
                    "SPEND": source.lognormal(3 + shift / 2, 0.8, n).round(2),
                    "SERVICE": np.clip(source.poisson(5 + shift, n), 0, 10).astype(float),
                    "BUYS": np.where(source.random(n) < 0.3 + shift / 5, "y", "n"),
                }
            )
        )
    return pd.concat(parts, ignore_index=True)


def plan_of(sizes=None, **changes):
    strata = tuple(StratumCount(label, size) for label, (_, size) in (sizes or SIZES).items())
    plan = SamplingPlan(
        universe_size=sum(s.population_size for s in strata),
        method=SamplingMethod.CHANCE,
        strata_column="REGION",
        strata=strata,
    )
    return replace(plan, **changes)


def study_of(plan, answers=None):
    answers = rows() if answers is None else answers
    data = prepare_study(STUDY, (REGION, SPEND, SERVICE, BUYS), plan, answers)
    assert not data.built.fallback, data.built.problems
    return data


def drawn(data, request):
    figure = compute_figure(data, request)
    return figure, curve_of(data, figure)


def moments(curve):
    values = np.array([p.value for p in curve.points])
    heights = np.array([p.height for p in curve.points])
    mean = values @ heights / heights.sum()
    return mean, math.sqrt((values - mean) ** 2 @ heights / heights.sum())


@pytest.mark.parametrize("method", [SamplingMethod.CHANCE, SamplingMethod.EVERYBODY])
@pytest.mark.parametrize(
    ("request_", "word"),
    [(AVERAGE, "average"), (SHARE, "share"), (TOTAL, "total"), (BUYERS, "total")],
)
def test_strata_get_the_law_of_the_stratified_figure(request_, word, method):
    figure, curve = drawn(study_of(plan_of(method=method)), request_)
    assert curve.note == (
        f"The curve is the law of the stratified {word} for a universe that looks like the "
        "sample, stretched to the standard error."
    )
    assert not curve.steps
    mean, spread = moments(curve)
    error = figure.estimate.standard_error
    assert mean == pytest.approx(figure.estimate.value, abs=0.002 * error)
    assert spread == pytest.approx(error, rel=0.005)
    assert len(curve.points) <= CURVE_POINTS


def test_one_of_three_in_every_stratum_is_drawn_as_the_exact_steps():
    # with the same fraction everywhere the share is (number of buyers) / n: whole steps
    sizes = {"a": (20, 60), "b": (12, 36), "c": (8, 24)}
    answers = rows(sizes)
    figure, curve = drawn(study_of(plan_of(sizes), answers), SHARE)
    law = Counter({0: 1.0})
    for label, (n, size) in sizes.items():
        buyers = 3 * int((answers["BUYS"][answers["REGION"] == label] == "y").sum())
        following = Counter()
        for (total, p), k in itertools.product(law.items(), range(n + 1)):
            ways = math.comb(buyers, k) * math.comb(size - buyers, n - k) / math.comb(size, n)
            following[total + k] += p * ways
        law = following
    mean = sum(k * p for k, p in law.items())
    spread = math.sqrt(sum((k - mean) ** 2 * p for k, p in law.items()))
    assert curve.steps
    stretched = {
        figure.estimate.value + (k - mean) / spread * figure.estimate.standard_error: p
        for k, p in law.items()
    }
    for point in curve.points:
        nearest = min(stretched, key=lambda v: abs(v - point.value))
        assert point.value == pytest.approx(nearest, abs=1e-12)
        assert point.height == pytest.approx(stretched[nearest], abs=1e-12)
    assert math.fsum(p.height for p in curve.points) == pytest.approx(1, abs=1e-4)


def test_the_curve_is_skewed_as_the_answers_are():
    # one stratum with a few very large spends: a long upper tail that a t curve does not have
    answers = rows()
    answers.loc[answers.index[:3], "SPEND"] = [2_000.0, 3_000.0, 4_000.0]
    figure, curve = drawn(study_of(plan_of(), answers), FigureRequest("SPEND", Statistic.AVERAGE))
    mean, spread = moments(curve)
    third = math.fsum((p.value - mean) ** 3 * p.height for p in curve.points)
    skewness = third / spread**3 / math.fsum(p.height for p in curve.points)
    # by hand: third central moments of the strata, each as in Sugden, Smith and Jones (2000)
    expected = 0.0
    for label, (n, size) in SIZES.items():
        y = answers["SPEND"][answers["REGION"] == label].to_numpy()
        k3 = ((y - y.mean()) ** 3).mean()
        factor = (size - n) * (size - 2 * n) / ((size - 1) * (size - 2) * n**2)
        expected += (size / 515) ** 3 * k3 * factor
    expected /= figure.estimate.standard_error**3
    assert skewness == pytest.approx(expected, rel=0.1)
    assert expected > 0.3


def test_a_heavy_rounding_of_many_different_answers_cannot_be_seen():
    data = study_of(plan_of())
    fine = FigureRequest("SPEND", Statistic.AVERAGE)
    figure, curve = drawn(data, fine)
    heights = np.array([p.height for p in curve.points])
    simulated = simulated_averages(data.answers, 20_000)
    z = (np.array([p.value for p in curve.points]) - figure.estimate.value) / (
        figure.estimate.standard_error
    )
    middle = (simulated - simulated.mean()) / simulated.std()
    slow = np.searchsorted(np.sort(middle), (z[:-1] + z[1:]) / 2) / middle.size
    # 4 standard errors of a simulated share are 4 x 0.5 / sqrt(20,000) = 0.014
    assert np.abs(np.cumsum(heights)[:-1] - slow).max() < 0.014 + 0.004


def simulated_averages(answers, surveys):
    source = np.random.default_rng(17)
    found = np.zeros(surveys)
    for label, (n, size) in SIZES.items():
        y = answers["SPEND"][answers["REGION"] == label].to_numpy()
        counts = np.full(n, size // n) + (np.arange(n) < size % n)
        units = np.repeat(np.sort(y), counts)
        sample = source.permuted(np.tile(units, (surveys, 1)), axis=1)[:, :n]
        found += size / 515 * sample.mean(axis=1)
    return found


def not_answered_in(label):
    answers = rows()
    answers.loc[answers["REGION"] == label, "SERVICE"] = np.nan
    return answers


def not_asked():
    answers = rows()
    answers.loc[answers.index[:9], "SERVICE"] = 98
    return answers


@pytest.mark.parametrize(
    ("data", "request_"),
    [
        (study_of(plan_of()), replace(AVERAGE, group_question="BUYS", group_answer="y")),
        (study_of(plan_of()), FigureRequest("SPEND", Statistic.MEDIAN)),
        (study_of(plan_of(), not_answered_in("b")), AVERAGE),
        (study_of(plan_of(), not_asked()), AVERAGE),
        (study_of(plan_of(weights_column="W"), rows().assign(W=1.0)), AVERAGE),
    ],
    ids=["group", "median", "empty stratum", "some not asked", "weights"],
)
def test_everything_else_keeps_the_t_curve(data, request_):
    _, curve = drawn(data, request_)
    assert curve.note.startswith("The curve is the t distribution")
    assert not curve.steps


def test_answers_missing_in_a_stratum_widen_it_and_keep_the_law():
    answers = rows()
    answers.loc[answers.index[::4], "SERVICE"] = np.nan
    figure, curve = drawn(study_of(plan_of(), answers), AVERAGE)
    assert figure.counts.answered < figure.counts.asked
    assert "stratified average" in curve.note
    assert moments(curve)[1] == pytest.approx(figure.estimate.standard_error, rel=0.005)


def test_a_stratum_of_which_everybody_answered_leaves_the_others():
    sizes = {"a": (60, 310), "b": (45, 160), "c": (30, 30)}
    figure, curve = drawn(study_of(plan_of(sizes), rows(sizes)), AVERAGE)
    assert "stratified average" in curve.note
    assert moments(curve)[1] == pytest.approx(figure.estimate.standard_error, rel=0.005)


def test_draws_with_replacement():
    figure, curve = drawn(study_of(plan_of(replacement=True)), SHARE)
    assert "stratified share" in curve.note
    assert moments(curve)[1] == pytest.approx(figure.estimate.standard_error, rel=0.005)


def test_the_curve_of_a_share_stays_between_none_and_all():
    answers = rows()
    answers["BUYS"] = "n"
    answers.loc[[0, 1, 60], "BUYS"] = "y"
    _, curve = drawn(study_of(plan_of(), answers), SHARE)
    assert "stratified share" in curve.note
    assert curve.points[0].value >= 0
    assert all(p.height >= 0 for p in curve.points)


def simple(size):
    plan = SamplingPlan(method=SamplingMethod.CHANCE, universe_size=size)
    return study_of(plan)


def test_simple_draws_keep_their_law_and_say_whether_it_is_exact():
    figure, curve = drawn(simple(500), SHARE)
    assert curve.steps
    assert curve.note.startswith("The curve is the exact distribution for a universe")
    assert moments(curve)[1] == pytest.approx(figure.estimate.standard_error, rel=0.001)
    figure, curve = drawn(simple(None), SPENT)
    assert curve.note.startswith("The curve is the distribution for a universe")
    assert moments(curve)[1] == pytest.approx(figure.estimate.standard_error, rel=0.005)


SPENT = FigureRequest("SPEND", Statistic.AVERAGE)


def test_a_group_that_fills_its_estimated_universe_gets_the_t_curve():
    data = simple(136)  # 135 answered: 30 people stand for 30.2
    request = replace(SPENT, group_question="REGION", group_answer="c")
    figure, curve = drawn(data, request)
    assert round(figure.estimate.weighted_base) == figure.counts.answered
    assert curve.note.startswith("The curve is the t distribution")


def test_a_total_is_the_average_times_the_universe():
    data = study_of(plan_of())
    average, small = drawn(data, FigureRequest("SPEND", Statistic.AVERAGE))
    total, large = drawn(data, TOTAL)
    assert factor_of(average) == 1
    assert factor_of(total) == pytest.approx(515, rel=1e-12)
    for one, other in zip(small.points, large.points, strict=True):
        assert other.value == pytest.approx(515 * one.value, rel=1e-9)
        assert other.height == pytest.approx(one.height, rel=1e-9, abs=1e-15)


def test_where_answers_do_not_vary_there_is_no_curve():
    _, curve = drawn(study_of(plan_of(), rows().assign(SPEND=3.0)), SPENT)
    assert curve.points == ()
    assert curve.note == "The answers do not vary, so there is no curve to draw."


def test_the_fan_carries_the_curve_and_its_note():
    data = study_of(plan_of())
    figure, curve = drawn(data, AVERAGE)
    fan = fan_of(data, figure)
    assert fan.curve == curve.points
    assert fan.steps == curve.steps
    assert fan.notes[0] == curve.note
