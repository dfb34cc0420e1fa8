"""Which columns are numbers, and their values; every other column is text as it stands."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, replace

import numpy as np
import pandas as pd
import pyarrow as pa  # type: ignore[import-untyped]
import pyarrow.compute as pc  # type: ignore[import-untyped]

from app.intake.cell_table import CellColumn, Column, WholeColumn, as_flags
from app.intake.number_forms import WORDS, Form, NumberForm, fits, number_form, to_numbers
from app.intake.reading import ColumnReading, Reading

_CONTROLS = r"[\x00-\x08\x0b\x0c\x0e-\x1f\x7f\x{feff}]"


@dataclass(frozen=True, slots=True, eq=False)
class ProfiledColumn:
    """A column, what its cells are and how its numbers are written.

    Parameters
    ----------
    name : str
        Name of the column.
    cells : CellColumn
        Cells without control characters.
    blank : array
        (distinct,) bool: cells that are missing answers.
    word : array
        (distinct,) bool: cells a person declared to be no numbers.
    form : NumberForm
        How its numbers are written; words for text.
    cleaned : array
        (distinct,) bool: cells from which control characters were removed.
    whole : WholeColumn or None
        The numbers of a column that was read as such; ``cells`` is empty then.
    """

    name: str
    cells: CellColumn
    blank: np.ndarray
    word: np.ndarray
    form: NumberForm
    cleaned: np.ndarray
    whole: WholeColumn | None = None

    @property
    def empty(self) -> bool:
        """Whether nobody answered."""
        return bool(self.blank.all()) and self.whole is None

    @property
    def answered(self) -> pa.Array:
        """The different cells that are answers."""
        return self.cells.distinct.filter(pa.array(~(self.blank | self.word)))


@dataclass(frozen=True, slots=True)
class NumberMarks:
    """Marks of the file as a whole.

    Parameters
    ----------
    decimal_mark, thousands_mark : str
        As in ``Reading``.
    known : frozenset of str
        Decimal marks that some column, or a person, proves.
    evidence : str
        Why.
    """

    decimal_mark: str
    thousands_mark: str
    known: frozenset[str]
    evidence: str


_NO_CELLS = CellColumn(pa.array([], pa.string()), np.zeros(0, np.uint8))
_NO_FLAGS = np.zeros(0, dtype=bool)


def profile_column(name: str, cells: Column, told: ColumnReading | None) -> ProfiledColumn:
    """Return what a column holds, by its cells alone."""
    if isinstance(cells, WholeColumn):
        form = NumberForm(Form.WHOLE)
        return ProfiledColumn(name, _NO_CELLS, _NO_FLAGS, _NO_FLAGS, form, _NO_FLAGS, cells)
    blank = cells.blank()
    no_word = np.zeros(len(blank), dtype=bool)
    column = ProfiledColumn(name, cells, blank, no_word, WORDS, no_word)
    if told is not None:
        words = pa.array([word.strip() for word in told.words], pa.string())
        word = as_flags(pc.is_in(pc.utf8_trim_whitespace(cells.distinct), words))
        column = replace(column, word=word & ~blank)
    answered = column.answered
    if not len(answered):
        return column
    form = number_form(answered)
    if form.form is not Form.WORDS:
        return replace(column, form=form)
    return _without_controls(column)


def find_marks(columns: list[ProfiledColumn], reading: Reading, delimiter: str) -> NumberMarks:
    """Return the marks of the file, from all columns whose numbers prove them."""
    forms = [column.form for column in columns]
    proofs = Counter(f.decimal_mark for f in forms if f.decimal_mark)
    proofs.update(_OPPOSITE[f.thousands_mark] for f in forms if f.thousands_mark in _OPPOSITE)
    known = set(proofs)
    if reading.decimal_mark is not None:
        decimal = reading.decimal_mark
        known |= {decimal} - {""}
        evidence = "The decimal mark is as told."
    elif proofs:
        decimal = max(proofs, key=lambda mark: (proofs[mark], mark == "."))
        evidence = _mark_evidence(decimal, proofs[decimal])
    else:
        decimal, evidence = _unproved_mark(forms, delimiter)
    if delimiter == "," and not known and decimal == ".":
        known = {"."}
    thousands = reading.thousands_mark
    if thousands is None:
        thousands = _thousands(forms, decimal, known)
    return NumberMarks(decimal, thousands, frozenset(known), evidence)


_OPPOSITE = {".": ",", ",": "."}
_MARK_NAMES = {".": "point", ",": "comma"}


def _mark_evidence(mark: str, columns: int) -> str:
    proved = "1 column proves it" if columns == 1 else f"{columns:,} columns prove it"
    return f"The decimal mark is a {_MARK_NAMES[mark]}: {proved}."


def _unproved_mark(forms: list[NumberForm], delimiter: str) -> tuple[str, str]:
    doubtful = [f for f in forms if f.form is Form.DOUBTFUL]
    if not doubtful:
        return ".", "No number has a decimal part; a point would be read as decimal mark."
    if delimiter == "," and all(f.mark == "." for f in doubtful):
        return ".", "The decimal mark is a point, as usual in a file cut by commas."
    return "", "Nothing in the file settles whether 1,234 is 1234 or 1.234."


def _thousands(forms: list[NumberForm], decimal: str, known: set[str]) -> str:
    used = Counter(f.thousands_mark for f in forms if f.thousands_mark)
    used.update(
        f.mark
        for f in forms
        if f.form is Form.DOUBTFUL and decimal and f.mark != decimal and f.mark not in known
    )
    return max(used, key=lambda mark: (used[mark], mark)) if used else ""


def settle_form(
    column: ProfiledColumn, marks: NumberMarks, told: ColumnReading | None
) -> ProfiledColumn:
    """Return the column with its final form: doubt resolved by the file, or by a person."""
    if told is not None and told.kind == "text":
        return replace(column, form=WORDS)
    if told is not None and told.kind == "number":
        return replace(column, form=_told_form(column, marks, told))
    form = column.form
    if form.form is Form.GROUPED and marks.thousands_mark == "":
        return replace(column, form=WORDS)
    if form.form is not Form.DOUBTFUL:
        return column
    return replace(column, form=_resolved(form, marks))


def _resolved(form: NumberForm, marks: NumberMarks) -> NumberForm:
    """Read 1,234 as the rest of the file would: only where one way is left."""
    other = _OPPOSITE[form.mark]
    if form.mark in marks.known and other not in marks.known:
        return NumberForm(Form.DECIMAL, form.mark)
    if other in marks.known and form.mark not in marks.known and marks.thousands_mark:
        return NumberForm(Form.GROUPED, "", form.mark)
    return form


def _told_form(column: ProfiledColumn, marks: NumberMarks, told: ColumnReading) -> NumberForm:
    """Return the form a person asked for, or words where the cells do not fit it."""
    cells, found = column.answered, column.form
    if not len(cells):
        return WORDS
    if told.decimal_mark is None and told.thousands_mark is None:
        if found.form is Form.DOUBTFUL:
            return _resolved(found, marks)
        if found.form is not Form.WORDS:
            return found
    decimal = told.decimal_mark or marks.decimal_mark or "."
    thousands = told.thousands_mark or ""
    if fits(cells, decimal, ""):
        return NumberForm(Form.DECIMAL, decimal)
    if thousands and fits(cells, decimal, thousands):
        return NumberForm(Form.GROUPED, decimal, thousands)
    return WORDS


def column_answers(column: ProfiledColumn) -> np.ndarray | pd.api.extensions.ExtensionArray:
    """Return (n rows,) float64 where every answer is a number, else text; blanks are missing."""
    cells, form = column.cells, column.form
    if column.whole is not None:
        return column.whole.numbers()
    if form.form in (Form.WORDS, Form.DOUBTFUL):
        distinct = pc.if_else(pa.array(column.blank), pa.scalar(None, pa.string()), cells.distinct)
        text = pa.DictionaryArray.from_arrays(pa.array(cells.codes), distinct).dictionary_decode()
        return pd.array(text, dtype="str")
    values = np.full(len(cells.distinct), np.nan)
    values[~(column.blank | column.word)] = to_numbers(
        column.answered, form.decimal_mark, form.thousands_mark
    )
    return values[cells.codes]


def _without_controls(column: ProfiledColumn) -> ProfiledColumn:
    """Remove control characters from cells, which may leave numbers."""
    distinct = column.cells.distinct
    cleaned = as_flags(pc.match_substring_regex(distinct, _CONTROLS)) & ~column.blank
    if not cleaned.any():
        return column
    cells = replace(column.cells, distinct=pc.replace_substring_regex(distinct, _CONTROLS, ""))
    column = replace(column, cells=cells, cleaned=cleaned)
    return replace(column, form=number_form(column.answered))
