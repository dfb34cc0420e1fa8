"""Figures of the sample study against textbook formulas, and every way a figure is refused."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from app.study.figure_requests import FigureRequest, Statistic
from app.study.figures import (
    FigureError,
    compute_figure,
    default_request,
    reader,
    statistics_of,
    takes_answers,
)
from app.study.questions import MissingCode, MissingReason, QuestionKind
from app.study.sample_studies import SAMPLE_FOLDER
from app.study.sampling_plan import SamplingMethod
from tests.support.studies import (
    DONT_KNOW,
    REFUSED,
    chance,
    choice,
    data_of,
    garden_data,
    number,
    question,
    ratings,
    scale,
    strata,
    yes_no,
)
from tests.support.textbook_figures import (
    read_rows,
    stratified_mean,
    stratified_median,
    stratified_share,
    stratified_total,
    subgroup_mean,
    subgroup_share,
    wilson,
)

SIZES = {"Northmark": 402, "Lowmere": 331, "Eastreach": 268, "Westholm": 183}
SHARE, AVERAGE, TOTAL, MEDIAN = Statistic


ROWS = read_rows(SAMPLE_FOLDER / "garden_centres_spring.csv", delimiter=";", heads=2)


def by_stratum(value_of):
    """Answers of each region as floats; rows for which the function gives None left out."""
    values = {label: [] for label in SIZES}
    for row in ROWS:
        if (value := value_of(row)) is not None:
            values[row["REGION"]].append(float(value))
    return [(np.array(values[label]), size) for label, size in SIZES.items()]


def rating(row):
    return None if row["Q1"] in ("98", "99", "") else row["Q1"]


def spend(row):
    text = row["Q5"].replace(",", ".")
    return None if text in ("", "99999") or float(text) == 99999 else text


def any_brand(*columns):
    brands = [f"Q7_{i}" for i in range(1, 9)]

    def chosen(row):
        if all(row[brand] == "" for brand in brands):
            return None
        return any(row[column] == "1" for column in columns)

    return chosen


def more(row):
    if row["Q3"] in ("Don't know", ""):
        return None
    return row["Q3"] in ("A little more", "Much more")


def agrees(figure, worked):
    interval = figure.estimate.interval
    assert figure.estimate.value == pytest.approx(worked.value, rel=1e-10)
    assert interval.low == pytest.approx(worked.low, rel=1e-9)
    assert interval.high == pytest.approx(worked.high, rel=1e-9)
    assert figure.counts.answered == worked.base == figure.estimate.base


@pytest.mark.parametrize(
    ("request_", "worked"),
    [
        (FigureRequest("Q1", AVERAGE), stratified_mean(by_stratum(rating))),
        (FigureRequest("Q5", AVERAGE), stratified_mean(by_stratum(spend))),
        (FigureRequest("Q5", TOTAL), stratified_total(by_stratum(spend))),
        (FigureRequest("Q5", MEDIAN), stratified_median(by_stratum(spend))),
        (
            FigureRequest("Q3", SHARE, ("A little more", "Much more")),
            stratified_share(by_stratum(more)),
        ),
        (FigureRequest("Q7", SHARE, ("Q7_1",)), stratified_share(by_stratum(any_brand("Q7_1")))),
        (
            FigureRequest("Q7", SHARE, ("Q7_1", "Q7_4")),
            stratified_share(by_stratum(any_brand("Q7_1", "Q7_4"))),
        ),
    ],
)
def test_the_sample_study_by_hand(request_, worked):
    agrees(compute_figure(garden_data(), request_), worked)


def test_a_total_of_people_is_the_universe_times_the_share():
    figure = compute_figure(garden_data(), FigureRequest("Q7", TOTAL, ("Q7_1",)))
    agrees(figure, stratified_total(by_stratum(any_brand("Q7_1"))))


def test_an_endless_universe_beside_it():
    figure = compute_figure(garden_data(), FigureRequest("Q1", AVERAGE))
    worked = stratified_mean(by_stratum(rating), endless=True)
    assert figure.endless.interval.low == pytest.approx(worked.low)
    assert figure.endless.interval.high == pytest.approx(worked.high)


def test_groups_that_are_strata_and_groups_that_cut_across():
    data = garden_data()
    lowmere = FigureRequest("Q6", AVERAGE, (), "REGION", "Lowmere")
    staff = [
        (v, s)
        for (v, s), name in zip(by_stratum(lambda r: r["Q6"]), SIZES, strict=True)
        if name == "Lowmere"
    ]
    agrees(compute_figure(data, lowmere), stratified_mean(staff))
    values = np.array([float(row["Q6"]) for row in ROWS])
    size = np.array([row["SIZE"] for row in ROWS])
    region = np.array([row["REGION"] for row in ROWS])
    figure = compute_figure(data, FigureRequest("Q6", AVERAGE, (), "SIZE", "large"))
    agrees(figure, subgroup_mean(values, size == "large", region, SIZES))
    assert figure.counts.in_group == int((size == "large").sum())


def test_a_share_of_a_subgroup_of_a_simple_draw():
    chosen = np.array([i % 3 == 0 for i in range(90)])
    inside = np.array([i % 2 == 0 for i in range(90)])
    data = data_of(
        {"Q4": np.where(chosen, "Yes", "No"), "area": np.where(inside, "N", "S")},
        [choice("Q4", "Yes", "No"), choice("area", "N", "S")],
        chance(300),
    )
    figure = compute_figure(data, FigureRequest("Q4", SHARE, ("Yes",), "area", "N"))
    agrees(figure, subgroup_share(chosen, inside, 300))


def test_missing_answers_counted_in_the_base():
    """12 yes, 18 no, 6 don't know, 4 refused, 2 blank."""
    answers = ["Yes"] * 12 + ["No"] * 18 + ["99"] * 6 + ["98"] * 4 + [None] * 2
    data = data_of(
        {"Q4": answers, "Q5": range(42)},
        [choice("Q4", "Yes", "No", missing=(DONT_KNOW, REFUSED)), number()],
    )
    left_out = compute_figure(data, FigureRequest("Q4", SHARE, ("Yes",)))
    counted = compute_figure(data, FigureRequest("Q4", SHARE, ("Yes",), missing_counted=True))
    assert (left_out.estimate.value, left_out.counts.answered) == (0.4, 30)
    assert left_out.counts.reasons == (("don't know", 6), ("refused", 4), ("no answer", 2))
    assert (counted.estimate.value, counted.counts.answered) == (0.3, 40)
    assert counted.counts.reasons == (("no answer", 2),)
    assert counted.counts.chosen == left_out.counts.chosen == 12
    assert left_out.estimate.interval.low == pytest.approx(wilson(0.4, 30)[0])


