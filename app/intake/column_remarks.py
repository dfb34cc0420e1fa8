"""What a person should know about single columns, told from their different cells."""

from __future__ import annotations

import numpy as np
import pyarrow as pa  # type: ignore[import-untyped]
import pyarrow.compute as pc  # type: ignore[import-untyped]

from app.intake.cell_table import as_flags
from app.intake.column_values import NumberMarks, ProfiledColumn
from app.intake.fieldwork_files import Remark, count_phrase, name_list, row_list, short
from app.intake.number_forms import Form, number_flags
from app.intake.reading import ColumnReading

_MANY_NUMBERS = 0.9
_MOST_WORDS = 20
_DIGITS = r"^\s*[0-9]+\s*$"
_DAMAGED = r"^\s*[0-9][.,][0-9]+[eE]\+[0-9]{2}\s*$"
_SIGN = "(?:[%€$£¥<>≤≥~+]|EUR|USD|GBP|CHF)"
_SIGNED = f"^\\s*(?:{_SIGN}\\s*[-−]?[0-9][0-9.,' ]*|[-−]?[0-9][0-9.,' ]*{_SIGN})\\s*$"
_MARK_NAMES = {".": "point", ",": "comma", " ": "space", "'": "apostrophe"}


def column_remarks(
    column: ProfiledColumn, marks: NumberMarks, told: ColumnReading | None, lines: np.ndarray
) -> tuple[Remark, ...]:
    """Return the remarks on one column.

    Parameters
    ----------
    column : ProfiledColumn
        With its final form.
    marks : NumberMarks
        Of the whole file.
    told : ColumnReading or None
        What a person decided about it.
    lines : array
        (n rows,) lines of the file.
    """
    form = column.form
    if form.form is Form.DOUBTFUL:
        return (_doubtful(column),)
    if form.form is Form.GROUPED:
        return (_grouped(column),)
    if form.form is Form.DECIMAL and form.decimal_mark != (marks.decimal_mark or "."):
        return (_other_mark(column, marks),)
    if form.form is not Form.WORDS or not len(column.answered):
        return ()
    if told is not None and told.kind == "text":
        return ()
    return _on_text(column, marks, told, lines)


def control_remark(columns: list[ProfiledColumn], lines: np.ndarray) -> tuple[Remark, ...]:
    """Return the remark on cells from which control characters were removed."""
    touched = [column for column in columns if column.cleaned.any()]
    if not touched:
        return ()
    flags = [column.cells.rows_with(column.cleaned) for column in touched]
    count = int(sum(flag.sum() for flag in flags))
    where = name_list([column.name for column in touched])
    return (
        Remark(
            "control_characters",
            "Unreadable control characters were removed from "
            f"{count_phrase(count, 'cell', 'cells')} in {where}.",
            rows=row_list(lines[np.logical_or.reduce(flags)]),
            column=touched[0].name if len(touched) == 1 else "",
        ),
    )


def code_evidence(columns: list[ProfiledColumn]) -> tuple[str, ...]:
    """Return which columns of digits stay text, and why."""
    digits = [c for c in columns if c.form.form is Form.WORDS and _all(c.answered, _DIGITS)]
    zeros = [c.name for c in digits if not _all(c.answered, r"^\s*[0-9]{16,}\s*$")]
    long = [c.name for c in digits if c.name not in zeros]
    found = []
    if zeros:
        found.append(f"Leading zeros or very long numbers make {name_list(zeros)} text.")
    if long:
        found.append(f"Numbers of more than 15 digits make {name_list(long)} text.")
    return tuple(found)


def _on_text(
    column: ProfiledColumn, marks: NumberMarks, told: ColumnReading | None, lines: np.ndarray
) -> tuple[Remark, ...]:
    cells = column.answered
    damaged = as_flags(pc.match_substring_regex(cells, _DAMAGED))
    if damaged.any():
        return (_damaged(column, cells.filter(pa.array(damaged))),)
    if _all(cells, _DIGITS):
        return ()
    signed = as_flags(pc.match_substring_regex(cells, _SIGNED))
    numbers = number_flags(cells, marks.decimal_mark)
    if signed.any() and (signed | numbers).all():
        return (_signs(column, cells.filter(pa.array(signed))),)
    return _words_among_numbers(column, numbers, told, lines)


