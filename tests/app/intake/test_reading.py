"""A reading goes to JSON and back, and gives the same answers again."""

from __future__ import annotations

from pathlib import Path

import pandas as pd
import pytest

from app.intake import ColumnReading, Reading, read_fieldwork_file

SAMPLES = sorted((Path(__file__).resolve().parents[3] / "sample_data").glob("*.csv"))


def test_json_and_back():
    reading = Reading(
        encoding="cp1252",
        delimiter="\t",
        decimal_mark=",",
        left_out=(7, 9),
        columns=(ColumnReading("Größe", "number", words=("weiß nicht",)),),
        evidence=("Because.",),
    )
    assert Reading.from_json(reading.to_json()) == reading
    assert Reading.from_json("{}") == Reading()


def test_first_data_line():
    assert Reading().first_data_line is None
    assert Reading(lines_above=2, header_rows=2).first_data_line == 5


@pytest.mark.parametrize("path", SAMPLES, ids=lambda p: p.name)
def test_the_reading_found_gives_the_same_answers(path):
    first = read_fieldwork_file(path, file_name=path.name)
    stored = Reading.from_json(first.reading.to_json())
    again = read_fieldwork_file(path.read_bytes(), file_name=path.name, reading=stored)
    pd.testing.assert_frame_equal(again.answers, first.answers)
    assert again.question_texts == first.question_texts
    assert again.fingerprint == first.fingerprint
    assert again.remarks == tuple(r for r in first.remarks if r.code != "encoding_guessed")


def test_every_decision_is_filled_in():
    reading = read_fieldwork_file(b"a,b\n1,2\n2,3\n", file_name="s.csv").reading
    assert all(getattr(reading, name) is not None for name in Reading.__slots__)
    assert len(reading.evidence) >= 5


def test_columns_carry_over_to_another_file_and_the_rest_is_found_again():
    told = ColumnReading("Q1", "number", words=("refused",))
    reading = Reading(encoding="cp1252", delimiter=";", left_out=(9,), columns=(told,))
    assert reading.for_another_file() == Reading(columns=(told,))
