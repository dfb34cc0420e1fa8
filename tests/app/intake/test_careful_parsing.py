"""Uneven rows, blank lines and stray quotation marks: repaired aloud or set aside, never lost."""

from __future__ import annotations

import pytest

from app.intake import FieldworkFileError, Reading, read_fieldwork_file


def read(text: str, **decided):
    return read_fieldwork_file(text.encode(), file_name="s.csv", reading=Reading(**decided))


def remark(file, code):
    (found,) = [r for r in file.remarks if r.code == code]
    return found


def test_short_rows_are_padded_and_named():
    file = read("id,a,b\n1,x,y\n2,x\n3,x,y\n4\n")
    assert file.answers["b"].isna().tolist() == [False, True, False, True]
    assert remark(file, "short_rows").rows == (3, 5)
    assert "2 rows have fewer than 3 cells (lines 3 and 5)" in remark(file, "short_rows").sentence


def test_long_rows_are_set_aside_with_their_cells():
    file = read("id,a,b\n1,x,y\n2,one, two,y\n3,x,y\n")
    assert file.answers["id"].tolist() == [1.0, 3.0]
    assert file.lines.tolist() == [2, 4]
    (row,) = file.set_aside
    assert (row.line, row.cells) == (3, ("2", "one", " two", "y"))
    assert remark(file, "long_rows").rows == (3,)


def test_long_rows_can_be_kept():
    file = read("id,a,b\n1,x,y\n2,one, two,y\n3,x,y\n", long_rows="keep")
    assert file.answers["column 4"].tolist()[1] == "y"
    assert file.set_aside == ()
    assert file.lines.tolist() == [2, 3, 4]


def test_empty_cells_beyond_the_last_column_are_dropped():
    file = read("id,a\n1,x,,\n2,y\n3,z\n")
    assert list(file.answers.columns) == ["id", "a"]
    assert remark(file, "trailing_delimiters").rows == (2,)


def test_a_header_that_names_too_few_columns():
    file = read("id,a\n1,x,p\n2,y,q\n3,z,r\n")
    assert list(file.answers.columns) == ["id", "a", "column 3"]
    assert file.answers["column 3"].tolist() == ["p", "q", "r"]
    assert remark(file, "unnamed_columns").column == "column 3"


@pytest.mark.parametrize("blank", ["\n", ",,\n", "   \n", " , ,\n"])
def test_blank_lines_are_left_out_and_named(blank):
    file = read(f"id,a,b\n1,x,y\n{blank}2,x,y\n{blank}")
    assert file.answers["id"].tolist() == [1.0, 2.0]
    assert file.lines.tolist() == [2, 4]
    if blank != "\n":
        assert remark(file, "blank_lines").rows == (3, 5)


def test_line_numbers_count_lines_inside_cells():
    text = 'id,note\n1,"a\nb\r\nc"\n2,plain\n\n3,"x\ny"\n4,z\n'
    file = read(text)
    assert file.lines.tolist() == [2, 5, 7, 9]
    assert file.answers["note"].tolist() == ["a\nb\r\nc", "plain", "x\ny", "z"]
    assert read(text.replace("\n\n", "\n")).lines.tolist() == [2, 5, 6, 8]


def test_marks_within_an_unquoted_cell_stay():
    file = read('id,size\n1,5" screen\n2,7"\n3,a"b"c\n')
    assert file.answers["size"].tolist() == ['5" screen', '7"', 'a"b"c']
    assert file.remarks == ()


def test_marks_that_are_not_doubled_are_named():
    file = read('id,said,n\n1,"a "good" one",5\n2,"fine",6\n')
    assert remark(file, "stray_quotes").rows == (2,)
    assert file.answers["n"].tolist() == [5.0, 6.0]


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ('id,a\n1,x\n2,"open\n3,y\n', 3),
        ('id,a\n1,"x\ny"\n2,"open\n3,"y"\n4,z\n', 4),
        ('id,a,b\n1,"two\nlines","open\n2,x,y\n', 3),
        ('id,a\n1,"x"\n2,x\n3,"', 4),
    ],
)
def test_an_open_quotation_mark_is_refused_with_its_line(text, line):
    with pytest.raises(FieldworkFileError, match=f"opened in line {line} is not closed"):
        read(text)


def test_a_cell_without_end_is_refused():
    text = 'id,a\n1,"' + "x,y\n" * 50_000
    with pytest.raises(FieldworkFileError, match="opened in line 2 is not closed"):
        read(text)


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
def test_line_ends_of_every_kind(end):
    file = read(f'id,a{end}1,x{end}2,"p{end}q"{end}3,z')
    assert file.answers["a"].tolist() == ["x", f"p{end}q", "z"]
    assert file.lines.tolist() == [2, 3, 5]


def test_mixed_line_ends():
    file = read("id,a\r\n1,x\n2,y\r3,z\r\n")
    assert file.answers["a"].tolist() == ["x", "y", "z"]
    assert file.lines.tolist() == [2, 3, 4]
