"""One small broken file per failure, and the sentence each must produce."""

from __future__ import annotations

from pathlib import Path

import pytest

from app.intake import FieldworkFileError, Reading, read_fieldwork_file
from app.intake.file_checks import plain_name

FOLDER = Path(__file__).resolve().parents[2] / "broken_files"
AS_CSV = "save the table as CSV and upload that file."
OPEN_QUOTE = (
    "is not closed where its cell ends: correct that line, or read the file without quotation "
    "marks."
)
SENTENCES = {
    "cut_utf16.csv": "cut_utf16.csv does not fit the encoding utf-16-le (first in line 3): choose "
    "another encoding or save the file as UTF-8.",
    "document.csv": f"document.csv is a PDF document: {AS_CSV}",
    "empty.csv": "empty.csv is empty: export it again and upload it.",
    "gzipped.csv": "gzipped.csv is compressed: unpack it and upload the CSV file inside.",
    "header_only.csv": "header_only.csv has a row of column names but no answers: check the export "
    "and upload it again.",
    "json.csv": f"json.csv holds JSON, not a table: {AS_CSV}",
    "noise.csv": "noise.csv is neither UTF-8 nor Windows-1252 text: save it as UTF-8 and upload it "
    "again.",
    "old_workbook.csv": f"old_workbook.csv is a spreadsheet workbook: {AS_CSV}",
    "only_line_ends.csv": "only_line_ends.csv is empty: export it again and upload it.",
    "open_quote_at_end.csv": "open_quote_at_end.csv: the quotation mark opened in line 3 "
    + OPEN_QUOTE,
    "open_quote_in_header.csv": "open_quote_in_header.csv: the quotation mark opened in line 1 "
    + OPEN_QUOTE,
    "open_quote_in_middle.csv": "open_quote_in_middle.csv: the quotation mark opened in line 3 "
    + OPEN_QUOTE,
    "parquet.csv": f"parquet.csv is a Parquet file: {AS_CSV}",
    "picture.csv": f"picture.csv is a picture, not a table: {AS_CSV}",
    "table_page.csv": "table_page.csv is a web page, not a table: open it in a spreadsheet, save "
    "it as CSV and upload that file.",
    "undecodable.csv": "undecodable.csv is neither UTF-8 nor Windows-1252 text: save it as UTF-8 "
    "and upload it again.",
    "web_page.csv": "web_page.csv is a web page, not a table: open it in a spreadsheet, save it as "
    "CSV and upload that file.",
    "workbook.csv": f"workbook.csv is a spreadsheet workbook: {AS_CSV}",
    "xml.csv": f"xml.csv is an XML document, not a table: {AS_CSV}",
    "zipped.csv": "zipped.csv is a compressed folder: unpack it and upload the CSV file inside.",
}


def test_every_broken_file_has_its_sentence():
    assert {path.name for path in FOLDER.iterdir()} == set(SENTENCES)


@pytest.mark.parametrize("name", sorted(SENTENCES))
def test_broken_file_is_refused_with_one_sentence(name):
    with pytest.raises(FieldworkFileError) as caught:
        read_fieldwork_file(FOLDER / name, file_name=name)
    assert str(caught.value) == SENTENCES[name]
    with pytest.raises(FieldworkFileError) as from_bytes:
        read_fieldwork_file((FOLDER / name).read_bytes(), file_name=name)
    assert str(from_bytes.value) == SENTENCES[name]


def test_a_missing_file_is_refused():
    with pytest.raises(FieldworkFileError, match=r"gone\.csv cannot be opened"):
        read_fieldwork_file(FOLDER / "gone.csv", file_name="gone.csv")


def test_an_open_quote_can_be_read_without_quotation_marks():
    source = FOLDER / "open_quote_at_end.csv"
    file = read_fieldwork_file(source, file_name=source.name, reading=Reading(quote=""))
    assert file.answers["comment"].tolist() == ["fine", '"never closed', "good", "bad"]


def test_too_many_columns_are_refused():
    content = b",".join(b"q%d" % i for i in range(20_001)) + b"\n" + b"1," * 20_000 + b"1\n"
    with pytest.raises(FieldworkFileError, match=r"20,001 columns, more than 20,000"):
        read_fieldwork_file(content, file_name="wide.csv")


@pytest.mark.parametrize(
    ("given", "shown"),
    [
        ("C:\\files\\a.csv", "a.csv"),
        ("../../etc/a\x07.csv", "a.csv"),
        ("\n", "The file"),
        ("x" * 200, "x" * 79 + "…"),
    ],
)
def test_names_in_sentences_are_plain(given, shown):
    assert plain_name(given) == shown
