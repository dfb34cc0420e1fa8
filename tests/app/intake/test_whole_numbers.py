"""Parsing columns as numbers at once gives what a look at every cell gives, or is not used."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from app.intake import ColumnReading, Reading, cell_parsing, layouts, read_fieldwork_file
from app.intake.delimiters import Record
from app.intake.header_rows import HeaderRows
from app.intake.whole_numbers import likely_whole

FIRST = [f"{i % 11},{i % 3},w{i}" for i in range(2_500)]


@pytest.fixture(autouse=True)
def small_files_too(monkeypatch):
    monkeypatch.setattr(layouts, "WORTH_IT", 0)


def both_ways(rows: list[str], monkeypatch, head: str = "a,b,c", **decided):
    """Read with and without whole columns; the answers must be the same."""
    content = "\n".join([head, *rows, ""]).encode()
    reading = Reading(**decided)
    tried: list[bool] = []
    original = cell_parsing._columns

    def spy(text, dialect, width, whole, marks):
        found = original(text, dialect, width, whole, marks)
        tried.append(bool(whole) and found is not None)
        return found

    monkeypatch.setattr(cell_parsing, "_columns", spy)
    quick = read_fieldwork_file(content, file_name="s.csv", reading=reading)
    used = any(tried)
    monkeypatch.setattr(layouts, "WORTH_IT", 1 << 40)
    slow = read_fieldwork_file(content, file_name="s.csv", reading=reading)
    pd.testing.assert_frame_equal(quick.answers, slow.answers)
    assert quick.remarks == slow.remarks
    assert quick.lines.tolist() == slow.lines.tolist()
    return quick, used


@pytest.mark.parametrize(
    "row",
    ["5,1,x", ",1,x", '"",1,x', '"5","1","x"', "-9999,12,y", '1,2,"a ""b"" c, d"', '1,2,"a\nb"',
     "9999,127,x", "-127,0,x", '0,-1,7"" x', "10,100,1000"],
)  # fmt: skip
def test_whole_columns_are_used_where_every_cell_is_in_its_shortest_form(row, monkeypatch):
    quick, used = both_ways([*FIRST, row, *FIRST[:3]], monkeypatch)
    assert used
    assert quick.answers["a"].dtype == np.float64


@pytest.mark.parametrize(
    "cell",
    ["007", "+5", " 5", "5 ", "-0", "00", "0x1F", "05", "1.5", "refused", "40000", "NA", "nan"],
)
def test_any_other_cell_after_the_sample_is_noticed(cell, monkeypatch):
    quick, used = both_ways([*FIRST, f"{cell},1,x"], monkeypatch)
    assert not used
    text = quick.answers["a"].dtype == "str"
    assert text == (cell in {"007", "0x1F", "00", "05", "refused", "NA", "nan"})


def test_blank_rows_and_totals_are_seen(monkeypatch):
    quick, _ = both_ways([*FIRST, ",,", "Total,5,"], monkeypatch, left_out=(2503,))
    assert len(quick.answers) == 2_500
    assert [row.line for row in quick.set_aside] == [2503]


def test_blank_rows_leave_whole_columns_whole(monkeypatch):
    quick, used = both_ways([*FIRST, ",,", "1,2,z"], monkeypatch)
    assert used
    assert len(quick.answers) == 2_501


def test_columns_a_person_decided_about_are_not_tried(monkeypatch):
    quick, _ = both_ways(FIRST, monkeypatch, columns=(ColumnReading("a", "text"),))
    assert quick.answers["a"].tolist()[:3] == ["0", "1", "2"]


def test_likely_columns():
    rows = [Record(1, 1, ["a", "b", "c", "d", "e"])]
    cells = [["1", "", "01", "x", "12345"], ["-20", "", "2", "5", "1"], ["", "", "3", "5", "2"]]
    rows += [Record(i, i, row) for i, row in enumerate(cells, start=2)]
    header = HeaderRows((rows[0],), 1, 0, 5, (), ())
    assert likely_whole(rows, header, []) == {0}
    assert likely_whole(rows, header, [0]) == set()


@pytest.mark.parametrize("seed", range(4))
def test_random_tables_agree(seed, monkeypatch):
    rng = np.random.default_rng(seed)
    kinds = [
        ["1", "2", ""],
        ["0", "10", "-3"],
        ["word", '"q,r"', ""],
        ["0.5", "2"],
        ["150", "-128"],
    ]
    chosen = [kinds[i] for i in rng.integers(0, len(kinds), 6)]
    rows = [",".join(rng.choice(cells) for cells in chosen) for _ in range(400)]
    both_ways(rows, monkeypatch, head="a,b,c,d,e,f")
