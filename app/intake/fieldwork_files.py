"""What comes out of intake: a fieldwork file, remarks on it, or one sentence of refusal."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd

from app.intake.reading import Reading

MOST_ROWS_NAMED = 200


class FieldworkFileError(ValueError):
    """The file cannot be read; the one sentence says why and what to do.

    Nothing half-read is kept: correct the file, or pass another reading, and try again.
    """


@dataclass(frozen=True, slots=True)
class Remark:
    """Something a person should know about the file.

    Parameters
    ----------
    code : str
        Stable name of the kind of remark, "duplicate_names".
    sentence : str
        What was found, where, and what to do.
    rows : tuple of int
        Lines of the file, counted from 1 as a text editor does; the first 200 at most.
    column : str
        Name of the column, or "" where several or none is meant.
    words : tuple of str
        Cells that keep a column from being numbers, for a person to declare missing.
    """

    code: str
    sentence: str
    rows: tuple[int, ...] = ()
    column: str = ""
    words: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class SetAsideRow:
    """A row that is not among the answers, kept as it stands in the file.

    Parameters
    ----------
    line : int
        Line of the file on which it begins, from 1.
    cells : tuple of str
        Its cells.
    reason : str
        "too many cells" or "left out".
    """

    line: int
    cells: tuple[str, ...]
    reason: str


@dataclass(frozen=True, slots=True, eq=False)
class FieldworkFile:
    """A fieldwork file as read.

    Parameters
    ----------
    file_name : str
        As uploaded.
    answers : DataFrame
        (n rows, columns of the file). Columns of numbers are float64; all others are text, with
        leading zeros and outer spaces kept. Blank cells are missing. Read only by agreement.
    question_texts : dict of str to str
        Column name to the text in further header rows; empty without such rows.
    remarks : tuple of Remark
        Every repair, and everything that needs a look.
    reading : Reading
        Every decision; pass it back, changed or not, to read the same bytes again.
    fingerprint : str
        SHA-256 of the bytes, 64 hexadecimal digits.
    lines : array
        (n rows,) int: the line of the file on which each row of answers begins; read only.
    set_aside : tuple of SetAsideRow
        Rows of the file that are not among the answers.
    """

    file_name: str
    answers: pd.DataFrame
    question_texts: dict[str, str]
    remarks: tuple[Remark, ...]
    reading: Reading
    fingerprint: str
    lines: np.ndarray
    set_aside: tuple[SetAsideRow, ...] = ()


def row_list(lines: np.ndarray | list[int]) -> tuple[int, ...]:
    """Return the first lines as plain ints, as many as a remark names."""
    return tuple(int(line) for line in lines[:MOST_ROWS_NAMED])


def lines_phrase(lines: np.ndarray | list[int]) -> str:
    """Return "line 4", "lines 4 and 9" or "lines 4, 9, 12 and 30 more"."""
    count = len(lines)
    named = [str(int(line)) for line in lines[:4]]
    if count == 1:
        return f"line {named[0]}"
    if count <= 4:
        return f"lines {', '.join(named[:-1])} and {named[-1]}"
    return f"lines {', '.join(named[:3])} and {count - 3:,} more"


def count_phrase(count: int, one: str, many: str) -> str:
    """Return "1 row" or "1,204 rows"."""
    return f"{count:,} {one if count == 1 else many}"


def name_list(names: list[str]) -> str:
    """Return up to four names in quotation marks and how many more there are."""
    named = ", ".join(f"“{name}”" for name in names[:4])
    return named if len(names) <= 4 else f"{named} and {len(names) - 4:,} more"


def short(text: str, length: int = 60) -> str:
    """Return the text on one line, cut to a readable length."""
    line = " ".join(text.split())
    return line if len(line) <= length else f"{line[: length - 1]}…"
