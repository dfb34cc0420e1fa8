"""What stands between cells and around them, found over many rows of the file."""

from __future__ import annotations

import csv
import io
import math
import re
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from app.intake.reading import Reading

NAMES = {",": "comma", ";": "semicolon", "\t": "tab", "|": "vertical bar"}

_CANDIDATES = ("\t", ";", "|", ",")
_SEP_LINE = re.compile(r"\"?sep=([^\w\r\n\x00\\\"'])\"?(?=\r|\n|$)", re.IGNORECASE)
_SINGLE_QUOTED = re.compile(r"(?:^|[,;\t|])'[^'\r\n]*'(?=[,;\t|\r\n]|$)", re.MULTILINE)
_BACKSLASH_QUOTE = re.compile(r"[^,;\t|\r\n\\]\\\"[^,;\t|\r\n\"]")
_DOUBLED_QUOTE = re.compile(r"[^,;\t|\r\n\"]\"\"[^,;\t|\r\n\"]")
_NUMBER = re.compile(r"\s*[-+−]?\d[\d.,]*\s*")
_MOST_RECORDS = 2_000


@dataclass(frozen=True, slots=True)
class Record:
    """One row of cells and the line of the file on which it begins and ends, from 1."""

    line: int
    last_line: int
    cells: list[str]


@dataclass(frozen=True, slots=True)
class Dialect:
    """How rows are cut into cells.

    Parameters
    ----------
    delimiter, quote, escape : str
        As in ``Reading``.
    sep_line : bool
        Whether the first line names the delimiter.
    evidence : tuple of str
        Sentences.
    """

    delimiter: str
    quote: str
    escape: str
    sep_line: bool
    evidence: tuple[str, ...] = ()


def find_dialect(sample: str, reading: Reading) -> Dialect:
    """Return how the rows are cut; what the reading already says is taken as it is.

    Parameters
    ----------
    sample : str
        The first part of the file, whole lines.
    reading : Reading
        Fields that are None are found out.
    """
    sep = _SEP_LINE.match(sample)
    sep_line = sep is not None if reading.sep_line is None else reading.sep_line
    body = _after_first_line(sample) if sep_line else sample
    quote = _quote(body) if reading.quote is None else reading.quote
    escape = _escape(body) if reading.escape is None else reading.escape
    if reading.delimiter is not None:
        delimiter, why = reading.delimiter, "as told"
    elif sep_line and sep is not None:
        delimiter, why = sep.group(1), "as the first line of the file says"
    else:
        delimiter, why = _delimiter(body, quote, escape)
    return Dialect(delimiter, quote, escape, sep_line, _evidence(delimiter, quote, escape, why))


def records(text: str, dialect: Dialect, first_line: int = 1) -> Iterator[Record]:
    """Yield the rows of a text that are not empty lines.

    Raises
    ------
    csv.Error
        When a cell is longer than 131,072 characters.
    """
    reader = csv.reader(io.StringIO(text, newline=""), **csv_options(dialect))
    before = 0
    for cells in reader:
        if cells:
            yield Record(first_line + before, first_line + reader.line_num - 1, cells)
        before = reader.line_num


def csv_options(dialect: Dialect) -> dict[str, Any]:
    """Return the keywords of ``csv.reader`` for a dialect."""
    options: dict[str, Any] = {"delimiter": dialect.delimiter}
    if not dialect.quote:
        return options | {"quoting": csv.QUOTE_NONE}
    options["quotechar"] = dialect.quote
    if dialect.escape:
        options |= {"escapechar": dialect.escape, "doublequote": False}
    return options


def common_width(widths: list[int]) -> tuple[int, float]:
    """Return the most common number of cells, and the share of rows that have it."""
    if not widths:
        return 0, 0.0
    width, count = max(Counter(widths).items(), key=lambda item: (item[1], item[0]))
    return width, count / len(widths)


def _delimiter(body: str, quote: str, escape: str) -> tuple[str, str]:
    scored = [_score(body, Dialect(d, quote, escape, False)) for d in _CANDIDATES]
    if max(scored)[0] < 0.3 and quote:  # a quotation mark left open hides the rows behind it
        scored = [_score(body, Dialect(d, "", "", False)) for d in _CANDIDATES]
    best = max(range(len(_CANDIDATES)), key=lambda i: (scored[i][0], -i))
    score, width, share = scored[best]
    if score == 0:
        return ",", "no other character cuts the rows into more than one cell"
    return (
        _CANDIDATES[best],
        f"{share:.0%} of the rows looked at have {width:,} cells with it",
    )


def _score(body: str, dialect: Dialect) -> tuple[float, int, float]:
    """Return a score, the common width, and the share of rows that have it."""
    try:
        rows = [r.cells for r, _ in zip(records(body, dialect), range(_MOST_RECORDS), strict=False)]
    except csv.Error:
        return 0.0, 0, 0.0
    widths = [len(row) for row in rows]
    width, share = common_width([w for w in widths if w > 1])
    if width < 2:
        return 0.0, 0, 0.0
    share *= sum(w > 1 for w in widths) / len(widths)
    header = 1.0 if _has_header(rows, width) else 0.5
    return share * header * (1 + 0.1 * math.log2(width)), width, share


def _has_header(rows: list[list[str]], width: int) -> bool:
    """Whether the first row of the common width, near the top, names columns."""
    first = next((row for row in rows[:10] if len(row) == width), None)
    return first is not None and not any(_NUMBER.fullmatch(cell) for cell in first)


def _quote(body: str) -> str:
    """Return the character around cells: the double mark unless only single ones do the job."""
    if '"' in body:
        return '"'
    lines = body.count("\n") + body.count("\r") + 1
    found = sum(1 for _ in zip(_SINGLE_QUOTED.finditer(body), range(lines), strict=False))
    return "'" if found >= 3 and found >= lines / 2 else '"'


def _escape(body: str) -> str:
    """Return the backslash where it, and not doubling, stands before inner quotation marks."""
    if "\\" not in body or _DOUBLED_QUOTE.search(body):
        return ""
    return "\\" if _BACKSLASH_QUOTE.search(body) else ""


def _after_first_line(text: str) -> str:
    match = re.search(r"\r\n|\n|\r", text)
    return text[match.end() :] if match else ""


def _evidence(delimiter: str, quote: str, escape: str, why: str) -> tuple[str, ...]:
    name = NAMES.get(delimiter, delimiter)
    sentences = [f"Cells are separated by a {name}: {why}."]
    if quote == "'":
        sentences.append("Single quotation marks stand around cells.")
    if escape:
        sentences.append("A backslash stands before quotation marks inside cells.")
    return tuple(sentences)
