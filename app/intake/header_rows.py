"""Where the table begins, how many header rows it has, and which of them names the columns."""

from __future__ import annotations

import re
from dataclasses import dataclass

from app.intake.delimiters import Record, common_width
from app.intake.fieldwork_files import Remark, count_phrase, row_list, short
from app.intake.reading import Reading

_NUMBER = re.compile(r"\s*[-+−]?\d[\d.,'’   ]*%?\s*")
_DIGIT = re.compile(r"[0-9]")
_MOST_TITLE_LINES = 30
_MOST_HEADER_ROWS = 3
_ROWS_BELOW = 100


@dataclass(frozen=True, slots=True)
class HeaderRows:
    """The head of a table.

    Parameters
    ----------
    rows : tuple of Record
        Header rows, none when the first row already holds answers.
    name_row : int
        Which of them names the columns, from 1; 0 for none.
    lines_above : int
        Lines above the first of them.
    width : int
        Number of columns.
    evidence : tuple of str
        Sentences.
    remarks : tuple of Remark
        Lines skipped, no header.
    """

    rows: tuple[Record, ...]
    name_row: int
    lines_above: int
    width: int
    evidence: tuple[str, ...]
    remarks: tuple[Remark, ...]


def find_header(rows: list[Record], reading: Reading) -> HeaderRows:
    """Return the head of a table.

    Parameters
    ----------
    rows : list of Record
        The first rows of the file, blank ones left out, at least one.
    reading : Reading
        What it says is taken as it is.
    """
    width, _ = common_width([len(row.cells) for row in rows])
    start = _first_table_row(rows, width, reading)
    table = rows[start:]
    count = reading.header_rows
    if count is None:
        count = _count_header_rows([row.cells for row in table[: _ROWS_BELOW + 3]])
    header = tuple(table[:count])
    name_row = _name_row(header) if reading.name_row is None else reading.name_row
    name_row = min(max(name_row, 1), len(header)) if header else 0
    lines_above = reading.lines_above
    if lines_above is None:
        lines_above = table[0].line - 1
    remarks = _remarks(rows[:start], header, table)
    return HeaderRows(
        header,
        name_row,
        lines_above,
        max([width, *(_used(row.cells) for row in header)]),
        _evidence(header, name_row, table),
        remarks,
    )


def _used(cells: list[str]) -> int:
    return max((i for i, cell in enumerate(cells, start=1) if cell.strip()), default=0)


def _first_table_row(rows: list[Record], width: int, reading: Reading) -> int:
    """Return how many of the rows stand above the table."""
    if reading.lines_above is not None:
        above = sum(row.line <= reading.lines_above for row in rows)
        return min(above, len(rows) - 1)
    start = 0
    while start < min(_MOST_TITLE_LINES, len(rows) - 1) and _is_title(rows, start, width):
        start += 1
    return start


