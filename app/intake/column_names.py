"""Names of columns and the texts above them: unique, readable, nothing overwritten."""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass

from app.intake.fieldwork_files import Remark, count_phrase, name_list
from app.intake.header_rows import HeaderRows

_UNREADABLE = re.compile(r"[\x00-\x1f\x7f\ufeff\s]+")
_INVISIBLE = str.maketrans("", "", "\x00\ufeff\u200b")


@dataclass(frozen=True, slots=True)
class ColumnNames:
    """Names of the columns of a table.

    Parameters
    ----------
    names : tuple of str
        Unique, one per column, Unicode NFC.
    texts : dict of str to str
        Name to question text, where there is one.
    unnamed : tuple of int
        Positions, from 0, of columns without a name in the file.
    remarks : tuple of Remark
        Duplicates and blanks.
    """

    names: tuple[str, ...]
    texts: dict[str, str]
    unnamed: tuple[int, ...]
    remarks: tuple[Remark, ...]


def column_names(header: HeaderRows, width: int) -> ColumnNames:
    """Return the names of ``width`` columns; those beyond the header are named by position."""
    cells = header.rows[header.name_row - 1].cells if header.rows else []
    read = [_clean(cell) for cell in cells] + [""] * (width - len(cells))
    read = read[:width]
    names, repeated = _unique(read)
    unnamed = tuple(i for i, name in enumerate(read) if not name)
    others = [r.cells for n, r in enumerate(header.rows, start=1) if n != header.name_row]
    texts = {name: _text(others, i) for i, name in enumerate(names)}
    texts = {name: text for name, text in texts.items() if text}
    return ColumnNames(tuple(names), texts, unnamed, _remarks(repeated) + _twins(names))


def unnamed_remark(names: list[str]) -> Remark:
    """Return the remark on columns that hold cells but have no name."""
    return Remark(
        "unnamed_columns",
        f"{count_phrase(len(names), 'column has', 'columns have')} no name in the file and "
        f"{'is' if len(names) == 1 else 'are'} named by position: {name_list(names)}.",
        column=names[0] if len(names) == 1 else "",
    )


def _clean(cell: str) -> str:
    name = _UNREADABLE.sub(" ", cell.translate(_INVISIBLE)).strip()
    return unicodedata.normalize("NFC", name)


def _text(rows: list[list[str]], position: int) -> str:
    levels = [_clean(row[position]) for row in rows if position < len(row)]
    return " – ".join(level for level in levels if level)


def _unique(read: list[str]) -> tuple[list[str], list[tuple[str, str]]]:
    """Return unique names; a second column of one name gets its position behind it."""
    taken = {name for name in read if name}
    seen: set[str] = set()
    names, repeated = [], []
    for position, name in enumerate(read, start=1):
        unique = name or f"column {position}"
        if name in seen or (not name and unique in taken):
            unique = f"{unique} ({position})"
            while unique in taken:
                unique = f"{unique}'"
            if name:
                repeated.append((name, unique))
        seen |= {unique, name or unique}
        taken.add(unique)
        names.append(unique)
    return names, repeated


def _remarks(repeated: list[tuple[str, str]]) -> tuple[Remark, ...]:
    if not repeated:
        return ()
    changed = [new for _, new in repeated]
    one = len(repeated) == 1
    return (
        Remark(
            "duplicate_names",
            f"{count_phrase(len(repeated), 'column repeats', 'columns repeat')} an earlier name; "
            f"all are kept, with the position behind the name: {name_list(changed)}.",
            column=changed[0] if one else "",
        ),
    )


def _twins(names: list[str]) -> tuple[Remark, ...]:
    """Notice names that differ only in capitals."""
    first: dict[str, str] = {}
    twins = [
        f"{first[name.casefold()]} / {name}"
        for name in names
        if first.setdefault(name.casefold(), name) != name
    ]
    if not twins:
        return ()
    return (Remark("twin_names", f"Names differ only in capital letters: {name_list(twins)}."),)
