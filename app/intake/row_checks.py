"""Rows that are no respondents: blank ones, those left out by hand, and totals at the foot."""

from __future__ import annotations

import re

import numpy as np

from app.intake.cell_table import CellTable
from app.intake.fieldwork_files import Remark, SetAsideRow, count_phrase, row_list, short

_TOTAL = re.compile(
    r"\s*(grand total|sub-?total|totals?|sum|average|mean|count|summe|gesamt|gesamtsumme|"
    r"mittelwert|somme|moyenne|totale|media|suma|totaal|gemiddelde|base|n)\s*[:=]?\s*",
    re.IGNORECASE,
)
_FOOT = 3


def without_blank_rows(table: CellTable) -> tuple[CellTable, tuple[Remark, ...]]:
    """Return the table without rows in which every cell is blank, and a remark on them."""
    empty = _blank_rows(table)
    if not empty.any():
        return table, ()
    sentence = f"{count_phrase(int(empty.sum()), 'blank row', 'blank rows')} left out."
    remark = Remark("blank_lines", sentence, rows=row_list(table.lines[empty]))
    return table.keep(~empty), (remark,)


def without_left_out(
    table: CellTable, left_out: tuple[int, ...]
) -> tuple[CellTable, tuple[SetAsideRow, ...]]:
    """Return the table without the rows that begin on the given lines, and those rows."""
    if not left_out:
        return table, ()
    out = np.isin(table.lines, left_out)
    rows = tuple(
        SetAsideRow(int(table.lines[at]), table.row(int(at)), "left out")
        for at in np.flatnonzero(out)
    )
    return table.keep(~out), rows


def footer_remarks(table: CellTable) -> tuple[Remark, ...]:
    """Return a remark on rows at the foot that look like totals or notes; nothing is removed."""
    lines: list[int] = []
    example = ""
    for at in range(len(table.lines) - 1, max(len(table.lines) - 1 - _FOOT, 0), -1):
        filled = [cell.strip() for cell in table.row(at) if cell.strip()]
        if not _is_footer(filled, len(table.columns)):
            break
        lines.insert(0, int(table.lines[at]))
        example = short(filled[0])
    if not lines:
        return ()
    where = f"line {lines[0]:,}" if len(lines) == 1 else f"lines {lines[0]:,} to {lines[-1]:,}"
    return (
        Remark(
            "footer_rows",
            f"The file ends with what looks like a total or a note, no respondent ({where}, "
            f"“{example}”): leave {'it' if len(lines) == 1 else 'them'} out, or keep "
            f"{'it' if len(lines) == 1 else 'them'} if a person answered.",
            rows=row_list(lines),
        ),
    )


def _is_footer(filled: list[str], width: int) -> bool:
    if not filled or width < 2:
        return False
    if _TOTAL.fullmatch(filled[0]) and not filled[0].strip().isdigit():
        return True
    return len(filled) == 1 and width >= 3 and (" " in filled[0] or ":" in filled[0])


def _blank_rows(table: CellTable) -> np.ndarray:
    """Narrow down column by column; most files are through after the first."""
    empty = np.ones(len(table.lines), dtype=bool)
    for column in table.columns:
        if not empty.any():
            break
        empty &= column.blank_rows()
    return empty
