"""Counts per group, pasted from a spreadsheet into a text box: a group and its count a line."""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass

from app.intake.fieldwork_files import short

_SPACE = " \u00a0\u202f\u2009"
_GROUPED = re.compile(rf"(\d{{1,3}})(?P<mark>[.,'’{_SPACE}])\d{{3}}(?:(?P=mark)\d{{3}})*")
_WITH_DECIMALS = re.compile(rf"(?P<whole>[\d.,'’{_SPACE}]*\d)(?P<mark>[.,])(?P<decimals>\d+)")
_SPLITS = (r"\t+", r"[;|]", r"[:=]\s*(?=[^:=]*$)", r"\s{2,}(?=\S+(?:\s\S+)*$)")
_COMMA_SPACE = re.compile(r"(?P<label>.*\S),\s+(?P<number>\S+)")
_LAST_WORD = re.compile(
    r"(?P<label>.*[^\s,])[ ,\u00a0]\s*(?P<number>[-+−]?\d[\d.,'’\u202f\u2009]*)"
)
_TWO_WAYS = re.compile(r".*(?:[\s,]\d{1,3}[ \u00a0]\d{3}|,\d{1,3},\d{3})")
_TOTAL = re.compile(
    r"(?:grand )?totals?|sum|all|overall|universe|summe|gesamt|gesamtsumme|insgesamt|somme|"
    r"ensemble|totale|suma|totaal",
    re.IGNORECASE,
)


@dataclass(frozen=True, slots=True)
class PastedCount:
    """One line: a group, its count, and where it stands.

    Parameters
    ----------
    label : str
        Name of the group, Unicode NFC, without outer spaces or quotation marks.
    count : int
        Units in the group.
    line : int
        Line of the text, from 1.
    grouped_by : str
        Thousands mark within the number, "" for none.
    """

    label: str
    count: int
    line: int
    grouped_by: str = ""


@dataclass(frozen=True, slots=True)
class PastedCounts:
    """What was read from the text box.

    Parameters
    ----------
    counts : tuple of (str, int)
        Group and count, in the order of the lines.
    problems : tuple of str
        Lines a person has to correct before the counts are used.
    remarks : tuple of str
        What was understood and left out.
    """

    counts: tuple[tuple[str, int], ...]
    problems: tuple[str, ...] = ()
    remarks: tuple[str, ...] = ()


class _LineError(ValueError):
    """A line that cannot be read; the sentence goes behind "Line 4: "."""


@dataclass(frozen=True, slots=True)
class _Number:
    value: int
    grouped_by: str = ""
    decimal_mark: str = ""


def read_pasted_counts(text: str) -> PastedCounts:
    """Return the counts of groups from pasted lines.

    Parameters
    ----------
    text : str
        One group a line, then its count; between them a tab, a semicolon, a colon or several
        spaces. Thousands marks may be points, commas, spaces or apostrophes.

    Returns
    -------
    PastedCounts
        counts, problems (each names its line) and remarks. A heading and a total are left out.
    """
    lines = [(i, line.strip()) for i, line in enumerate(re.split("\r\n|\n|\r", text), start=1)]
    lines = [(i, line) for i, line in lines if line]
    if not lines:
        return PastedCounts((), ("Nothing was pasted: paste a group and its count on each line.",))
    remarks, problems = [], []
    if len(lines) > 1 and not any(c.isdigit() for c in lines[0][1]):
        number, heading = lines.pop(0)
        remarks.append(f"Line {number} is a heading and was left out: {short(heading)}.")
    read: list[PastedCount] = []
    decimals: set[str] = set()
    for number, line in lines:
        try:
            label, cell = _cells(line)
            value = _whole_number(cell)
            read.append(PastedCount(label, value.value, number, value.grouped_by))
            decimals |= {value.decimal_mark}
        except _LineError as error:
            problems.append(f"Line {number}: {error}.")
            decimals |= {mark for mark in ".," if f"“{mark}”" in str(error)}
    problems += [_two_meanings(row) for row in read if row.grouped_by in decimals - {""}]
    groups, total_remarks, total_problems = _without_total(read, complete=not problems)
    groups, repeated = _without_repeats(groups)
    return PastedCounts(
        tuple((row.label, row.count) for row in groups),
        tuple(problems + repeated + total_problems),
        tuple(remarks + total_remarks),
    )


