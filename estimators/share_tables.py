"""Tables of shares: every answer of every question in every group, from a few passes over rows."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.array_checks import Floats, as_confidence, frozen
from estimators.cell_buckets import buckets_of
from estimators.cell_codes import refuse_unknown_codes
from estimators.cell_shares import CellShares, shares_of_cells
from estimators.cell_sums import EVERYONE, CellSums, cells_of, question_cells
from estimators.errors import InputError
from estimators.proportion_intervals import check_method, share_bounds
from estimators.results import Caution
from estimators.sample_designs import SampleDesign

Block = dict[str, NDArray[Any]]

_MANY_UNITS = 1000  # drawn units above which questions are counted one after the other


@dataclass(frozen=True, slots=True, eq=False)
class ShareTable:
    """Shares with their intervals, one row for each answer of a question in a group.

    Parameters
    ----------
    question, grouping : (m,) str
        Names; the grouping is "" for everyone.
    answer, group : (m,) int
        Codes; the group is 0 for everyone.
    base : (m,) int
        Rows with an answer.
    value, standard_error, low, high : (m,) float
        In parts of one; NaN where nobody answered.
    effective_base, degrees_of_freedom : (m,) float
        As in an :class:`estimators.results.Estimate`.
    no_variation : (m,) bool
        Where the answers of a group do not differ though not everybody was asked, so that the
        interval rests on a stand-in.
    confidence : float
        Confidence level of the intervals.
    method : str
        Name of their method.
    cautions : tuple of Caution
        What every figure of the table carries.
    """

    question: NDArray[np.str_]
    answer: NDArray[np.int64]
    grouping: NDArray[np.str_]
    group: NDArray[np.int64]
    base: NDArray[np.int64]
    value: Floats
    standard_error: Floats
    low: Floats
    high: Floats
    effective_base: Floats
    degrees_of_freedom: Floats
    no_variation: NDArray[np.bool_]
    confidence: float
    method: str
    cautions: tuple[Caution, ...]

    @property
    def columns(self) -> dict[str, NDArray[np.generic]]:
        """The columns by name, arrays of one length."""
        return {name: getattr(self, name) for name in COLUMNS}

    def __len__(self) -> int:
        """Return how many rows the table has."""
        return len(self.value)


COLUMNS = (
    "question",
    "answer",
    "grouping",
    "group",
    "base",
    "value",
    "standard_error",
    "low",
    "high",
    "effective_base",
    "degrees_of_freedom",
)


def tabulate(
    answers: Mapping[str, ArrayLike],
    groupings: Mapping[str, ArrayLike],
    design: SampleDesign,
    *,
    where: ArrayLike | None = None,
    codes: Mapping[str, int] | None = None,
    confidence: float = 0.95,
    method: str = "wilson",
) -> ShareTable:
    """Estimate the share of every answer of every question, in every group and of everyone.

    Every number is that of :func:`estimators.proportion` for the same cell, with the rows without
    an answer as not answered. All designs take the same fast way: shares and their variances
    follow from sums by cell, stratum and cluster. Where these sums would take much room, with more
    than a thousand clusters, questions are counted one after the other.

    Parameters
    ----------
    answers : {name: (n,) int}
        Code of each row's answer to a question, from 0; -1 where there is none.
    groupings : {name: (n,) int}
        Group of each row, from 0; -1 where it is in none. May be empty.
    design : SampleDesign
        How the n rows were drawn.
    where : (n,) bool, optional
        Who the table is about.
    codes : {name: how many}, optional
        Answers of a question, or groups of a grouping, so that one that does not occur keeps its
        rows; else the largest code that occurs, plus 1.
    confidence : float
        Between 0 and 1.
    method : str
        A name in :data:`estimators.proportion_intervals.METHOD_NAMES`.

    Returns
    -------
    ShareTable
        By question, grouping (everyone first), group and answer, in the order given.

    Raises
    ------
    InputError
        If arrays do not fit the design, codes are not whole numbers from -1, or the method is
        unknown or does not fit the sample.

    References
    ----------
    As for :func:`estimators.proportion`.
    """
    level = as_confidence(confidence)
    check_method(method)
    refuse_unknown_codes(codes, answers, groupings)
    portions = [answers]
    if _has_many_units(design) and isinstance(answers, Mapping):
        portions = [{question: answers[question]} for question in answers]
    counted = (
        cells_of(
            portion, groupings, design, where=where, codes=_codes_of(codes, portion, groupings)
        )
        for portion in portions
    )
    blocks = [_blocks_of(cells, design, level, method) for cells in counted]
    return _table([block for part in blocks for block in part], design, level, method)


def share_table(
    cells: CellSums,
    design: SampleDesign,
    *,
    confidence: float = 0.95,
    method: str = "wilson",
) -> ShareTable:
    """Estimate the shares of counted cells; :func:`tabulate` for a file read in parts.

    Parameters
    ----------
    cells : CellSums
        Of all rows of the design, put together from parts in any order.
    design : SampleDesign
        How the rows were drawn.
    confidence, method
        As for :func:`tabulate`.

    Returns
    -------
    ShareTable
        That of :func:`tabulate`.

    Raises
    ------
    InputError
        If some rows of the design were not counted, or the method is unknown or does not fit.

    Examples
    --------
    >>> design = SampleDesign.simple_random(4)
    >>> count = {"brand": 2}
    >>> first = cells_of({"brand": [0, 1]}, {}, design, rows=(0, 2), codes=count)
    >>> second = cells_of({"brand": [1, 1]}, {}, design, rows=(2, 4), codes=count)
    >>> share_table(first + second, design).value.tolist()
    [0.25, 0.75]
    """
    level = as_confidence(confidence)
    check_method(method)
    return _table(_blocks_of(cells, design, level, method), design, level, method)


def _has_many_units(design: SampleDesign) -> bool:
    return design.stages.unit is not None and len(design.stages.rows_drawn) > _MANY_UNITS


def _codes_of(codes: Mapping[str, int] | None, *given: Mapping[str, Any]) -> dict[str, int] | None:
    """Return the numbers of codes of what is counted together."""
    if codes is None:
        return None
    return {name: size for name, size in codes.items() if any(name in names for names in given)}


def _blocks_of(
    cells: CellSums, design: SampleDesign, confidence: float, method: str
) -> list[Block]:
    """Columns of one question after the other."""
    if cells.spans != ((0, design.n),):
        raise InputError(
            "cells",
            f"those of rows {', '.join(f'{a} to {b - 1}' for a, b in cells.spans) or 'none'}",
            f"must hold every one of the {design.n:,} rows of the design",
            "add the cells of all parts of the file",
        )
    buckets = buckets_of(design)
    groups = [(EVERYONE, 0)]
    groups += [(name, group) for name, size in cells.groupings for group in range(size)]
    blocks = []
    for question, answers in cells.questions:
        if answers:
            shares = shares_of_cells(*question_cells(cells, question), buckets, design)
            bounds = share_bounds(shares.evidence(design), method=method, confidence=confidence)
            blocks.append(_labels(question, answers, groups) | _numbers(shares, *bounds))
    return blocks


def _labels(question: str, answers: int, groups: list[tuple[str, int]]) -> Block:
    """Columns that say which cell each row is."""
    return {
        "question": np.full(len(groups) * answers, question),
        "answer": np.tile(np.arange(answers), len(groups)),
        "grouping": np.repeat([name for name, _ in groups], answers),
        "group": np.repeat([group for _, group in groups], answers),
    }


def _numbers(shares: CellShares, low: Floats, high: Floats) -> Block:
    columns = {
        "base": shares.base.astype(np.int64),
        "value": shares.share,
        "standard_error": shares.standard_error,
        "low": low,
        "high": high,
        "effective_base": shares.effective_base,
        "degrees_of_freedom": shares.degrees_of_freedom,
        "no_variation": shares.no_variation,
    }
    return {name: column.ravel() for name, column in columns.items()}


def _table(
    blocks: Sequence[Block], design: SampleDesign, confidence: float, method: str
) -> ShareTable:
    """One table of the blocks of all questions."""
    empty = _labels("", 0, []) | dict.fromkeys(COLUMNS[5:], np.zeros(0))
    empty |= {"base": np.zeros(0, np.int64), "no_variation": np.zeros(0, np.bool_)}
    columns = {
        name: frozen(np.concatenate([block[name] for block in blocks] or [empty[name]]))
        for name in (*COLUMNS, "no_variation")
    }
    return ShareTable(**columns, confidence=confidence, method=method, cautions=design.cautions)
