"""Tables of means: every question with numbers, in every group and of everyone."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.array_checks import (
    Bools,
    Floats,
    as_confidence,
    as_mask,
    as_numbers,
    frozen,
    numbers_of_base,
)
from estimators.cell_buckets import buckets_of
from estimators.cell_codes import coded_columns, refuse_unknown_codes, refuse_unnamed_groupings
from estimators.cell_means import CellMeans, means_of_cells, row_cells
from estimators.cell_sums import EVERYONE
from estimators.errors import InputError
from estimators.results import Caution
from estimators.sample_designs import SampleDesign


@dataclass(frozen=True, slots=True, eq=False)
class MeanTable:
    """Means with their t intervals, one row for each question in a group.

    Parameters
    ----------
    question, grouping : (m,) str
        Names; the grouping is "" for everyone.
    group : (m,) int
        Codes; 0 for everyone.
    base : (m,) int
        Rows with an answer.
    value, standard_error, low, high : (m,) float
        In the unit of the values; NaN where nobody answered.
    effective_base, degrees_of_freedom : (m,) float
        As in an :class:`estimators.results.Estimate`.
    no_variation : (m,) bool
        Where the answers of a group do not differ though not everybody was asked.
    confidence : float
        Confidence level of the intervals.
    cautions : tuple of Caution
        What every figure of the table carries.
    """

    question: NDArray[np.str_]
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
    cautions: tuple[Caution, ...]

    @property
    def columns(self) -> dict[str, NDArray[np.generic]]:
        """The columns by name, arrays of one length."""
        return {name: getattr(self, name) for name in COLUMNS}

    def __len__(self) -> int:
        """Return how many rows the table has."""
        return len(self.value)


COLUMNS = tuple(field.name for field in fields(MeanTable))[:10]


def tabulate_means(
    values: Mapping[str, ArrayLike],
    groupings: Mapping[str, ArrayLike],
    design: SampleDesign,
    *,
    where: ArrayLike | None = None,
    codes: Mapping[str, int] | None = None,
    confidence: float = 0.95,
) -> MeanTable:
    """Estimate the mean of every question, in every group and of everyone.

    Every number is that of :func:`estimators.mean` for the same cell, with the rows without a
    number as not answered. The groups of a grouping share their passes over the rows.

    Parameters
    ----------
    values : {name: (n,) float}
        Numbers; NaN where a row has none.
    groupings : {name: (n,) int}
        Group of each row, from 0; -1 where it is in none. May be empty.
    design : SampleDesign
        How the n rows were drawn.
    where : (n,) bool, optional
        Who the table is about.
    codes : {name: how many}, optional
        Groups of a grouping, so that one that does not occur keeps its rows.
    confidence : float
        Between 0 and 1.

    Returns
    -------
    MeanTable
        By question, grouping (everyone first) and group, in the order given.

    Raises
    ------
    InputError
        If arrays do not fit the design, a number inside the base is infinite, or codes are not
        whole numbers from -1.

    References
    ----------
    As for :func:`estimators.mean`.
    """
    level = as_confidence(confidence)
    refuse_unnamed_groupings(groupings)
    refuse_unknown_codes(codes, groupings)
    base = _base(where, design)
    buckets = buckets_of(design)
    coded = {EVERYONE: (np.zeros(design.n, np.int8), 1)}
    coded |= coded_columns(groupings, "groupings", design.n, codes)
    answers = _checked(values, design, base)
    blocks: list[CellMeans] = []
    for codes_of_rows, groups in coded.values():
        cells = row_cells(codes_of_rows, groups, base, buckets)
        blocks += [means_of_cells(*found, cells, design, level) for found in answers.values()]
    return _table(
        list(answers), {name: size for name, (_, size) in coded.items()}, blocks, level, design
    )


def _base(where: ArrayLike | None, design: SampleDesign) -> Bools | None:
    """(n,) rows the table is about; a row without weight speaks for nobody."""
    mask = as_mask(where, "where", design.n)
    if not design.has_zero_weights:
        return mask
    speaks = design.weights > 0
    return speaks if mask is None else mask & speaks


def _checked(
    values: Mapping[str, ArrayLike], design: SampleDesign, base: Bools | None
) -> dict[str, tuple[Floats, Bools]]:
    """Numbers of each question, zero where there is none, and who gave one."""
    if not isinstance(values, Mapping):
        raise InputError(
            "values", type(values).__name__, "must be a dict of numbers", "pass {name: numbers}"
        )
    found = {}
    for name, given in values.items():
        label = f"values[{name!r}]"
        numbers = as_numbers(given, label, design.n)
        answered = ~np.isnan(numbers)
        inside = answered if base is None else answered & base
        found[name] = numbers_of_base(numbers, label, design.n, inside), inside
    return found


def _table(
    questions: list[str],
    sizes: dict[str, int],
    blocks: list[CellMeans],
    confidence: float,
    design: SampleDesign,
) -> MeanTable:
    """One table, question by question, of blocks that came grouping by grouping."""
    ordered = [
        block for place in range(len(questions)) for block in blocks[place :: len(questions)]
    ]
    groups = [(name, group) for name, size in sizes.items() for group in range(size)]
    columns = {
        "question": np.repeat(np.array(questions, dtype=str), len(groups)),
        "grouping": np.tile(np.array([name for name, _ in groups], dtype=str), len(questions)),
        "group": np.tile(np.array([group for _, group in groups], dtype=np.int64), len(questions)),
    }
    for field in fields(CellMeans):
        parts = [getattr(block, field.name) for block in ordered]
        columns[field.name] = np.concatenate(parts) if parts else np.zeros(0)
    columns["base"] = columns["base"].astype(np.int64)
    return MeanTable(
        **{name: frozen(column) for name, column in columns.items()},
        confidence=confidence,
        cautions=design.cautions,
    )
