"""Reading a table row by row, where rows are uneven or quotation marks went wrong."""

from __future__ import annotations

import csv
import io
import re
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field

import numpy as np
import pyarrow as pa  # type: ignore[import-untyped]

from app.intake.cell_table import CellTable, column_of
from app.intake.delimiters import Dialect, csv_options
from app.intake.fieldwork_files import (
    FieldworkFileError,
    Remark,
    SetAsideRow,
    count_phrase,
    lines_phrase,
    row_list,
    short,
)

_CHUNK = 5_000
_END = "end of the file"


@dataclass(frozen=True, slots=True, eq=False)
class CarefulTable:
    """A table read row by row.

    Parameters
    ----------
    table : CellTable
        Rows with as many cells as the table has columns, short ones padded with blanks.
    set_aside : tuple of SetAsideRow
        Rows with too many cells.
    remarks : tuple of Remark
        What was repaired.
    """

    table: CellTable
    set_aside: tuple[SetAsideRow, ...]
    remarks: tuple[Remark, ...]


@dataclass(slots=True)
class _Found:
    """Lines with each kind of trouble, filled while reading."""

    blank: list[int] = field(default_factory=list)
    short: list[int] = field(default_factory=list)
    long: list[SetAsideRow] = field(default_factory=list)
    trailing: list[int] = field(default_factory=list)
    quotes: list[int] = field(default_factory=list)


def parse_carefully(
    text: str, first_line: int, dialect: Dialect, width: int, *, keep_long: bool, file_name: str
) -> CarefulTable:
    """Parse a table whose rows may be uneven.

    Parameters
    ----------
    text : str
        The rows of answers.
    first_line : int
        Line of the file on which the text begins, from 1.
    dialect : Dialect
        How rows are cut.
    width : int
        Columns the header names.
    keep_long : bool
        Whether cells beyond the last column get columns of their own, or their rows are set aside.
    file_name : str
        For sentences.

    Raises
    ------
    FieldworkFileError
        When a quotation mark is opened and never properly closed; names the line.
    """
    found = _Found()
    rows = [r for r in _rows(text, first_line, dialect, file_name, found) if _filled(r, found)]
    width = _table_width([len(cells) for _, cells in rows], width, rows, keep_long)
    even = [(line, fitted) for line, cells in rows if (fitted := _fit(line, cells, width, found))]
    chunks: list[list[pa.Array]] = [[] for _ in range(width)]
    for start in range(0, len(even), _CHUNK):
        part = [cells for _, cells in even[start : start + _CHUNK]]
        for i, column in enumerate(zip(*part, strict=True)):
            chunks[i].append(pa.array(column, pa.string()).dictionary_encode())
    kind = pa.dictionary(pa.int32(), pa.string())
    columns = tuple(column_of(pa.chunked_array(parts, kind)) for parts in chunks)
    lines = np.array([line for line, _ in even], dtype=np.int64)
    return CarefulTable(CellTable(columns, lines), tuple(found.long), _remarks(found, width))


def _rows(
    text: str, first_line: int, dialect: Dialect, file_name: str, found: _Found
) -> Iterator[tuple[int, list[str]]]:
    """Yield the line and the cells of each row, checking quotation marks on the way."""
    raw: list[str] = []
    end = "" if text.endswith(("\n", "\r")) else "\n"
    source = io.StringIO(f"{text}{end}{_END}", newline="")
    reader = csv.reader(_copied(source, raw), **csv_options(dialect))
    stray = _stray_quote(dialect)
    line = first_line
    try:
        for cells in reader:
            if cells == [_END]:
                return
            if raw[-1] == _END:
                break
            if stray is not None and (len(raw) > 1 or stray.search(raw[0])):
                _check_quotes("".join(raw), line, len(raw), dialect, file_name, found)
            yield line, cells
            line += len(raw)
            raw.clear()
    except csv.Error as error:
        raise _unclosed(file_name, line, "".join(raw), dialect) from error
    raise _unclosed(file_name, line, "".join(raw), dialect)


def _copied(source: io.StringIO, raw: list[str]) -> Iterator[str]:
    for physical in source:
        raw.append(physical)
        yield physical


def _stray_quote(dialect: Dialect) -> re.Pattern[str] | None:
    """Return the pattern of a quotation mark that closes a cell before its end."""
    if not dialect.quote or dialect.escape:
        return None
    mark, cut = re.escape(dialect.quote), re.escape(dialect.delimiter)
    return re.compile(f"[^{cut}{mark}\r\n]{mark}[^{cut}{mark}\r\n]")


