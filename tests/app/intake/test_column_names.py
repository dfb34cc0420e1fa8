"""Names are unique, readable, and nothing is overwritten."""

from __future__ import annotations

import unicodedata

from app.intake import read_fieldwork_file


def read(text: str):
    return read_fieldwork_file(text.encode(), file_name="s.csv")


def codes(file) -> list[str]:
    return [remark.code for remark in file.remarks]


def test_repeated_names_get_their_position():
    file = read("Q1,Q2,Q1,Q1\n1,2,3,4\n5,6,7,8\n")
    assert list(file.answers.columns) == ["Q1", "Q2", "Q1 (3)", "Q1 (4)"]
    assert file.answers.loc[0].tolist() == [1, 2, 3, 4]
    assert codes(file) == ["duplicate_names"]
    assert "“Q1 (3)”, “Q1 (4)”" in file.remarks[0].sentence


def test_a_suffixed_name_never_meets_an_existing_one():
    file = read("Q1,Q1,Q1 (2)\n1,2,3\n4,5,6\n")
    assert list(file.answers.columns) == ["Q1", "Q1 (2)'", "Q1 (2)"]
    assert file.answers.loc[0].tolist() == [1, 2, 3]


def test_a_column_with_answers_but_no_name_is_kept():
    file = read("Q1,,Q3\n1,x,3\n4,,6\n")
    assert list(file.answers.columns) == ["Q1", "column 2", "Q3"]
    assert codes(file) == ["unnamed_columns"]


def test_empty_columns_without_a_name_are_dropped_with_a_remark():
    file = read("Q1;Q2;;\n1;2;;\n3;4; ;\n")
    assert list(file.answers.columns) == ["Q1", "Q2"]
    assert codes(file) == ["empty_columns"]


def test_an_empty_column_with_a_name_is_kept_as_text():
    file = read("Q1,Q2\n1,\n3,\n")
    assert file.answers["Q2"].isna().all()
    assert file.answers["Q2"].dtype == "str"


def test_names_are_composed_and_on_one_line():
    decomposed = unicodedata.normalize("NFD", "Région")
    file = read(f' {decomposed} ,"b\nc",\u200bd\n1,2,3\n4,5,6\n')
    assert list(file.answers.columns) == ["Région", "b c", "d"]


def test_names_that_differ_in_capitals_only():
    file = read("q1,Q1\n1,2\n3,4\n")
    assert list(file.answers.columns) == ["q1", "Q1"]
    assert codes(file) == ["twin_names"]
