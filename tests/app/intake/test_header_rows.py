"""Where the table begins and how many header rows it has."""

from __future__ import annotations

import pytest

from app.intake import Reading, read_fieldwork_file

CODES = "ID,Q1,Q2\n"
TEXTS = "Respondent number,How satisfied are you?,How likely are you to stay?\n"
ROWS = "1,5,6\n2,7,8\n3,9,10\n"


def read(text: str, **decided):
    return read_fieldwork_file(text.encode(), file_name="s.csv", reading=Reading(**decided))


def test_one_header_row():
    file = read(CODES + ROWS)
    assert (file.reading.header_rows, file.reading.name_row, file.question_texts) == (1, 1, {})
    assert file.lines.tolist() == [2, 3, 4]


def test_codes_then_texts():
    file = read(CODES + TEXTS + ROWS)
    assert file.reading.header_rows == 2
    assert file.question_texts["Q1"] == "How satisfied are you?"
    assert file.answers["Q1"].tolist() == [5.0, 7.0, 9.0]


def test_texts_then_codes():
    file = read(TEXTS + CODES + ROWS)
    assert (file.reading.header_rows, file.reading.name_row) == (2, 2)
    assert list(file.answers.columns) == ["ID", "Q1", "Q2"]
    assert file.question_texts["Q2"] == "How likely are you to stay?"


def test_three_rows_keep_all_levels():
    texts = "Number,How good is each of these?,,,Where do you live?\n"
    items = ",Service,Price,Opening hours,\n"
    rows = "1,5,6,7,North\n2,7,8,9,South\n3,9,10,9,North\n"
    file = read("ID,Q1_1,Q1_2,Q1_3,Q2\n" + texts + items + rows)
    assert file.reading.header_rows == 3
    assert file.question_texts["Q1_1"] == "How good is each of these? – Service"
    assert file.question_texts["Q1_2"] == "Price"
    assert file.question_texts["Q2"] == "Where do you live?"
    assert file.answers["Q1_2"].tolist() == [6.0, 8.0, 10.0]


def test_texts_over_labels_only():
    rows = "".join(
        f"{'Yes' if i % 2 else 'No'},{'North' if i % 3 else 'South'}\n" for i in range(9)
    )
    file = read("Q1,Q2\nWould you come again?,Where do you live now?\n" + rows)
    assert file.reading.header_rows == 2
    assert len(file.answers) == 9


def test_a_first_respondent_of_words_is_no_header():
    file = read("name,q1,q2\nAnn,refused,5\nBob,3,4\nCy,2,1\n")
    assert file.reading.header_rows == 1
    assert file.answers["q1"].tolist() == ["refused", "3", "2"]


@pytest.mark.parametrize(
    "rows",
    [
        "R001,refused,don't know,no\nR002,3,4,5\nR003,4,5,6\n",
        "Ann,refused,don't know,refused\nBob,3,4,5\nCy,2,1,0\n",
        "North,a lot of words here?,5,1\nNorth,3,4,1\nSouth,2,1,1\n",
        "North,many words are standing here,yes,no\nNorth,3,4,1\nSouth,2,1,1\n",
    ],
)
def test_a_respondent_is_never_taken_for_a_header(rows):
    assert len(read("who,q1,q2,q3\n" + rows).answers) == 3


def test_a_first_row_of_numbers_is_no_header():
    file = read(ROWS)
    assert file.reading.header_rows == 0
    assert list(file.answers.columns) == ["column 1", "column 2", "column 3"]
    assert [r.code for r in file.remarks] == ["no_header"]
    assert len(file.answers) == 3


def test_counting_numbers_may_name_columns():
    assert read("1,2,3\n5,5,4\n4,5,5\n").reading.header_rows == 1


@pytest.mark.parametrize(
    "above",
    ["Dealer study, autumn\n\n", "Dealer study,,\n,,\n", "\n\n", "Dealer study\nMarch only\n"],
)
def test_titles_above_the_table_are_skipped(above):
    file = read(above + CODES + ROWS)
    assert list(file.answers.columns) == ["ID", "Q1", "Q2"]
    assert file.reading.lines_above == above.count("\n")
    assert file.lines.tolist() == [4, 5, 6]
    assert ("lines_above" in {r.code for r in file.remarks}) == bool(above.strip())


def test_titles_can_be_kept_and_headers_overridden():
    file = read(CODES + TEXTS + ROWS, header_rows=1)
    assert len(file.answers) == 4
    assert file.answers["Q1"].tolist()[0] == "How satisfied are you?"
    file = read("x,y,z\n" + CODES + ROWS, lines_above=1)
    assert list(file.answers.columns) == ["ID", "Q1", "Q2"]


def test_a_header_cell_over_two_lines():
    file = read('ID,"Q1\nfirst",Q2\n' + ROWS)
    assert list(file.answers.columns) == ["ID", "Q1 first", "Q2"]
    assert file.lines.tolist() == [3, 4, 5]
