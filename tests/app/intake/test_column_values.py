"""Which columns become numbers, which stay text, and what is said about it."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pandas as pd
import pytest

from app.intake import ColumnReading, Reading, read_fieldwork_file


def read(cells: dict[str, list[str]], cut: str = ";", **decided):
    count = len(next(iter(cells.values())))
    rows = [["key", *cells]] + [[f"r{i}"] + [c[i] for c in cells.values()] for i in range(count)]
    text = "\n".join(cut.join(f'"{cell}"' for cell in row) for row in rows)
    return read_fieldwork_file(text.encode(), file_name="s.csv", reading=Reading(**decided))


def values(cells: list[str], **decided) -> list:
    return read({"q": cells}, **decided).answers["q"].tolist()


def remark_codes(file) -> list[str]:
    return [remark.code for remark in file.remarks]


@pytest.mark.parametrize(
    ("cells", "numbers"),
    [
        (["1", "-2", "+3"], [1, -2, 3]),
        (["0", "10", "−4"], [0, 10, -4]),
        (["1.5", ".25", "-0.125"], [1.5, 0.25, -0.125]),
        (["1,5", ",25", "100"], [1.5, 0.25, 100]),
        ([" 1 ", "2\u00a0", "\u202f3"], [1, 2, 3]),
        (["1.5E-05", "2.25", "1e+3"], [1.5e-5, 2.25, 1000]),
        (["123456789012345", "1", "2"], [123456789012345, 1, 2]),
        (["0.30000000000000004", "1", "2"], [0.1 + 0.2, 1, 2]),
        (["1 184", "2", "12 345 678"], [1184, 2, 12345678]),
        (["1\u202f184", "2", "12\u202f345,5"], [1184, 2, 12345.5]),
        (["1'184", "2", "12’345"], [1184, 2, 12345]),
        (["1.184,50", "2", "12.345,00"], [1184.5, 2, 12345]),
        (["1,184.50", "2", "12,345.00"], [1184.5, 2, 12345]),
        (["1.184.000", "2", "3"], [1184000, 2, 3]),
    ],
)
def test_columns_of_numbers(cells, numbers):
    file = read({"q": cells})
    assert file.answers["q"].dtype == np.float64
    assert file.answers["q"].tolist() == numbers


@pytest.mark.parametrize(
    "cells",
    [
        ["007", "10", "11"],  # leading zeros make a code
        ["1", "2", "012"],
        ["1234567890123456", "2", "3"],  # more digits than a float64 keeps
        ["1E5", "2", "3"],  # looks like a code
        ["nan", "1", "2"],
        ["inf", "1", "2"],
        ["NA", "1", "2"],
        ["0x1F", "1", "2"],
        ["1_000", "1", "2"],
        ["12 34", "1", "2"],  # groups have three digits
        ["1.184", "2.5.1", "3"],
        ["1184", "1 184", "2"],  # grouped and not grouped
        ["0 184", "1 200", "2"],
        ["07.09.2026", "08.09.2026", "09.09.2026"],
        ["12:30", "1", "2"],
        ["45 %", "1", "2"],
        ["٣", "1", "2"],
        ["1", "2", "=1+1"],
        ["+", "-", "."],
    ],
)
def test_columns_that_stay_text_as_they_stand(cells):
    file = read({"q": cells})
    assert file.answers["q"].dtype == "str"
    assert file.answers["q"].tolist() == cells


def test_blank_cells_are_missing_and_words_for_nothing_are_not():
    file = read({"q": ["NA", "", "None", "  ", "null"], "n": ["1", " ", "", "\u00a0", "5"]})
    assert file.answers["q"].isna().tolist() == [False, True, False, True, False]
    assert file.answers["q"].dropna().tolist() == ["NA", "None", "null"]
    assert file.answers["n"].isna().tolist() == [False, True, True, True, False]


def test_outer_spaces_of_text_stay():
    assert values(["Yes", "yes ", " Yes"]) == ["Yes", "yes ", " Yes"]


def test_words_among_numbers_are_named():
    cells = [str(i % 11) for i in range(95)] + ["refused"] * 3 + ["don't know"] * 2
    file = read({"q": cells})
    assert file.answers["q"].tolist() == cells
    (remark,) = [r for r in file.remarks if r.code == "words_among_numbers"]
    assert remark.words == ("refused", "don't know")
    assert remark.column == "q"
    assert remark.rows == (97, 98, 99, 100, 101)
    assert "95 % of its answers are numbers" in remark.sentence


def test_a_column_with_more_words_is_text_without_a_remark():
    assert remark_codes(read({"q": ["1", "2", "refused"] * 5})) == []


def test_declared_words_make_the_column_numbers():
    cells = ["1,5"] * 18 + ["refused", "DK"]
    told = ColumnReading("q", "number", words=("refused", "DK"))
    file = read({"q": cells}, columns=(told,))
    assert file.answers["q"].tolist()[:18] == [1.5] * 18
    assert file.answers["q"].isna().tolist()[18:] == [True, True]
    assert remark_codes(file) == []


def test_words_that_were_not_declared_keep_it_text():
    told = ColumnReading("q", "number", words=("refused",))
    file = read({"q": ["1", "2", "refused", "DK"]}, columns=(told,))
    assert file.answers["q"].tolist() == ["1", "2", "refused", "DK"]
    assert file.remarks[-1].words == ("DK",)


def test_a_column_can_be_kept_as_text_or_made_numbers():
    text = read({"q": ["1", "2"]}, columns=(ColumnReading("q", "text"),))
    assert text.answers["q"].tolist() == ["1", "2"]
    number = read({"q": ["007", "010"]}, columns=(ColumnReading("q", "number"),))
    assert number.answers["q"].tolist() == [7.0, 10.0]


def test_doubtful_numbers_are_asked_about_and_settled_by_a_word():
    file = read({"q": ["1,184", "2,500", "12"]})
    assert file.answers["q"].dtype == "str"
    (remark,) = file.remarks
    assert remark.code == "doubtful_numbers"
    assert "1,184 may be 1184 or 1.184" in remark.sentence
    assert file.reading.decimal_mark == ""
    again = read({"q": ["1,184", "2,500", "12"]}, **told(file.reading, decimal_mark="."))
    assert again.answers["q"].tolist() == [1184, 2500, 12]
    again = read({"q": ["1,184", "2,500", "12"]}, **told(file.reading, decimal_mark=","))
    assert again.answers["q"].tolist() == [1.184, 2.5, 12]


def told(reading: Reading, **changes) -> dict:
    changed = replace(reading, **changes)
    return {name: getattr(changed, name) for name in Reading.__slots__}


def test_one_column_settles_another():
    comma = read({"w": ["0,5", "1,25", "2"], "q": ["1.184", "2.500", "12"]})
    assert comma.answers["q"].tolist() == [1184, 2500, 12]
    assert remark_codes(comma) == ["grouped_numbers"]
    assert (comma.reading.decimal_mark, comma.reading.thousands_mark) == (",", ".")
    point = read({"w": ["0.5", "1.25", "2"], "q": ["1.184", "2.500", "12"]})
    assert point.answers["q"].tolist() == [1.184, 2.5, 12]
    assert remark_codes(point) == []


def test_columns_that_contradict_each_other_settle_nothing():
    columns = {"a": ["0,5", "1,25"], "b": ["0.5", "1.25"], "q": ["1.184", "2.500"]}
    file = read(columns)
    assert file.answers["a"].tolist() == file.answers["b"].tolist() == [0.5, 1.25]
    assert file.answers["q"].tolist() == ["1.184", "2.500"]
    assert remark_codes(file) == ["other_decimal_mark", "doubtful_numbers"]


def test_three_decimals_in_a_file_cut_by_commas_are_decimals():
    file = read({"q": ["1.184", "2.500", "1.001"]}, cut=",")
    assert file.answers["q"].tolist() == [1.184, 2.5, 1.001]


def test_marks_within_one_column_can_be_told():
    column = ColumnReading("q", "number", decimal_mark=",", thousands_mark=".")
    assert values(["1.184", "2.500"], columns=(column,)) == [1184, 2500]
    column = ColumnReading("q", "number", decimal_mark=".")
    assert values(["1.184", "2.500"], columns=(column,)) == [1.184, 2.5]


def test_no_thousands_marks_when_told_so():
    assert values(["1 184", "2 200"], thousands_mark="") == ["1 184", "2 200"]


def test_codes_damaged_by_a_spreadsheet_are_noticed():
    cells = ["1.23457E+11", "2.34568E+11", "3"]
    file = read({"q": cells})
    assert file.answers["q"].tolist() == cells
    assert remark_codes(file) == ["damaged_codes"]


@pytest.mark.parametrize(
    "cells", [["45%", "50 %", "7%"], ["€ 5", "€10", "€ 7"], ["10+", "<5", "7"]]
)
def test_numbers_with_signs_stay_text_and_are_named(cells):
    file = read({"q": cells})
    assert file.answers["q"].tolist() == cells
    assert remark_codes(file) == ["numbers_with_signs"]


def test_control_characters_are_removed_and_counted():
    content = b"id,q,t\n1,5\x00,a\x0bb\n2,6,c\n3,7,\x07\n"
    file = read_fieldwork_file(content, file_name="s.csv")
    assert file.answers["q"].tolist() == [5.0, 6.0, 7.0]
    assert file.answers["t"].tolist()[:2] == ["ab", "c"]
    assert pd.isna(file.answers["t"].tolist()[2])
    (remark,) = file.remarks
    assert remark.code == "control_characters"
    assert remark.rows == (2,)


def test_formulas_stay_as_they_stand():
    cells = ["=1+1", "@SUM(A1)", "-x", "\t=2"]
    assert values(cells) == cells


def test_emoji_marks_and_right_to_left_text_stay():
    cells = ["👍🏽", "e\u0301", "שלום", "“it’s”"]
    assert values(cells) == cells


def test_evidence_names_columns_of_digits_that_stay_text():
    file = read({"zip": ["01234", "99999"], "card": ["1234567890123456", "1234567890123457"]})
    assert "Leading zeros or very long numbers make “zip” text." in file.reading.evidence
    assert "Numbers of more than 15 digits make “card” text." in file.reading.evidence
