"""Columns of small whole numbers, which a large file may let the parser read as numbers at once.

The parser would also take 007 for 7. Whether it met anything but numbers in their shortest form
shows in the count of bytes: every other form of the same number is longer.
"""

from __future__ import annotations

import re

import numpy as np
import pyarrow as pa  # type: ignore[import-untyped]
import pyarrow.compute as pc  # type: ignore[import-untyped]

from app.intake.cell_table import CellColumn, Column, WholeColumn
from app.intake.delimiters import Record
from app.intake.header_rows import HeaderRows

_SHORT = re.compile(r"-?[1-9][0-9]{0,3}|0|")


def likely_whole(rows: list[Record], header: HeaderRows, told: list[int]) -> frozenset[int]:
    """Return the columns, from 0, that hold nothing but small whole numbers in the first rows.

    Parameters
    ----------
    rows : list of Record
        The first rows of the file.
    header : HeaderRows
        Its head.
    told : list of int
        Columns a person has decided about: never among the result.
    """
    body = [row.cells for row in rows if row.line > header.lines_above][len(header.rows) :]
    body = [cells for cells in body if len(cells) == header.width]
    columns = zip(*body, strict=True)
    likely = (i for i, cells in enumerate(columns) if _all_short(cells))
    return frozenset(likely) - frozenset(told)


def _all_short(cells: tuple[str, ...]) -> bool:
    different = set(cells)
    return len(different) > (1 if "" in different else 0) and all(map(_SHORT.fullmatch, different))


def whole_column(chunks: pa.ChunkedArray) -> WholeColumn | None:
    """Return a parsed column in the smallest type; None when no value is left for blank cells."""
    values = pc.fill_null(chunks, np.iinfo(np.int16).min).to_numpy()
    blanks = chunks.null_count
    if np.count_nonzero(values == np.iinfo(np.int16).min) > blanks:
        return None
    low = pc.min_max(chunks)
    smallest, largest = low["min"].as_py() or 0, low["max"].as_py() or 0
    if smallest <= np.iinfo(np.int8).min or largest > np.iinfo(np.int8).max:
        return WholeColumn(values)
    if blanks:
        values = np.maximum(values, np.int16(np.iinfo(np.int8).min))
    return WholeColumn(values.astype(np.int8))


def written_bytes(columns: tuple[Column, ...]) -> int:
    """Return the bytes of all cells, numbers in their shortest form, quotation marks left out."""
    return sum(
        _number_bytes(c.values) if isinstance(c, WholeColumn) else _text_bytes(c) for c in columns
    )


def count_in_cells(columns: tuple[Column, ...], characters: str) -> int:
    """Return how often any of the characters stands inside the cells of text columns."""
    total = 0
    for column in (c for c in columns if isinstance(c, CellColumn)):
        for character in characters:
            found = pc.count_substring(column.distinct, character).to_numpy()
            if found.any():
                total += int((found * column.counts()).sum())
    return total


def _text_bytes(column: CellColumn) -> int:
    lengths = pc.binary_length(column.distinct).to_numpy().astype(np.int64)
    return int((lengths * column.counts()).sum())


def _number_bytes(values: np.ndarray) -> int:
    """Return the digits and signs of all numbers."""
    blank = np.iinfo(values.dtype).min
    largest = int(values.max(initial=0))
    total = int(np.count_nonzero(values >= 0))
    total += sum(int(np.count_nonzero(values >= p)) for p in _POWERS if p <= largest)
    negative = values[(values < 0) & (values != blank)].astype(np.int32)
    total += 2 * len(negative)
    return total + sum(int(np.count_nonzero(negative <= -p)) for p in _POWERS if len(negative))


_POWERS = (10, 100, 1_000, 10_000)