def _cells(line: str) -> tuple[str, str]:
    """Return label and number as text."""
    for pattern in _SPLITS:
        cells = [cell.strip() for cell in re.split(pattern, line) if cell.strip()]
        if len(cells) == 2:
            return _label(cells[0]), cells[1]
        if len(cells) > 2 and pattern in _SPLITS[:2]:
            raise _LineError(f"{len(cells)} cells stand where a group and its count are expected")
    match = _COMMA_SPACE.fullmatch(line)
    if match is None:
        if _TWO_WAYS.fullmatch(line) and not line[0].isdigit():
            raise _LineError(
                f"it is unclear where the count begins in “{short(line)}”; put a tab or a "
                "semicolon between group and count"
            )
        match = _LAST_WORD.fullmatch(line)
    if match is None:
        if re.fullmatch(r"[\d.,\s]+", line):
            raise _LineError(f"the count {short(line)} has no group in front of it")
        raise _LineError(f"no count is found behind “{short(line)}”")
    return _label(match["label"]), match["number"]


def _label(cell: str) -> str:
    cell = unicodedata.normalize("NFC", " ".join(cell.split())).rstrip(" :=,")
    if len(cell) > 1 and cell[0] == cell[-1] == '"':
        cell = cell[1:-1].replace('""', '"').strip()
    if not cell:
        raise _LineError("the count has no group in front of it")
    return cell


def _whole_number(cell: str) -> _Number:
    """Return a whole number; a count cannot be 1.184, so groups of three digits are thousands."""
    text = cell.strip(' "').rstrip(";,").strip().removeprefix("+")
    if text[:1] in "-−" and text[1:2].isdigit():
        raise _LineError(f"a count cannot be negative, but {short(cell)} is")
    if re.fullmatch("[0-9]+", text):
        return _checked(_Number(int(text[:30])))
    grouped = _GROUPED.fullmatch(text)
    if grouped is not None and grouped[1][0] != "0":
        return _checked(_Number(int(re.sub(r"\D", "", text)[:30]), grouped["mark"]))
    decimal = _WITH_DECIMALS.fullmatch(text)
    if decimal is None:
        raise _LineError(f"“{short(cell)}” is not a whole number")
    return _checked(_with_decimals(text, decimal))


def _with_decimals(text: str, match: re.Match[str]) -> _Number:
    """Return a number written with decimals when these are zero ("1.184,00")."""
    if set(match["decimals"]) != {"0"} or len(match["decimals"]) == 3:
        raise _LineError(
            f"{short(text)} is not a whole number (“{match['mark']}” stands before its decimals)"
        )
    whole = match["whole"]
    grouped = _GROUPED.fullmatch(whole)
    if not whole.isdigit() and (grouped is None or grouped["mark"] == match["mark"]):
        raise _LineError(f"“{short(text)}” is not a whole number")
    mark = grouped["mark"] if grouped else ""
    return _Number(int(re.sub(r"\D", "", whole)[:30]), mark, match["mark"])


def _checked(number: _Number) -> _Number:
    if number.value >= 10**12:
        raise _LineError(f"{number.value:,} is too large for a count of units")
    return number


def _two_meanings(row: PastedCount) -> str:
    return (
        f"Line {row.line}: the “{row.grouped_by}” in the count of “{short(row.label)}” may stand "
        "before thousands or decimals, because other lines use it before decimals; write whole "
        "numbers without marks."
    )


def _without_total(
    rows: list[PastedCount], *, complete: bool
) -> tuple[list[PastedCount], list[str], list[str]]:
    """Take out a line called total; compare it with the sum when all lines could be read."""
    totals = [row for row in rows if _TOTAL.fullmatch(row.label)]
    groups = [row for row in rows if not _TOTAL.fullmatch(row.label)]
    if not totals or not groups:
        return rows, [], []
    total, added = totals[-1], sum(row.count for row in groups)
    if len(totals) > 1:
        where = f"lines {totals[0].line} and {total.line}"
        return groups, [], [f"Two lines are called a total ({where}): remove one."]
    if not complete:
        return groups, [f"Line {total.line} is a total and was left out."], []
    if total.count == added:
        found = f"Line {total.line} is the total, {added:,}, equal to the sum; it was left out."
        return groups, [found], []
    return (
        groups,
        [],
        [
            f"Line {total.line}: the total is {total.count:,}, but the groups add up to "
            f"{added:,}; correct the groups or remove the total."
        ],
    )


def _without_repeats(rows: list[PastedCount]) -> tuple[list[PastedCount], list[str]]:
    first: dict[str, PastedCount] = {}
    problems = []
    for row in rows:
        earlier = first.setdefault(row.label.casefold(), row)
        if earlier is not row:
            problems.append(
                f"Line {row.line}: “{short(row.label)}” stands in line {earlier.line} already, "
                f"with {earlier.count:,}; keep one of them."
            )
    return list(first.values()), problems
