"""How the rows of a file are cut and where its table begins, told by its first part."""

from __future__ import annotations

import csv
import re
from dataclasses import dataclass

from app.intake.column_names import column_names
from app.intake.delimiters import Dialect, Record, find_dialect, records
from app.intake.fieldwork_files import FieldworkFileError
from app.intake.file_checks import check_text
from app.intake.header_rows import HeaderRows, find_header
from app.intake.reading import Reading
from app.intake.whole_numbers import likely_whole

MOST_COLUMNS = 20_000
WORTH_IT = 1 << 20  # bytes from which columns of whole numbers are parsed as such

_LINE_END = re.compile(rb"\r\n|\n|\r")
_SAMPLE = 256 << 10
_LARGEST_SAMPLE = 16 << 20
_SAMPLE_LINES = 40
_SAMPLE_ROWS = 2_000


@dataclass(frozen=True, slots=True)
class Layout:
    """The layout of a table within its file.

    Parameters
    ----------
    dialect : Dialect
        How rows are cut.
    header : HeaderRows
        Its head.
    whole : frozenset of int
        Columns, from 0, that are worth trying as whole numbers.
    """

    dialect: Dialect
    header: HeaderRows
    whole: frozenset[int]


def find_layout(content: bytes, told: Reading, name: str) -> Layout:
    """Return the layout of a file.

    Parameters
    ----------
    content : bytes
        UTF-8.
    told : Reading
        Fields that are None are found out.
    name : str
        Of the file, for sentences.

    Raises
    ------
    FieldworkFileError
        When the text is no table, or too wide a one.
    """
    sample = _sample(content)
    check_text(sample, name)
    dialect = find_dialect(sample, told)
    rows = _first_rows(sample, dialect, cut=len(sample.encode()) < len(content))
    if not rows:
        raise FieldworkFileError(f"{name} holds no cells: export it again and upload it.")
    header = find_header(rows, told)
    if header.width > MOST_COLUMNS:
        raise FieldworkFileError(
            f"{name} has {header.width:,} columns, more than {MOST_COLUMNS:,}: export fewer "
            "questions at a time."
        )
    return Layout(dialect, header, _whole(content, rows, header, told))


def _whole(content: bytes, rows: list[Record], header: HeaderRows, told: Reading) -> frozenset[int]:
    if len(content) <= WORTH_IT:
        return frozenset()
    names = column_names(header, header.width).names
    return likely_whole(rows, header, [i for i, name in enumerate(names) if told.column(name)])


def _sample(content: bytes) -> str:
    """Return the first whole lines of the file: 256 KB, or more where lines are long."""
    size = _SAMPLE
    while size < min(len(content), _LARGEST_SAMPLE):
        if content.count(b"\n", 0, size) + content.count(b"\r", 0, size) >= _SAMPLE_LINES:
            break
        size *= 2
    head = content[:size]
    if size < len(content):
        end = max(head.rfind(b"\n"), head.rfind(b"\r")) + 1
        head = head[:end] if end else head
    return head.decode("utf-8", "ignore")


def _first_rows(sample: str, dialect: Dialect, *, cut: bool) -> list[Record]:
    """Return the first rows with a filled cell; the last row of a cut sample may be a part."""
    first_line = 1
    if dialect.sep_line:
        match = re.search("\r\n|\n|\r", sample)
        sample, first_line = sample[match.end() :] if match else "", 2
    rows: list[Record] = []
    try:
        for row in records(sample, dialect, first_line):
            rows.append(row)
            if len(rows) > _SAMPLE_ROWS:
                break
    except csv.Error:  # a cell without end: the careful parser will name its line
        cut = False
    if cut and len(rows) > 1:
        rows.pop()
    return [row for row in rows if any(cell.strip() for cell in row.cells)]


def offset_after(content: bytes, lines: int) -> int:
    """Return the byte at which the line after the first ``lines`` lines begins."""
    if lines == 0:
        return 0
    ends = (match.end() for match in _LINE_END.finditer(content))
    return next((end for i, end in enumerate(ends, start=1) if i == lines), len(content))
