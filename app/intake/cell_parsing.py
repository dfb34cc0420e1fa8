"""From UTF-8 bytes to a table of cells where every row has the same number of them.

pyarrow's parser does it quickly. It refuses uneven rows and cannot say where a quotation mark
went wrong, so for anything suspicious it answers None and ``careful_parsing`` reads row by row.
"""

from __future__ import annotations

import numpy as np
import pyarrow as pa  # type: ignore[import-untyped]
import pyarrow.compute as pc  # type: ignore[import-untyped]
from pyarrow import csv as quick_csv  # type: ignore[import-untyped]

from app.intake.cell_table import CellColumn, CellTable, column_of
from app.intake.delimiters import Dialect

_PIECE = 4 << 20
_BLOCK = 2 << 20


def parse_regular(
    content: bytes, offset: int, first_line: int, dialect: Dialect, width: int
) -> CellTable | None:
    """Parse a table in which every row has ``width`` cells; None where it needs care.

    Parameters
    ----------
    content : bytes
        UTF-8.
    offset : int
        Where the answers begin.
    first_line : int
        Line of the file at that place, from 1.
    dialect : Dialect
        How rows are cut.
    width : int
        Number of columns.
    """
    end = len(content)
    while end > offset and content[end - 1] in b"\r\n":
        end -= 1
    if end == offset or _needs_care(content, offset, end, dialect):
        return None
    table = _parsed(memoryview(content)[offset:end], dialect, width)
    if table is None:
        return None
    columns = tuple(column_of(table.column(i)) for i in range(width))
    lines = first_line + np.arange(table.num_rows, dtype=np.int64)
    more = _line_ends(content, offset, end) - (table.num_rows - 1)
    if more:
        extra = _inner_line_ends(columns, dialect, table.num_rows)
        if extra is None or extra.sum() != more:  # the rest are blank lines
            return None
        lines[1:] += np.cumsum(extra)[:-1]
    return CellTable(columns, lines)


def _needs_care(content: bytes, start: int, end: int, dialect: Dialect) -> bool:
    """Whether the dialect or stray quotation marks call for reading row by row."""
    if dialect.escape or dialect.quote not in ('"', "") or not dialect.delimiter.isascii():
        return True
    quote = dialect.quote.encode()
    if not quote or content.find(quote, start, end) < 0:
        return False
    return _has_stray_quote(content, start, end, dialect)


def _has_stray_quote(content: bytes, start: int, end: int, dialect: Dialect) -> bool:
    """Whether a quotation mark stands between two letters, neither doubled nor at a cell's end."""
    around = np.zeros(256, dtype=bool)
    around[[10, 13, ord(dialect.quote), ord(dialect.delimiter)]] = True
    data = np.frombuffer(content, np.uint8, end - start, start)
    for at in range(0, len(data), _PIECE):
        marks = at + np.flatnonzero(data[at : at + _PIECE] == ord(dialect.quote))
        marks = marks[(marks > 0) & (marks < len(data) - 1)]
        if (~around[data[marks - 1]] & ~around[data[marks + 1]]).any():
            return True
    return False


def _parsed(body: memoryview, dialect: Dialect, width: int) -> pa.Table | None:
    names = [str(i) for i in range(width)]
    kind = pa.dictionary(pa.int32(), pa.string())
    quoted = bool(dialect.quote) and dialect.quote.encode() in body.obj  # type: ignore[operator]
    try:
        return quick_csv.read_csv(
            pa.BufferReader(pa.py_buffer(body)),
            read_options=quick_csv.ReadOptions(column_names=names, block_size=_BLOCK),
            parse_options=quick_csv.ParseOptions(
                delimiter=dialect.delimiter,
                quote_char=dialect.quote or False,
                newlines_in_values=quoted,
            ),
            convert_options=quick_csv.ConvertOptions(
                column_types=dict.fromkeys(names, kind), strings_can_be_null=False
            ),
        )
    except pa.ArrowInvalid:
        return None


def _line_ends(content: bytes, start: int, end: int) -> int:
    """Return how many line ends there are, "\\r\\n" counted once."""
    data = np.frombuffer(content, np.uint8, end - start, start)
    count = 0
    for at in range(0, len(data), _PIECE):
        piece = data[at : at + _PIECE]
        count += np.count_nonzero(piece == 10)
        returns = at + np.flatnonzero(piece == 13)
        after = data[np.minimum(returns + 1, len(data) - 1)]
        count += np.count_nonzero(after != 10)
    return count


def _inner_line_ends(
    columns: tuple[CellColumn, ...], dialect: Dialect, rows: int
) -> np.ndarray | None:
    """Return (n rows,) line ends inside cells; None where a cell looks like swallowed rows."""
    extra = np.zeros(rows, dtype=np.int64)
    for column in columns:
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
