"""Reading a text table: the order of the steps from bytes to a fieldwork file."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
import pandas as pd

from app.intake.careful_parsing import parse_carefully
from app.intake.cell_parsing import Body, parse_regular
from app.intake.cell_table import CellTable
from app.intake.column_names import ColumnNames, column_names, unnamed_remark
from app.intake.column_remarks import code_evidence, column_remarks, control_remark
from app.intake.column_values import (
    NumberMarks,
    ProfiledColumn,
    column_answers,
    find_marks,
    profile_column,
    settle_form,
)
from app.intake.delimiters import Dialect
from app.intake.encodings import DecodedFile, decode_file
from app.intake.fieldwork_files import (
    FieldworkFile,
    FieldworkFileError,
    Remark,
    SetAsideRow,
    name_list,
)
from app.intake.file_checks import check_bytes, check_not_binary, plain_name
from app.intake.header_rows import HeaderRows
from app.intake.layouts import Layout, find_layout, offset_after
from app.intake.number_forms import Form
from app.intake.reading import Reading
from app.intake.row_checks import footer_remarks, without_blank_rows, without_left_out


def read_fieldwork_file(
    source: bytes | Path, *, file_name: str, reading: Reading | None = None
) -> FieldworkFile:
    """Return the answers of a delimited text file, with every decision and every repair.

    Parameters
    ----------
    source : bytes or Path
        The file as it came.
    file_name : str
        As uploaded; stands in every sentence of refusal.
    reading : Reading or None
        Decisions to follow; fields that are None are found out. The ``reading`` of a result,
        passed back with the same bytes, gives the same answers.

    Returns
    -------
    FieldworkFile
        answers (DataFrame: float64 or text), question_texts, remarks, reading, fingerprint,
        lines and set_aside.

    Raises
    ------
    FieldworkFileError
        One plain sentence: what is wrong, where, and what to do next.
    """
    name = plain_name(file_name)
    content = _content(source, name)
    told = reading or Reading()
    _check_reading(told, name)
    check_bytes(content, name)
    fingerprint = hashlib.sha256(content).hexdigest()
    decoded = decode_file(content, told.encoding, name)
    del content
    check_not_binary(decoded.content, name)
    layout = find_layout(decoded.content, told, name)
    rows = _rows(decoded.content, layout, told, name)
    decoded = replace(decoded, content=b"")  # the bytes are not needed beside the answers
    return _file(decoded, layout, rows, told, _FileFacts(file_name, fingerprint))


@dataclass(frozen=True, slots=True)
class _FileFacts:
    name: str
    fingerprint: str


@dataclass(frozen=True, slots=True, eq=False)
class _Rows:
    table: CellTable
    set_aside: tuple[SetAsideRow, ...]
    remarks: tuple[Remark, ...]


def _content(source: bytes | Path, name: str) -> bytes:
    if not isinstance(source, Path):
        return bytes(source)
    try:
        with source.open("rb", buffering=0) as file:  # a buffer would hold the file twice
            return file.readall()
    except OSError as error:
        raise FieldworkFileError(
            f"{name} cannot be opened: check that it still exists and may be read."
        ) from error


def _check_reading(told: Reading, name: str) -> None:
    """Refuse settings nothing can be read with."""
    marks = (("delimiter", told.delimiter), ("quote", told.quote), ("escape", told.escape))
    for what, mark in marks:
        lengths = (1,) if what == "delimiter" else (0, 1)
        if mark is not None and (len(mark) not in lengths or mark in ("\r", "\n", "\x00")):
            raise FieldworkFileError(
                f"{name} cannot be read with “{mark}” as {what}: choose one character."
            )
    chosen = [mark for _, mark in marks if mark]
    if len(set(chosen)) < len(chosen) or " " in chosen[1:]:
        raise FieldworkFileError(
            f"{name} cannot be read with the same character as delimiter and quotation mark: "
            "choose two different ones."
        )


def _file(
    decoded: DecodedFile, layout: Layout, rows: _Rows, told: Reading, facts: _FileFacts
) -> FieldworkFile:
    name = plain_name(facts.name)
    table, blank = without_blank_rows(rows.table)
    table, left_out = without_left_out(table, told.left_out)
    if not len(table.lines):
        raise FieldworkFileError(
            f"{name} has a row of column names but no answers: check the export and upload it "
            "again."
        )
    names = column_names(layout.header, len(table.columns))
    columns, dropped = _named_columns(table, names, told)
    marks = find_marks(columns, told, layout.dialect.delimiter)
    columns = [settle_form(column, marks, told.column(column.name)) for column in columns]
    kept = {column.name for column in columns}
    remarks = (
        *decoded.remarks,
        *layout.header.remarks,
        *names.remarks,
        *dropped,
        *rows.remarks,
        *blank,
        *footer_remarks(table),
        *_column_remarks(columns, marks, told, table.lines),
    )
    lines = table.lines
    lines.setflags(write=False)
    return FieldworkFile(
        file_name=facts.name,
        answers=_answers(columns),
        question_texts={n: text for n, text in names.texts.items() if n in kept},
        remarks=remarks,
        reading=_settled(decoded, layout, marks, told, columns),
        fingerprint=facts.fingerprint,
        lines=lines,
        set_aside=tuple(sorted(rows.set_aside + left_out, key=lambda row: row.line)),
    )


def _rows(content: bytes, layout: Layout, told: Reading, name: str) -> _Rows:
    """Cut the body into cells: quickly where it is regular, else row by row."""
    header, dialect = layout.header, layout.dialect
    before = header.rows[-1].last_line if header.rows else header.lines_above
    offset = offset_after(content, before)
    body = Body(content, offset, before + 1)
    table = parse_regular(body, dialect, header.width, layout.whole)
    if table is not None:
        return _Rows(table, (), ())
    if header.rows and header.rows[-1].last_line > header.rows[0].line + len(header.rows) - 1:
        _check_header(content, header, dialect, name)
    careful = parse_carefully(
        content[offset:].decode("utf-8"),
        before + 1,
        dialect,
        header.width,
        keep_long=told.long_rows == "keep",
        file_name=name,
    )
    return _Rows(careful.table, careful.set_aside, careful.remarks)


def _check_header(content: bytes, header: HeaderRows, dialect: Dialect, name: str) -> None:
    """Refuse a header over several lines whose quotation marks are wrong."""
    first = header.rows[0].line
    start, end = offset_after(content, first - 1), offset_after(content, header.rows[-1].last_line)
    text = content[start:end].decode("utf-8")
    parse_carefully(text, first, dialect, header.width, keep_long=False, file_name=name)


def _named_columns(
    table: CellTable, names: ColumnNames, told: Reading
) -> tuple[list[ProfiledColumn], tuple[Remark, ...]]:
    """Return the columns; those with neither a name nor a cell are dropped with a remark."""
    columns = [
        profile_column(name, cells, told.column(name))
        for name, cells in zip(names.names, table.columns, strict=True)
    ]
    nameless = set(names.unnamed) if names.texts or len(names.unnamed) < len(columns) else set()
    empty = {i for i in nameless if columns[i].empty and columns[i].name not in names.texts}
    remarks = []
    if empty:
        count = f"{len(empty):,} columns" if len(empty) > 1 else "1 column"
        remarks.append(
            Remark(
                "empty_columns",
                f"{count} without a name and without a single answer left out: "
                f"{name_list([columns[i].name for i in sorted(empty)])}.",
            )
        )
    unnamed = [columns[i].name for i in sorted(nameless - empty)]
    if unnamed:
        remarks.append(unnamed_remark(unnamed))
    kept = [column for i, column in enumerate(columns) if i not in empty]
    if len(kept) == 1:
        remarks.append(_one_column(kept[0].name))
    return kept, tuple(remarks)


def _one_column(name: str) -> Remark:
    return Remark(
        "one_column",
        "The file has one column only: if it should have more, say which character separates "
        "its cells.",
        column=name,
    )


def _column_remarks(
    columns: list[ProfiledColumn], marks: NumberMarks, told: Reading, lines: np.ndarray
) -> tuple[Remark, ...]:
    found = list(control_remark(columns, lines))
    for column in columns:
        found += column_remarks(column, marks, told.column(column.name), lines)
    return tuple(found)


def _answers(columns: list[ProfiledColumn]) -> pd.DataFrame:
    answers = {column.name: column_answers(column) for column in columns}
    return pd.DataFrame(answers, copy=False)


def _settled(
    decoded: DecodedFile,
    layout: Layout,
    marks: NumberMarks,
    told: Reading,
    columns: list[ProfiledColumn],
) -> Reading:
    """Return every decision that was taken, ready to be passed back."""
    dialect, header = layout.dialect, layout.header
    numbers = sum(c.form.form not in (Form.WORDS, Form.DOUBTFUL) for c in columns)
    counted = f"{numbers:,} of {len(columns):,} columns are numbers, the others text."
    evidence = (decoded.evidence, *dialect.evidence, *header.evidence, marks.evidence, counted)
    return replace(
        told,
        encoding=decoded.encoding,
        delimiter=dialect.delimiter,
        quote=dialect.quote,
        escape=dialect.escape,
        decimal_mark=marks.decimal_mark,
        thousands_mark=marks.thousands_mark if marks.decimal_mark else told.thousands_mark,
        sep_line=dialect.sep_line,
        lines_above=header.lines_above,
        header_rows=len(header.rows),
        name_row=header.name_row,
        evidence=evidence + code_evidence(columns),
    )