def test_who_was_not_asked_is_outside_the_base():
    not_asked = MissingCode("-1", MissingReason.NOT_ASKED)
    data = data_of(
        {"Q13": [1.0, 5.0, 3.0, -1.0, np.nan], "Q5": range(5)},
        [question("Q13", QuestionKind.SCALE, [*"12345"], (not_asked,)), number()],
    )
    counts = compute_figure(data, FigureRequest("Q13", AVERAGE)).counts
    assert (counts.in_group, counts.asked, counts.answered) == (5, 4, 3)
    assert counts.reasons == (("no answer", 1),)


def test_answers_behind_a_figure_are_read_only():
    figure = compute_figure(ratings([1, 2, 99, 3]), FigureRequest("Q1", AVERAGE))
    assert figure.numbers.tolist() == [1, 2, 3]
    assert figure.base.tolist() == [True, True, False, True]
    with pytest.raises(ValueError, match="read-only"):
        figure.numbers[0] = 5


def test_scales_of_figures():
    assert compute_figure(ratings([1, 2, 3]), FigureRequest("Q1", AVERAGE)).scale.high == 10
    words = question("Q1", QuestionKind.SCALE, ["0 - bad", *"123456789", "10 - good"])
    data = data_of({"Q1": ["0 - bad", "4", "10 - good"]}, [words])
    figure = compute_figure(data, FigureRequest("Q1", AVERAGE))
    assert (figure.scale.low, figure.scale.high) == (0, 10)
    assert figure.estimate.value == pytest.approx(14 / 3)


@pytest.mark.parametrize(
    "values", [[0.0] * 5, [-4.0, -6.0, -5.0], [-3.0, 4.0, 1.0], [2.0], [7.5] * 4, [-2.0], [0.0]]
)
@pytest.mark.parametrize("statistic", [AVERAGE, TOTAL, MEDIAN])
def test_every_rail_has_room_for_its_figure(values, statistic):
    data = data_of({"Q5": values}, [number()], chance(50))
    figure = compute_figure(data, FigureRequest("Q5", statistic))
    scale_ = figure.scale
    assert math.isfinite(scale_.low) and math.isfinite(scale_.high)
    assert scale_.low < scale_.high
    places = (0.0, figure.estimate.value, figure.estimate.interval.low)
    for place in (*places, figure.estimate.interval.high):
        if math.isfinite(place) and not (scale_.natural_zero and place < 0):
            assert scale_.low <= place <= scale_.high
    assert scale_.natural_zero == (min(values) >= 0)


