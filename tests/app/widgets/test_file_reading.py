from __future__ import annotations

from dataclasses import replace

import pytest

from app.intake import Reading, read_fieldwork_file
from app.widgets.file_reading import another_reading

DATA = b"Exported in March\nQ1;Q2\nFirst;Second\n1.184,5;a\n2.000,5;b\n3.100,5;a\n"
READ = Reading(
    encoding="utf-8",
    delimiter=";",
    decimal_mark=",",
    thousands_mark=".",
    lines_above=1,
    header_rows=2,
    name_row=1,
    left_out=(6,),
    quote='"',
)


def changed(encoding="utf-8", delimiter=";", mark=",", heads=2):
    return another_reading(READ, encoding, delimiter, mark, heads)


def test_nothing_changed_is_the_same_reading():
    assert changed() == READ


@pytest.mark.parametrize("change", [{"encoding": "cp1252"}, {"delimiter": ","}])
def test_other_cells_let_the_table_be_found_again(change):
    wanted = changed(**change)
    found_again = dict.fromkeys(("quote", "escape", "lines_above", "name_row"))
    assert wanted == replace(READ, **change, **found_again, left_out=())


def test_another_mark_lets_the_thousands_be_found_again():
    assert changed(mark=".") == replace(READ, decimal_mark=".", thousands_mark=None)


def test_other_heads_let_the_row_of_names_be_found_again():
    assert changed(heads=1) == replace(READ, header_rows=1, name_row=None)
    assert changed(heads=None) == replace(READ, header_rows=0, name_row=None)


@pytest.mark.parametrize("heads", [0, 1, 2])
def test_a_file_can_be_read_with_any_number_of_heads_and_back(heads):
    found = read_fieldwork_file(DATA, file_name="a.csv")
    reading = found.reading
    there = another_reading(reading, reading.encoding, reading.delimiter, ",", heads)
    read = read_fieldwork_file(DATA, file_name="a.csv", reading=there)
    assert read.reading.header_rows == heads
    back = another_reading(
        read.reading, reading.encoding, reading.delimiter, ",", reading.header_rows
    )
    again = read_fieldwork_file(DATA, file_name="a.csv", reading=back)
    assert list(again.answers.columns) == list(found.answers.columns)
    assert again.answers.equals(found.answers)
