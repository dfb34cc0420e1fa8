"""A figure with the rows beside it: the same numbers as one by one, one rounding for all."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.study.fans import fan_of
from app.study.figure_requests import FigureRequest, Statistic
from app.study.figure_work import ANSWERS, step_among, work_out
from app.study.figures import compute_figure
from app.study.sentences import describe
from tests.support.studies import garden_data

AVERAGE = FigureRequest("Q1", Statistic.AVERAGE)
YES = FigureRequest("Q4", Statistic.SHARE, ("Yes",))


@pytest.mark.parametrize(
    ("request_", "split"), [(AVERAGE, "REGION"), (YES, ANSWERS), (YES, "SIZE")]
)
def test_figure_and_row_are_written_alike(request_, split):
    data = garden_data()
    work = work_out(data, request_, split)
    row = next(row for row in work.rows if row.request == request_)
    assert work.shown.figure.estimate == compute_figure(data, request_).estimate
    assert (row.words.value, row.words.step) == (work.shown.text.words.value, work.shown.step)
    assert work.shown.fan == fan_of(data, work.shown.figure, step=work.shown.step)
    assert work.reason == ""


def test_a_figure_that_is_no_row_keeps_its_own_step():
    data = garden_data()
    both = replace(YES, answers=("Yes", "No"))
    work = work_out(data, both, ANSWERS)
    assert step_among(work.rows, both) is None
    assert work.shown.text == describe(data, work.shown.figure)


def test_rows_of_every_answer_and_of_every_group():
    data = garden_data()
    assert len(work_out(data, YES, ANSWERS).rows) == len(data.question("Q4").answers)
    assert len(work_out(data, YES, "REGION").rows) == 1 + len(data.question("REGION").answers)
    assert work_out(data, YES, "").rows == ()


def test_a_figure_that_cannot_be_given_says_why():
    work = work_out(garden_data(), FigureRequest("Q99", Statistic.AVERAGE), "REGION")
    assert work.shown is None
    assert "Q99" in work.reason
    assert work.rows == ()
