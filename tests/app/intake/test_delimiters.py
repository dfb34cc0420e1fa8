"""Delimiter, quotation mark and escape are found over many rows."""

from __future__ import annotations

import pytest

from app.intake import FieldworkFileError, Reading, read_fieldwork_file


def read(text: str, **decided):
    return read_fieldwork_file(text.encode(), file_name="s.csv", reading=Reading(**decided))


@pytest.mark.parametrize("delimiter", [",", ";", "\t", "|"])
def test_each_delimiter_is_found(delimiter):
    rows = [["id", "place", "note"], ["1", "North", "a"], ["2", "South", "b"], ["3", "East", ""]]
    file = read("\n".join(delimiter.join(row) for row in rows))
    assert file.reading.delimiter == delimiter
    assert file.answers.shape == (3, 3)


def test_row_one_does_not_decide_alone():
    text = "id;size, in pieces, of all;note\n" + "".join(f"{i};{i * 2};word\n" for i in range(30))
    file = read(text)
    assert file.reading.delimiter == ";"
    assert list(file.answers.columns) == ["id", "size, in pieces, of all", "note"]


def test_decimal_commas_do_not_pass_for_delimiters():
    file = read("id;w\n" + "".join(f"{i};{i},5\n" for i in range(20)))
    assert file.reading.delimiter == ";"
    assert file.answers["w"].tolist() == [i + 0.5 for i in range(20)]


def test_answers_lists_with_semicolons_do_not_pass_for_columns():
    file = read("id,brands,note\n" + "".join(f"{i},1;3;9,x\n" for i in range(20)))
    assert file.reading.delimiter == ","
    assert file.answers["brands"].tolist() == ["1;3;9"] * 20


@pytest.mark.parametrize("line", ["sep=;", '"sep=;"', "SEP=;"])
def test_a_sep_line_is_followed_and_removed(line):
    file = read(f"{line}\r\nid;q1\r\n1;a,b\r\n2;c,d\r\n")
    assert file.reading.sep_line is True
    assert (file.reading.delimiter, file.reading.lines_above) == (";", 1)
    assert file.answers["q1"].tolist() == ["a,b", "c,d"]
    assert file.lines.tolist() == [3, 4]
    assert read(
        f"{line}\r\nid;q1\r\n1;a,b\r\n2;c,d\r\n", sep_line=True, delimiter=";"
    ).answers.equals(file.answers)


def test_single_quotation_marks_around_cells():
    file = read("id,name\n1,'a, b'\n2,'c, d'\n3,'e'\n4,'f, g'\n")
    assert file.reading.quote == "'"
    assert file.answers["name"].tolist() == ["a, b", "c, d", "e", "f, g"]


def test_apostrophes_in_answers_are_no_quotation_marks():
    file = read("id,name\n1,it's\n2,don't\n3,o'clock\n")
    assert file.reading.quote == '"'
    assert file.answers["name"].tolist() == ["it's", "don't", "o'clock"]


def test_backslash_before_quotation_marks():
    file = read('id,said\n1,"a \\"good\\" one"\n2,"plain, really"\n')
    assert file.reading.escape == "\\"
    assert file.answers["said"].tolist() == ['a "good" one', "plain, really"]


def test_backslashes_elsewhere_stay():
    file = read('id,path\n1,C:\\temp\n2,"D:\\a ""b"" c"\n')
    assert file.reading.escape == ""
    assert file.answers["path"].tolist() == ["C:\\temp", 'D:\\a "b" c']


def test_one_column_is_read_with_a_remark():
    file = read("q1\n5\n6\n7\n")
    assert file.answers["q1"].tolist() == [5.0, 6.0, 7.0]
    assert [r.code for r in file.remarks] == ["one_column"]


def test_a_told_delimiter_is_followed():
    file = read("a|b,c|d\n1|2,3|4\n", delimiter=",")
    assert list(file.answers.columns) == ["a|b", "c|d"]


@pytest.mark.parametrize(
    "decided",
    [
        {"delimiter": ""},
        {"delimiter": ";;"},
        {"delimiter": "\n"},
        {"quote": "ab"},
        {"delimiter": '"', "quote": '"'},
    ],
)
def test_settings_nothing_can_be_read_with_are_refused(decided):
    with pytest.raises(FieldworkFileError, match=r"s\.csv cannot be read with"):
        read("a,b\n1,2\n", **decided)