YES = FigureRequest("Q4", SHARE, ("Yes",))


@pytest.mark.parametrize(
    ("data", "asked", "sentence"),
    [
        (yes_no(3, 3), replace(YES, question="Q9"), "The current file has no question Q9: choose"),
        (yes_no(3, 3), replace(YES, answers=("Maybe",)), "has no answer Maybe: choose another"),
        (yes_no(3, 3), replace(YES, answers=("Yes", "Yes", "x")), "has no answer x"),
        (yes_no(3, 3), replace(YES, answers=()), "choose the answer to count"),
        (yes_no(3, 3), FigureRequest("Q4", AVERAGE), "has no average: choose share or total"),
        (yes_no(3, 3), FigureRequest("Q4", TOTAL), "choose the answer to count"),
        (ratings([1, 2]), FigureRequest("Q1", TOTAL), "has no total: choose average or share"),
        (
            data_of({"Q1": [1.0, 2.0]}, [question("Q1", QuestionKind.SCALE)]),
            FigureRequest("Q1", SHARE, ("1",)),
            "has no answers to choose from: type them on the Questions screen",
        ),
        (ratings([99, 98, 99]), FigureRequest("Q1", AVERAGE), "Nobody in this group answered"),
        (
            yes_no(3, 3),
            replace(YES, group_question="Q4", group_answer="Maybe"),
            "has no answer Maybe: choose another group",
        ),
        (
            data_of({"Q4": ["Yes"]}, [replace(choice("Q4", "Yes"), set_aside=True)]),
            YES,
            "is set aside or holds no answers to count: change that on the Questions screen",
        ),
        (
            yes_no(3, 3),
            replace(YES, method="hypergeometric"),
            "This figure cannot be given: method",
        ),
    ],
)
def test_what_cannot_be_given_says_what_to_do(data, asked, sentence):
    with pytest.raises(FigureError) as refusal:
        compute_figure(data, asked)
    assert sentence in str(refusal.value)
    assert "\n" not in str(refusal.value)


@pytest.mark.parametrize(
    ("plan", "sentence"),
    [
        (chance(), "A total needs the size of the universe: type it in the sampling plan."),
        (chance(60, method=SamplingMethod.NOT_SURE), "A total needs to know how people got in"),
        (chance(60, method=SamplingMethod.QUOTA), "only with weights that add up to the universe"),
        (chance(2), "A total needs a sampling plan that fits the file: mend the plan first."),
    ],
)
def test_why_there_is_no_total(plan, sentence):
    with pytest.raises(FigureError, match=sentence):
        compute_figure(yes_no(3, 3, plan), replace(YES, statistic=TOTAL))


def test_a_plan_in_contradiction_still_gives_figures_with_a_caution():
    data = yes_no(20, 20, chance(10))
    figure = compute_figure(data, YES)
    assert figure.estimate.interval.low == pytest.approx(wilson(0.5, 40)[0])
    assert [c.code for c in figure.estimate.cautions] == ["plan_not_used"]


def test_strata_of_the_plan_weigh_the_answers():
    data = data_of(
        {"Q4": ["Yes", "Yes", "No", "No", "No", "No"], "area": [*"NNNSSS"]},
        [choice("Q4", "Yes", "No"), choice("area", "N", "S")],
        chance(strata_column="area", strata=strata(N=90, S=10)),
    )
    assert compute_figure(data, YES).estimate.value == pytest.approx(0.9 * 2 / 3)


def test_what_a_question_offers():
    assert statistics_of(scale()) == (AVERAGE, SHARE, MEDIAN)
    assert statistics_of(number()) == (AVERAGE, TOTAL, MEDIAN)
    assert statistics_of(choice("Q4", "Yes")) == (SHARE, TOTAL)
    assert default_request(scale()) == FigureRequest("Q1", AVERAGE)
    assert default_request(choice("Q4", "Yes", "No")) == YES
    assert default_request(choice("Q4")).answers == ()
    assert takes_answers(choice("Q4"), TOTAL)
    assert not takes_answers(number(), TOTAL)
    assert not FigureRequest("Q1", AVERAGE, ("5",)).counts_people


def test_answers_are_read_once():
    data = yes_no(3, 3)
    read = reader(data)
    assert read(data.questions[0]) is read(data.questions[0])