def _check_quotes(
    raw: str, line: int, length: int, dialect: Dialect, file_name: str, found: _Found
) -> None:
    """Read one row by the letter of the rule: a closing mark stands before a delimiter."""
    reader = csv.reader(
        io.StringIO(raw, newline=""),
        strict=True,
        **csv_options(dialect),
    )
    try:
        next(reader)
    except csv.Error:
        if length > 1:
            raise _unclosed(file_name, line, raw, dialect) from None
        found.quotes.append(line)


def _unclosed(file_name: str, line: int, raw: str, dialect: Dialect) -> FieldworkFileError:
    """Return the refusal, with the line on which the mark stands."""
    at = raw[: _opening(raw, dialect)]
    line += len(re.findall("\r\n|\n|\r", at))
    return FieldworkFileError(
        f"{file_name}: the quotation mark opened in line {line:,} is not closed where its cell "
        "ends: correct that line, or read the file without quotation marks."
    )


def _opening(raw: str, dialect: Dialect) -> int:
    """Return where the first cell begins whose closing mark is missing or misplaced."""
    mark, cut = re.escape(dialect.quote), re.escape(dialect.delimiter)
    inside = rf"\\.|[^{mark}\\]" if dialect.escape else f"{mark}{mark}|[^{mark}]"
    cell = re.compile(
        f"(?:{mark}(?:{inside})*{mark}|(?!{mark})[^{cut}\r\n]*)(?:{cut}|[\r\n]+)", re.S
    )
    at = 0
    while (match := cell.match(raw, at)) is not None:
        at = match.end()
    return at


def _filled(row: tuple[int, list[str]], found: _Found) -> bool:
    line, cells = row
    if any(cells) and any(cell.strip() for cell in cells):
        return True
    found.blank.append(line)
    return False


def _table_width(
    widths: list[int], header: int, rows: list[tuple[int, list[str]]], keep_long: bool
) -> int:
    """Return the number of columns: what most rows have, where that is more than are named."""
    counts = Counter(widths)
    if not counts:
        return header
    if keep_long:
        return max(header, max(_used(cells) for _, cells in rows))
    usual, count = counts.most_common(1)[0]
    return usual if usual > header and 2 * count > len(widths) else header


def _used(cells: list[str]) -> int:
    """Return the number of cells up to the last one that holds something."""
    return max((i for i, cell in enumerate(cells, start=1) if cell.strip()), default=0)


def _fit(line: int, cells: list[str], width: int, found: _Found) -> list[str] | None:
    """Return exactly ``width`` cells, or None for a row that is set aside."""
    if len(cells) == width:
        return cells
    if len(cells) < width:
        found.short.append(line)
        return cells + [""] * (width - len(cells))
    if _used(cells) > width:
        found.long.append(SetAsideRow(line, tuple(cells), "too many cells"))
        return None
    found.trailing.append(line)
    return cells[:width]


def _remarks(found: _Found, width: int) -> tuple[Remark, ...]:
    long_lines = [row.line for row in found.long]
    told = (
        ("blank_lines", found.blank, _blank_sentence(found.blank)),
        ("short_rows", found.short, _short_sentence(found.short, width)),
        ("long_rows", long_lines, _long_sentence(found.long, width)),
        ("trailing_delimiters", found.trailing, _trailing_sentence(found.trailing)),
        ("stray_quotes", found.quotes, _quotes_sentence(found.quotes)),
    )
    return tuple(Remark(code, text, rows=row_list(lines)) for code, lines, text in told if lines)


def _blank_sentence(lines: list[int]) -> str:
    return f"{count_phrase(len(lines), 'blank row', 'blank rows')} left out." if lines else ""


def _short_sentence(lines: list[int], width: int) -> str:
    if not lines:
        return ""
    return (
        f"{count_phrase(len(lines), 'row has', 'rows have')} fewer than {width:,} cells "
        f"({lines_phrase(lines)}); the cells at the end count as missing: check that none is lost."
    )


def _long_sentence(rows: list[SetAsideRow], width: int) -> str:
    if not rows:
        return ""
    lines = [row.line for row in rows]
    cells = short(" | ".join(rows[0].cells), 80)
    return (
        f"{count_phrase(len(rows), 'row has', 'rows have')} more than {width:,} cells "
        f"({lines_phrase(lines)}) and {'is' if len(rows) == 1 else 'are'} set aside, because "
        "answers may stand under the wrong question: put quotation marks around answers that "
        f"hold the delimiter. Line {lines[0]:,} reads: {cells}"
    )


def _trailing_sentence(lines: list[int]) -> str:
    if not lines:
        return ""
    return (
        f"{count_phrase(len(lines), 'row ends', 'rows end')} with empty cells beyond the last "
        f"column ({lines_phrase(lines)}); they were dropped."
    )


def _quotes_sentence(lines: list[int]) -> str:
    if not lines:
        return ""
    return (
        f"Quotation marks inside an answer are not doubled ({lines_phrase(lines)}), so they "
        "were lost there: compare those answers with the source."
    )
