"""From UTF-8 bytes to a table of cells where every row has the same number of them.

pyarrow's parser does it quickly. It refuses uneven rows and cannot say where a quotation mark
went wrong, so for anything suspicious it answers None and ``careful_parsing`` reads row by row.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pyarrow as pa  # type: ignore[import-untyped]
import pyarrow.compute as pc  # type: ignore[import-untyped]
from pyarrow import csv as quick_csv

from app.intake.cell_table import CellColumn, CellTable, Column, column_of
from app.intake.delimiters import Dialect
from app.intake.whole_numbers import count_in_cells, whole_column, written_bytes

_PIECE = 4 << 20
_BLOCK = 2 << 20
_FEED, _RETURN = 10, 13


@dataclass(frozen=True, slots=True)
class Body:
    """The rows of answers within a file.

    Parameters
    ----------
    content : bytes
        The file, UTF-8.
    start : int
        Where the answers begin.
    first_line : int
        Line of the file at that place, from 1.
    """

    content: bytes
    start: int
    first_line: int


@dataclass(frozen=True, slots=True)
class _Marks:
    """What one pass over the bytes counts."""

    feeds: int
    returns: int
    line_ends: int
    quotes: int
    stray: bool


def parse_regular(
    body: Body, dialect: Dialect, width: int, whole: frozenset[int]
) -> CellTable | None:
    """Parse a table in which every row has ``width`` cells; None where it needs care.

    Parameters
    ----------
    body : Body
        The rows.
    dialect : Dialect
        How rows are cut.
    width : int
        Number of columns.
    whole : frozenset of int
        Columns, from 0, to be tried as small whole numbers.
    """
    end = len(body.content)
    while end > body.start and body.content[end - 1] in b"\r\n":
        end -= 1
    if end == body.start or dialect.escape or dialect.quote not in ('"', ""):
        return None
    if not dialect.delimiter.isascii():
        return None
    marks = _marks(np.frombuffer(body.content, np.uint8, end - body.start, body.start), dialect)
    if marks.stray:
        return None
    text = memoryview(body.content)[body.start : end]
    columns = _columns(text, dialect, width, whole, marks) if whole else None
    columns = columns or _columns(text, dialect, width, frozenset(), marks)
    pa.default_memory_pool().release_unused()
    return _with_lines(columns, body.first_line, dialect, marks) if columns else None


def _marks(data: np.ndarray, dialect: Dialect) -> _Marks:
    """Count line ends and quotation marks piece by piece, and look for stray marks."""
    feeds = returns = bare = quotes = 0
    stray = False
    for at in range(0, len(data), _PIECE):
        piece = data[at : at + _PIECE]
        feeds += int(np.count_nonzero(piece == _FEED))
        found = at + np.flatnonzero(piece == _RETURN)
        returns += len(found)
        bare += int(np.count_nonzero(data[np.minimum(found + 1, len(data) - 1)] != _FEED))
        if dialect.quote:
            found = at + np.flatnonzero(piece == ord(dialect.quote))
            quotes += len(found)
            stray = stray or _is_stray(data, found, dialect)
    return _Marks(feeds, returns, feeds + bare, quotes, stray or quotes % 2 == 1)


def _is_stray(data: np.ndarray, marks: np.ndarray, dialect: Dialect) -> bool:
    """Whether a quotation mark stands inside a cell without being doubled."""
    around = np.zeros(256, dtype=bool)
    around[[_FEED, _RETURN, ord(dialect.quote), ord(dialect.delimiter)]] = True
    marks = marks[(marks > 0) & (marks < len(data) - 1)]
    return bool((~around[data[marks - 1]] & ~around[data[marks + 1]]).any())


def _columns(
    text: memoryview, dialect: Dialect, width: int, whole: frozenset[int], marks: _Marks
) -> tuple[Column, ...] | None:
    table = _parsed(text, dialect, width, whole, quoted=marks.quotes > 0)
    pa.default_memory_pool().release_unused()  # the blocks of the text, now cut into cells
    if table is None:
        return None
    columns = []
    for i in range(width):
        column = (whole_column if i in whole else column_of)(table.column(i))
        if column is None:
            return None
        columns.append(column)
    found = tuple(columns)
    if whole and not _adds_up(found, table.num_rows, len(text), dialect, marks):
        return None
    return found


def _parsed(
    text: memoryview, dialect: Dialect, width: int, whole: frozenset[int], *, quoted: bool
) -> pa.Table | None:
    cell = pa.dictionary(pa.int32(), pa.string())
    kinds = {str(i): pa.int16() if i in whole else cell for i in range(width)}
    try:
        return quick_csv.read_csv(
            pa.BufferReader(pa.py_buffer(text)),
            read_options=quick_csv.ReadOptions(column_names=list(kinds), block_size=_BLOCK),
            parse_options=quick_csv.ParseOptions(
                delimiter=dialect.delimiter,
                quote_char=dialect.quote or False,
                newlines_in_values=quoted,
            ),
            convert_options=quick_csv.ConvertOptions(
                column_types=kinds, null_values=[""], strings_can_be_null=False
            ),
        )
    except pa.ArrowInvalid:
        return None


def _adds_up(
    columns: tuple[Column, ...], rows: int, length: int, dialect: Dialect, marks: _Marks
) -> bool:
    """Whether the cells, with every number in its shortest form, account for every byte."""
    inner_ends = inner_quotes = 0
    if marks.quotes:
        inner_ends = count_in_cells(columns, "\r\n")
        inner_quotes = count_in_cells(columns, dialect.quote)
    ends = marks.feeds + marks.returns - inner_ends
    cuts = rows * (len(columns) - 1)
    return length == written_bytes(columns) + cuts + ends + marks.quotes - inner_quotes


def _with_lines(
    columns: tuple[Column, ...], first_line: int, dialect: Dialect, marks: _Marks
) -> CellTable | None:
    """Return the table with the line of each row; None where lines are blank or look swallowed."""
    first = columns[0]
    rows = len(first.codes if isinstance(first, CellColumn) else first.values)
    lines = first_line + np.arange(rows, dtype=np.int64)
    more = marks.line_ends - (rows - 1)
    if more:
        extra = _inner_line_ends(columns, dialect, rows)
        if extra is None or extra.sum() != more:
            return None
        lines[1:] += np.cumsum(extra)[:-1]
    return CellTable(columns, lines)


def _inner_line_ends(columns: tuple[Column, ...], dialect: Dialect, rows: int) -> np.ndarray | None:
    """Return (n rows,) line ends inside cells; None where a cell looks like swallowed rows."""
    extra = np.zeros(rows, dtype=np.int64)
    for column in columns:
        if not isinstance(column, CellColumn):
            continue
        counts = pc.count_substring_regex(column.distinct, "\r\n|\n|\r").to_numpy()
        if not counts.any():
            continue
        cells = column.distinct.filter(pa.array(counts > 0)).to_pylist()
        if any(_swallowed(cell, dialect.delimiter, len(columns)) for cell in cells):
            return None
        extra += counts[column.codes]
    return extra


def _swallowed(cell: str, delimiter: str, width: int) -> bool:
    lines = cell.replace("\r", "\n").split("\n")
    return any(line.count(delimiter) >= width - 1 for line in lines)