def _words_among_numbers(
    column: ProfiledColumn, numbers: np.ndarray, told: ColumnReading | None, lines: np.ndarray
) -> tuple[Remark, ...]:
    """Name the words of a column that is nearly all numbers."""
    answered = ~(column.blank | column.word)
    counts = column.cells.counts()[answered]
    share = counts[numbers].sum() / counts.sum()
    if share < _MANY_NUMBERS and not (told is not None and told.kind == "number"):
        return ()
    flags = np.zeros(len(answered), dtype=bool)
    flags[np.flatnonzero(answered)[~numbers]] = True
    words = [str(w).strip() for w in column.cells.distinct.filter(pa.array(flags)).to_pylist()]
    words = list(dict.fromkeys(words))
    rows = lines[column.cells.rows_with(flags)]
    sentence = (
        f"“{column.name}” stays text: {_percent(share)} of its answers are numbers, but "
        f"{count_phrase(len(rows), 'cell holds', 'cells hold')} {name_list(words)}. Say which of "
        "these stand for no answer, and the column becomes numbers."
    )
    named = tuple(words[:_MOST_WORDS])
    return (Remark("words_among_numbers", sentence, row_list(rows), column.name, named),)


def _percent(share: float) -> str:
    """Return a share that only rounds to 100 % as the nearest below it."""
    return f"{min(np.floor(share * 1000) / 10, 99.9):g} %"


def _doubtful(column: ProfiledColumn) -> Remark:
    example = _example(column, _MARK_IN[column.form.mark])
    mark = column.form.mark
    sentence = (
        f"“{column.name}” stays text: {example} may be {example.replace(mark, '')} or "
        f"{example.replace(mark, '.')}, and nothing in the file settles it. Say which mark "
        "stands before decimals."
    )
    return Remark("doubtful_numbers", sentence, column=column.name)


_MARK_IN = {".": r"\.", ",": ",", " ": r"\d[ \x{00a0}\x{202f}\x{2009}]\d", "'": "['’]"}


def _grouped(column: ProfiledColumn) -> Remark:
    form = column.form
    example = _example(column, _MARK_IN[form.thousands_mark])
    name = _MARK_NAMES[form.thousands_mark]
    return Remark(
        "grouped_numbers",
        f"In “{column.name}” the {name} was read as a thousands mark, as in {example}: every "
        "number fits.",
        column=column.name,
    )


def _other_mark(column: ProfiledColumn, marks: NumberMarks) -> Remark:
    own = _MARK_NAMES[column.form.decimal_mark]
    usual = _MARK_NAMES.get(marks.decimal_mark, "point")
    example = _example(column, _MARK_IN[column.form.decimal_mark])
    return Remark(
        "other_decimal_mark",
        f"“{column.name}” writes decimals with a {own} ({example}) where the file uses a {usual}; "
        f"the {own} was read as decimal mark there.",
        column=column.name,
    )


def _damaged(column: ProfiledColumn, cells: pa.Array) -> Remark:
    return Remark(
        "damaged_codes",
        f"“{column.name}” holds {short(cells[0].as_py())}: a spreadsheet has rounded long codes, "
        "and the lost digits cannot be restored here. Export the file again without opening it "
        "in a spreadsheet.",
        column=column.name,
    )


def _signs(column: ProfiledColumn, cells: pa.Array) -> Remark:
    return Remark(
        "numbers_with_signs",
        f"“{column.name}” stays text because its numbers carry signs, as in "
        f"{short(cells[0].as_py())}: export plain numbers if you need an average.",
        column=column.name,
    )


def _example(column: ProfiledColumn, pattern: str) -> str:
    flags = as_flags(pc.match_substring_regex(column.answered, pattern))
    cells = column.answered.filter(pa.array(flags)) if flags.any() else column.answered
    return short(str(cells[0].as_py()).strip())


def _all(cells: pa.Array, pattern: str) -> bool:
    return bool(len(cells)) and bool(as_flags(pc.match_substring_regex(cells, pattern)).all())
