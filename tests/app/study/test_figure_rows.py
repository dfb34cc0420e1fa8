"""Rows of a table: one step, one axis, every gap with its reason."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.study.figure_requests import FigureRequest, Statistic
from app.study.figure_rows import (
    MOST_GROUPS,
    answer_requests,
    axis_of,
    figure_rows,
    group_requests,
    groupings,
    has_fixed_ends,
    is_held_back,
    single_row,
)
from app.study.figures import compute_figure
from app.study.questions import QuestionKind
from app.study.sampling_plan import SamplingMethod
from tests.support.studies import (
    chance,
    choice,
    data_of,
    garden_data,
    number,
    question,
    ratings,
    yes_no,
)

NB = "\u00a0"
AVERAGE = FigureRequest("Q1", Statistic.AVERAGE)
SHARE = FigureRequest("Q7", Statistic.SHARE, ("Q7_1",))


def test_everyone_first_then_every_group_in_the_step_of_the_median():
    data = garden_data()
    rows = figure_rows(data, group_requests(data.question("REGION"), AVERAGE))
    assert [row.label for row in rows] == [
        "all",
        *(a.label for a in data.question("REGION").answers),
    ]
    halves = sorted(row.figure.estimate.half_width for row in rows)
    assert {row.words.step for row in rows} == {0.1}
    assert 0.2 <= halves[2] < 2  # so that its step is 0.1
    assert all(row.value == row.words.value and row.rail.state == "shown" for row in rows)
    assert {(row.rail.axis_low, row.rail.axis_high) for row in rows} == {(0, 10)}
    assert not any(row.rail.solid for row in rows)


def test_one_row_an_answer():
    data = garden_data()
    rows = figure_rows(data, answer_requests(data.question("Q7"), SHARE), by_answer=True)
    assert [row.label for row in rows][:2] == ["Lindenroot", "Marlow Peat"]
    assert all(row.rail.solid and row.rail.axis_high == 1 for row in rows)
    assert rows[0].rail.text == f"Lindenroot: {rows[0].value}{NB}%, {rows[0].between}"
    single = compute_figure(data, SHARE)
    assert rows[0].figure.estimate == single.estimate


def test_a_row_nobody_answered_says_so():
    data = data_of(
        {"Q1": [5.0, 6.0, 99.0], "area": ["N", "N", "S"]},
        [ratings([1]).questions[0], choice("area", "N", "S")],
    )
    rows = figure_rows(data, group_requests(data.question("area"), AVERAGE))
    last = rows[2]
    assert (last.value, last.between, last.answers, last.figure) == ("", "", "0", None)
    assert last.reason.startswith("Nobody in this group answered")
    assert last.rail.state == "held back"


def test_nought_answers_in_a_row():
    rows = figure_rows(
        yes_no(0, 40),
        answer_requests(choice("Q4", "Yes", "No"), FigureRequest("Q4", Statistic.SHARE, ("Yes",))),
        by_answer=True,
    )
    assert [(row.value, row.between) for row in rows] == [
        ("0 of 40", f"up to 9{NB}%"),
        ("40 of 40", f"at least 91{NB}%"),
    ]


def test_a_census_keeps_the_decimals_of_its_averages():
    data = data_of(
        {"Q1": [5.0, 6.0, 9.0, 7.0], "area": [*"NNSN"]},
        [ratings([1]).questions[0], choice("area", "N", "S")],
        chance(4),
    )
    rows = figure_rows(data, group_requests(data.question("area"), AVERAGE))
    assert [row.value for row in rows] == ["6.750", "6.000", "9.000"]


def test_a_base_kept_as_asked_for():
    asked = replace(SHARE, group_question="REGION", group_answer="Lowmere", confidence=0.9)
    requests = answer_requests(garden_data().question("Q7"), asked)
    assert {r.confidence for r in requests} == {0.9}
    assert {r.group_answer for r in requests} == {"Lowmere"}
    groups = group_requests(garden_data().question("SIZE"), asked)
    assert groups[0].group_question == ""


def test_what_a_figure_can_be_split_by():
    many = [f"c{i}" for i in range(MOST_GROUPS + 1)]
    data = data_of(
        {"a": ["x", "y"], "b": ["x", "x"], "c": many[:2], "Q5": [1.0, 2.0], "d": ["x", "y"]},
        [
            choice("a", "x", "y"),
            choice("b", "x"),
            choice("c", *many),
            number(),
            replace(choice("d", "x", "y"), set_aside=True),
        ],
    )
    assert [q.key for q in groupings(data)] == ["a"]


def test_a_figure_as_the_one_row_of_its_table():
    data = garden_data()
    figure = compute_figure(data, replace(AVERAGE, group_question="REGION", group_answer="Lowmere"))
    row = single_row(data, figure)
    assert row.label == "Lowmere"
    assert row.figure is figure
    assert (row.rail.axis_low, row.rail.axis_high) == (0, 10)


def test_axes():
    assert axis_of([]) == (0.0, 1.0)
    data = data_of({"Q5": [0.0] * 5}, [number()])
    figure = compute_figure(data, FigureRequest("Q5", Statistic.AVERAGE))
    assert axis_of([figure])[1] > 0
    assert not has_fixed_ends(figure)
    assert has_fixed_ends(compute_figure(garden_data(), AVERAGE))


@pytest.mark.parametrize(("yes", "held"), [(15, True), (200, False)])
def test_what_the_house_holds_back(yes, held):
    figure = compute_figure(yes_no(yes, 10), FigureRequest("Q4", Statistic.SHARE, ("Yes",)))
    assert is_held_back(figure) is held


def test_groups_of_several_answers_may_overlap():
    data = data_of(
        {"A": [1.0, 1.0, 0.0, 0.0], "B": [1.0, 0.0, 1.0, 0.0], "Q5": [1.0, 2.0, 3.0, 4.0]},
        [question("Q7", QuestionKind.SEVERAL, ("A", "B")), number()],
        chance(method=SamplingMethod.CHANCE),
    )
    rows = figure_rows(
        data, group_requests(data.question("Q7"), FigureRequest("Q5", Statistic.AVERAGE))
    )
    assert [row.figure.estimate.value for row in rows] == [2.5, 1.5, 2.0]
