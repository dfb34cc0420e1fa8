"""Totals and notes at the foot are proposed, never removed without being told."""

from __future__ import annotations

import pytest

from app.intake import Reading, read_fieldwork_file

ROWS = "id,region,spend\n1,North,10\n2,South,20\n3,East,30\n"


def read(text: str, **decided):
    return read_fieldwork_file(text.encode(), file_name="s.csv", reading=Reading(**decided))


@pytest.mark.parametrize(
    "foot", ["Total,,60\n", "Grand total:,3,60\n", ",Sum,60\n", "Source: fieldwork in March,,\n"]
)
def test_a_footer_is_proposed_and_kept(foot):
    file = read(ROWS + foot)
    assert len(file.answers) == 4
    (remark,) = [r for r in file.remarks if r.code == "footer_rows"]
    assert remark.rows == (5,)


def test_a_footer_is_left_out_when_told():
    file = read(ROWS + "Total,,60\n", left_out=(5,))
    assert file.answers["id"].tolist() == [1.0, 2.0, 3.0]
    assert file.answers["spend"].sum() == 60
    (row,) = file.set_aside
    assert (row.line, row.cells, row.reason) == (5, ("Total", "", "60"), "left out")
    assert file.remarks == ()


def test_a_total_and_a_note_are_both_named():
    file = read(ROWS + "Total,,60\n\nSource: fieldwork in March,,\n")
    (remark,) = [r for r in file.remarks if r.code == "footer_rows"]
    assert remark.rows == (5, 7)


def test_respondents_at_the_foot_are_no_footer():
    assert read(ROWS).remarks == ()
    assert read("name,a,b\nTotal,1,2\nAnn,3,4\nBob,5,6\n").remarks == ()
