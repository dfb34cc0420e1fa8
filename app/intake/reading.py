"""How a fieldwork file is read: every decision, with its evidence, and open to correction."""

from __future__ import annotations

from dataclasses import dataclass

from app.study.records import from_json, to_json


@dataclass(frozen=True, slots=True)
class ColumnReading:
    """What a person decided about one column.

    Parameters
    ----------
    column : str
        Name as in the answers.
    kind : str
        "number" or "text".
    decimal_mark, thousands_mark : str or None
        Marks within this column; None uses those found.
    words : tuple of str
        Cells that stand for no number ("refused"); they become missing.
    """

    column: str
    kind: str
    decimal_mark: str | None = None
    thousands_mark: str | None = None
    words: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Reading:
    """Decisions taken on the way from bytes to answers; None leaves one to be found out.

    Parameters
    ----------
    encoding : str or None
        "utf-8", "utf-16-le", "utf-16-be", "cp1252", "utf-8 and cp1252", or any text encoding
        Python knows.
    delimiter : str or None
        One character between cells.
    quote : str or None
        Character around cells; "" for none.
    escape : str or None
        Character before a quotation mark inside a quoted cell; "" where marks are doubled.
    decimal_mark : str or None
        "." or ","; "" when nothing in the file settles it and some column depends on it.
    thousands_mark : str or None
        ".", ",", " ", "'"; "" when no number is grouped. Where "" is passed back, grouped
        numbers stay text.
    sep_line : bool or None
        Whether the first line only names the delimiter ("sep=;").
    lines_above : int or None
        Lines above the first header row that are no part of the table, the "sep=" line included.
    header_rows : int or None
        0 when the first row already holds answers.
    name_row : int or None
        Which of the header rows names the columns, from 1; the others are question texts.
    long_rows : str
        "set aside" keeps rows with too many cells out of the answers; "keep" gives their extra
        cells columns of their own.
    left_out : tuple of int
        Lines that are no respondents (a total at the foot): set aside.
    columns : tuple of ColumnReading
        Decisions about single columns.
    evidence : tuple of str
        One sentence per decision, for the person who checks it.
    """

    encoding: str | None = None
    delimiter: str | None = None
    quote: str | None = None
    escape: str | None = None
    decimal_mark: str | None = None
    thousands_mark: str | None = None
    sep_line: bool | None = None
    lines_above: int | None = None
    header_rows: int | None = None
    name_row: int | None = None
    long_rows: str = "set aside"
    left_out: tuple[int, ...] = ()
    columns: tuple[ColumnReading, ...] = ()
    evidence: tuple[str, ...] = ()

    @property
    def first_data_line(self) -> int | None:
        """Line on which the answers begin when every header row takes one line."""
        if self.lines_above is None or self.header_rows is None:
            return None
        return self.lines_above + self.header_rows + 1

    def column(self, name: str) -> ColumnReading | None:
        """Return what was decided about a column, or None."""
        return next((c for c in self.columns if c.column == name), None)

    def for_another_file(self) -> Reading:
        """Return what also holds for the next wave: decisions about columns and long rows."""
        return Reading(long_rows=self.long_rows, columns=self.columns)

    def to_json(self) -> str:
        """Return the reading as JSON text."""
        return to_json(self)

    @classmethod
    def from_json(cls, text: str) -> Reading:
        """Return what :meth:`to_json` wrote."""
        return from_json(cls, text)
