"""The answers to a question, row by row, with the reason where there is none."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import pandas as pd

from app.study.column_profiles import column_numbers, leading_numbers, numbers_of, text_positions
from app.study.missing_words import is_not_chosen
from app.study.questions import MissingReason, Question, QuestionKind

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.int64]
BoolArray = npt.NDArray[np.bool_]

_NO_NUMBERS = (QuestionKind.TEXT, QuestionKind.IDENTIFIER)
_MEASURED = (QuestionKind.SCALE, QuestionKind.NUMBER, QuestionKind.WEIGHT)


@dataclass(frozen=True, slots=True, eq=False)
class QuestionValues:
    """What each row says to a question; all arrays are read only.

    Parameters
    ----------
    question : Question
        The question.
    numbers : ndarray
        (n,) float; NaN where not answered or not a number.
    codes : ndarray
        (n,) int, index into the answers of the question; -1 for none.
    chosen : ndarray
        (n, k) bool, which answers were given.
    answered : ndarray
        (n,) bool.
    asked : ndarray
        (n,) bool; False where the row says that the question was not asked.
    reasons : dict of MissingReason to ndarray
        (n,) bool for each reason; blanks count as no answer unless the question says otherwise.
    """

    question: Question
    numbers: FloatArray
    codes: IntArray
    chosen: BoolArray
    answered: BoolArray
    asked: BoolArray
    reasons: dict[MissingReason, BoolArray]


def read_values(question: Question, answers: pd.DataFrame) -> QuestionValues:
    """Return what each row says to a question.

    Parameters
    ----------
    question : Question
        As stored; its open proposals are not applied.
    answers : DataFrame
        (n rows) with the columns of the question.
    """
    if question.kind is QuestionKind.SEVERAL:
        return _read_several(question, answers)
    cells = _Cells.of(answers[question.columns[0]], leading=question.kind is QuestionKind.SCALE)
    reasons = _reasons_of_cells(question, cells)
    given = ~np.logical_or.reduce(list(reasons.values()))
    codes = cells.positions_in([answer.code for answer in question.answers])
    answered = given & _is_an_answer(question, cells, codes)
    reasons[MissingReason.NO_ANSWER] |= given & ~answered
    codes = np.where(answered, codes, -1)
    numbers = np.where(answered & (question.kind not in _NO_NUMBERS), cells.numbers, np.nan)
    chosen = codes[:, None] == np.arange(len(question.answers))
    return _finished(question, numbers, codes, chosen, reasons)


def _is_an_answer(question: Question, cells: _Cells, codes: IntArray) -> BoolArray:
    if question.kind in _MEASURED:
        return np.isfinite(cells.numbers)
    if question.kind is QuestionKind.CHOICE:
        return codes >= 0
    return np.ones(codes.size, dtype=bool)


def _reasons_of_cells(question: Question, cells: _Cells) -> dict[MissingReason, BoolArray]:
    """Return (n,) bool for each reason; a missing code "" gives blank cells its reason."""
    reasons = {reason: np.zeros(cells.blank.size, dtype=bool) for reason in MissingReason}
    reasons[_reason_of_blanks(question)] |= cells.blank
    for code in question.missing:
        reasons[code.reason] |= cells.equal(code.code) & ~cells.blank
    return reasons


def _reason_of_blanks(question: Question) -> MissingReason:
    by_code = {code.code: code.reason for code in question.missing}
    return by_code.get("", MissingReason.NO_ANSWER)


def _finished(
    question: Question,
    numbers: FloatArray,
    codes: IntArray,
    chosen: BoolArray,
    reasons: dict[MissingReason, BoolArray],
) -> QuestionValues:
    answered = ~np.logical_or.reduce(list(reasons.values()))
    asked = ~reasons[MissingReason.NOT_ASKED]
    for array in (numbers, codes, chosen, answered, asked, *reasons.values()):
        array.setflags(write=False)
    return QuestionValues(question, numbers, codes, chosen, answered, asked, reasons)


@dataclass(frozen=True, slots=True, eq=False)
class _Cells:
    """One column: distinct texts and (n,) positions of the rows in them, or plain numbers."""

    numbers: FloatArray
    blank: BoolArray
    positions: IntArray | None
    texts: tuple[str, ...]

    @classmethod
    def of(cls, column: pd.Series, *, leading: bool = False) -> _Cells:
        """Read a column; ``leading`` also takes the number a label of a scale starts with."""
        if pd.api.types.is_numeric_dtype(column):
            numbers = column_numbers(column)
            blank = ~np.isfinite(numbers)
            return cls(np.where(blank, np.nan, numbers), blank, None, ())
        positions, texts = text_positions(column)
        by_text = leading_numbers(texts) if leading else numbers_of(texts)
        return cls(np.append(by_text, np.nan)[positions], positions < 0, positions, texts)

    def equal(self, code: str) -> BoolArray:
        """Return (n,) bool: which cells hold this code."""
        if self.positions is None:
            number = numbers_of((code,))[0]
            return np.asarray(self.numbers == number)
        return np.asarray(self.positions_in([code]) == 0)

    def positions_in(self, codes: list[str]) -> IntArray:
        """Return (n,) index of each cell in a list of codes, -1 for none."""
        if self.positions is None:
            return self._positions_of_numbers(codes)
        place = {code: i for i, code in enumerate(codes)}
        by_number = {n: i for i, n in enumerate(numbers_of(tuple(codes))) if np.isfinite(n)}
        numbers = numbers_of(self.texts)
        table = [
            place.get(text, by_number.get(number, -1))
            for text, number in zip(self.texts, numbers, strict=True)
        ]
        return np.array([*table, -1], dtype=np.int64)[self.positions]

    def _positions_of_numbers(self, codes: list[str]) -> IntArray:
        found = np.full(self.numbers.size, -1, dtype=np.int64)
        for i, number in enumerate(numbers_of(tuple(codes))):
            found[self.numbers == number] = i
        return found


def _read_several(question: Question, answers: pd.DataFrame) -> QuestionValues:
    cells = {column: _Cells.of(answers[column]) for column in question.columns}
    two_is_no = any(_holds_one_and_two(c) for c in cells.values())
    missing = {column: _reasons_of_cells(question, c) for column, c in cells.items()}
    given = {c: ~np.logical_or.reduce(list(missing[c].values())) for c in cells}
    ticked = {c: given[c] & ~_not_chosen(cells[c], two_is_no) for c in cells}
    chosen = _stacked([ticked[answer.code] for answer in question.answers], len(answers))
    reasons = _reasons_of_rows(question, chosen, _stacked(list(given.values()), len(answers)))
    answered = ~np.logical_or.reduce(list(reasons.values()))
    _take_reasons(reasons, ~answered, missing, question)
    for code in question.missing:
        if code.code in ticked:
            _set_reason(reasons, ticked[code.code] & ~chosen.any(axis=1), code.reason)
    answered = ~np.logical_or.reduce(list(reasons.values()))
    nothing = np.full(len(answers), -1, dtype=np.int64)
    return _finished(
        question,
        np.full(len(answers), np.nan),
        nothing,
        chosen & answered[:, None],
        reasons,
    )


def _reasons_of_rows(
    question: Question, chosen: BoolArray, given: BoolArray
) -> dict[MissingReason, BoolArray]:
    """Return reasons with the rows in which no column says anything marked as blank rows."""
    reasons = {reason: np.zeros(len(chosen), dtype=bool) for reason in MissingReason}
    reasons[_reason_of_blanks(question)] |= ~given.any(axis=1)
    return reasons


def _take_reasons(
    reasons: dict[MissingReason, BoolArray],
    open_rows: BoolArray,
    missing: dict[str, dict[MissingReason, BoolArray]],
    question: Question,
) -> None:
    """Give rows without any answer the reason of a missing code that stands in one of them."""
    for reason in MissingReason:
        if reason is _reason_of_blanks(question):
            continue
        said = np.logical_or.reduce([by_reason[reason] for by_reason in missing.values()])
        _set_reason(reasons, open_rows & said, reason)


def _set_reason(
    reasons: dict[MissingReason, BoolArray], rows: BoolArray, reason: MissingReason
) -> None:
    for other, marked in reasons.items():
        marked[rows] = other is reason


def _holds_one_and_two(cells: _Cells) -> bool:
    """Whether a column is coded 1 for yes and 2 for no."""
    return bool((cells.numbers == 1).any() and (cells.numbers == 2).any())


def _not_chosen(cells: _Cells, two_is_no: bool) -> BoolArray:
    zero = (cells.numbers <= 0) | (two_is_no & (cells.numbers == 2))
    if cells.positions is None:
        return np.asarray(zero)
    table = np.array([*map(is_not_chosen, cells.texts), False], dtype=bool)
    return np.asarray(zero | table[cells.positions])


def _stacked(columns: list[BoolArray], rows: int) -> BoolArray:
    return np.column_stack(columns) if columns else np.zeros((rows, 0), dtype=bool)