def _is_title(rows: list[Record], at: int, width: int) -> bool:
    """Whether a row is a title or note: far fewer filled cells than the table has columns."""
    if width < 2:
        return False
    row = rows[at].cells
    filled = sum(bool(cell.strip()) for cell in row)
    if filled == 0:
        return True
    if filled == 1 and (width > 2 or len(row) == 1):
        later = max(sum(bool(c.strip()) for c in r.cells) for r in rows[at + 1 : at + 30])
        return later > 1
    gap = rows[at + 1].line > rows[at].last_line + 1
    return len(row) < width and (gap or filled <= width // 3)


def _count_header_rows(rows: list[list[str]]) -> int:
    if _holds_answers(rows[0]) and len(rows) > 1:
        return 0
    for count in range(min(_MOST_HEADER_ROWS, len(rows) - 1), 1, -1):
        below = rows[count:]
        if all(_is_text_row(rows[0], row, below) for row in rows[1:count]):
            return count
    return 1


def _holds_answers(row: list[str]) -> bool:
    """Whether a first row is numbers throughout, other than 1, 2, 3 ... as names."""
    filled = [cell.strip() for cell in row if cell.strip()]
    if not filled or not all(_NUMBER.fullmatch(cell) for cell in filled):
        return False
    counting = [str(i) for i in range(1, len(row) + 1)]
    return len(row) < 3 or filled != counting


def _is_text_row(names: list[str], row: list[str], below: list[list[str]]) -> bool:
    """Whether a row holds texts over the columns and not answers of a first respondent."""
    filled = {i: cell.strip() for i, cell in enumerate(row) if cell.strip()}
    if not filled or any(_NUMBER.fullmatch(cell) for cell in filled.values()):
        return False
    if len(set(filled.values())) < 0.5 * len(filled) or _answers_alike(filled, below):
        return False
    numeric = _numeric_columns(below)
    if numeric:
        over_numbers = [filled[i] for i in numeric if i in filled]
        return len(over_numbers) >= 0.5 * len(numeric) and _are_texts(over_numbers)
    return _reads_like_questions(names, filled, below)


def _answers_alike(filled: dict[int, str], below: list[list[str]]) -> bool:
    """Whether a cell occurs again below it, or has the digits of those below (R001, R002)."""
    for i, cell in filled.items():
        cells = [row[i].strip() for row in below if i < len(row) and row[i].strip()]
        shapes = {_DIGIT.sub("0", other) for other in cells}
        same_shape = len(shapes) == 1 and _DIGIT.sub("0", cell) in shapes and "0" in min(shapes)
        if cell in cells or same_shape:
            return True
    return False


def _are_texts(cells: list[str]) -> bool:
    """Whether cells over columns of numbers are texts, not a refusal or two."""
    if any("?" in cell or len(cell) >= 20 for cell in cells):
        return True
    return len(cells) >= 3 and len(set(cells)) >= 0.8 * len(cells)


def _numeric_columns(below: list[list[str]]) -> list[int]:
    width = max(len(row) for row in below)
    found = []
    for i in range(width):
        cells = [row[i] for row in below if i < len(row) and row[i].strip()]
        if cells and all(_NUMBER.fullmatch(cell) for cell in cells):
            found.append(i)
    return found


def _reads_like_questions(names: list[str], filled: dict[int, str], below: list[list[str]]) -> bool:
    """Tell question texts from answers where no column holds numbers."""
    answers = {(i, cell.strip()) for row in below for i, cell in enumerate(row) if cell.strip()}
    if not answers or len(below) < 3 or any(item in answers for item in filled.items()):
        return False
    length = sum(map(len, filled.values())) / len(filled)
    usual = sum(len(cell) for _, cell in answers) / len(answers)
    codes = sum(" " not in name.strip() for name in names) >= 0.9 * len(names)
    return codes and length >= 12 and length >= 1.5 * usual


def _name_row(header: tuple[Record, ...]) -> int:
    """Return the first row that is unique codes without spaces, from 1; else the first row."""
    for number, row in enumerate(header, start=1):
        cells = [cell.strip() for cell in row.cells]
        while cells and not cells[-1]:
            cells.pop()
        short_names = all(cell and " " not in cell and len(cell) <= 32 for cell in cells)
        if short_names and len(set(cells)) == len(cells):
            return number
    return 1


def _evidence(header: tuple[Record, ...], name_row: int, table: list[Record]) -> tuple[str, ...]:
    if not header:
        return ("The first row holds numbers throughout, so the table has no header row.",)
    if len(header) == 1:
        return (f"Line {header[0].line:,} names the columns.",)
    named = header[name_row - 1].line
    texts = [f"{row.line:,}" for n, row in enumerate(header, start=1) if n != name_row]
    first = (
        f" Answers begin in line {table[len(header)].line:,}." if len(table) > len(header) else ""
    )
    return (
        f"Line {named:,} names the columns and line {' and '.join(texts)} holds texts: "
        f"no such cell occurs among the answers.{first}",
    )


def _remarks(
    above: list[Record], header: tuple[Record, ...], table: list[Record]
) -> tuple[Remark, ...]:
    found = []
    if above:
        words = [c for row in above for c in row.cells if c.strip()]
        text = f" (“{short(' '.join(words))}”)" if words else ""
        found.append(
            Remark(
                "lines_above",
                f"{count_phrase(len(above), 'line', 'lines')} above the table{text} "
                "left out: it begins in "
                f"line {table[0].line:,}.",
                rows=row_list([row.line for row in above]),
            )
        )
    if not header:
        found.append(
            Remark(
                "no_header",
                "No row names the columns, so they are named by position: add a header row, "
                "or say which row holds the names.",
            )
        )
    return tuple(found)
