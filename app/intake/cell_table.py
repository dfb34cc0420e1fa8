"""A parsed table, column by column: the different cells of each and which row holds which.

Answers repeat, so work on the different cells of a column is far less than work on all cells.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pyarrow as pa  # type: ignore[import-untyped]
import pyarrow.compute as pc  # type: ignore[import-untyped]

_BLANK = r"^[\s\x00-\x1f\x7f\x{00a0}\x{202f}\x{2007}\x{feff}]*$"
# First bytes, in UTF-8, of spaces and control characters, no-break ones included.
_SPACE_BYTES = np.array([*range(33), 127, 0xC2, 0xE1, 0xE2, 0xE3, 0xEF], dtype=np.uint8)


@dataclass(frozen=True, slots=True, eq=False)
class CellColumn:
    """The cells of one column.

    Parameters
    ----------
    distinct : pyarrow array of str
        Different cells, in order of appearance.
    codes : array
        (n rows,) unsigned int: position of each row's cell in ``distinct``.
    """

    distinct: pa.Array
    codes: np.ndarray

    def keep(self, rows: np.ndarray) -> CellColumn:
        """Return the column with the rows flagged in (n rows,) ``rows`` and their cells only."""
        codes = self.codes[rows]
        used = np.bincount(codes, minlength=len(self.distinct)) > 0
        position = (np.cumsum(used) - 1).astype(codes.dtype)
        return CellColumn(self.distinct.filter(pa.array(used)), position[codes])

    def counts(self) -> np.ndarray:
        """Return (distinct,) how many rows hold each cell."""
        return np.bincount(self.codes, minlength=len(self.distinct))

    def cell(self, row: int) -> str:
        """Return one cell."""
        return str(self.distinct[int(self.codes[row])].as_py())

    def blank(self) -> np.ndarray:
        """Return (distinct,) bool: cells of spaces, or of nothing at all."""
        flags = _may_be_blank(self.distinct)
        if flags.any():
            cells = self.distinct.filter(pa.array(flags))
            flags[flags] = as_flags(pc.match_substring_regex(cells, _BLANK))
        return flags

    def blank_rows(self) -> np.ndarray:
        """Return (n rows,) bool: rows without an answer."""
        return self.rows_with(self.blank())

    def rows_with(self, flags: np.ndarray) -> np.ndarray:
        """Return (n rows,) bool: rows whose cell is flagged in (distinct,) ``flags``."""
        return np.asarray(flags[self.codes])


@dataclass(frozen=True, slots=True, eq=False)
class WholeColumn:
    """The cells of a column of small whole numbers, read without a look at their text.

    Parameters
    ----------
    values : array
        (n rows,) int8 or int16; the smallest value of the type stands for a blank cell.
    """

    values: np.ndarray

    def keep(self, rows: np.ndarray) -> WholeColumn:
        """Return the column with the rows flagged in (n rows,) ``rows`` only."""
        return WholeColumn(self.values[rows])

    def cell(self, row: int) -> str:
        """Return one cell."""
        value = self.values[row]
        return "" if value == np.iinfo(self.values.dtype).min else str(int(value))

    def blank_rows(self) -> np.ndarray:
        """Return (n rows,) bool: rows without an answer."""
        return np.asarray(self.values == np.iinfo(self.values.dtype).min)

    def numbers(self) -> np.ndarray:
        """Return (n rows,) float64; blank cells are NaN."""
        numbers = self.values.astype(np.float64)
        numbers[self.blank_rows()] = np.nan
        return numbers


Column = CellColumn | WholeColumn


@dataclass(frozen=True, slots=True, eq=False)
class CellTable:
    """A table of cells as they stand in the file.

    Parameters
    ----------
    columns : tuple of CellColumn or WholeColumn
        One per column of the table.
    lines : array
        (n rows,) int: line of the file on which a row begins, from 1.
    """

    columns: tuple[Column, ...]
    lines: np.ndarray

    def keep(self, rows: np.ndarray) -> CellTable:
        """Return the table with the rows flagged in (n rows,) ``rows`` only."""
        if rows.all():
            return self
        return CellTable(tuple(c.keep(rows) for c in self.columns), self.lines[rows])

    def row(self, at: int) -> tuple[str, ...]:
        """Return the cells of one row."""
        return tuple(column.cell(at) for column in self.columns)


def _may_be_blank(cells: pa.Array) -> np.ndarray:
    """Return (cells,) bool: cells that are empty or begin with a space, told by one byte."""
    _, offsets, data = cells.buffers()
    starts = np.frombuffer(offsets, np.int32, len(cells) + 1, 4 * cells.offset)
    first = np.full(len(cells), 32, dtype=np.uint8)
    filled = np.diff(starts) > 0
    if filled.any():
        first[filled] = np.frombuffer(data, np.uint8)[starts[:-1][filled]]
    return np.isin(first, _SPACE_BYTES)


def as_flags(array: pa.Array) -> np.ndarray:
    """Return a boolean array of pyarrow as numpy's, missing as False."""
    if array.null_count:
        array = array.fill_null(False)
    return np.asarray(array.to_numpy(zero_copy_only=False), dtype=bool)


def column_of(chunks: pa.ChunkedArray) -> CellColumn:
    """Return a column from chunks that pyarrow has dictionary-encoded."""
    if chunks.num_chunks == 0:
        return CellColumn(pa.array([], pa.string()), np.zeros(0, np.uint8))
    unified = chunks.unify_dictionaries() if chunks.num_chunks > 1 else chunks
    distinct = unified.chunk(0).dictionary
    kind = np.min_scalar_type(max(len(distinct) - 1, 0))
    codes = [chunk.indices.to_numpy().astype(kind) for chunk in unified.chunks]
    return CellColumn(distinct, codes[0] if len(codes) == 1 else np.concatenate(codes))
