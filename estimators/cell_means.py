"""From rows to means of groups and to the moments of their residuals, in a few passes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from estimators.array_checks import Bools, Codes, Floats
from estimators.cell_bases import CellBases, cell_bases
from estimators.cell_buckets import Buckets
from estimators.cell_precision import (
    precision_of_cells,
    standard_errors,
    t_quantiles,
)
from estimators.cell_sums import OUTSIDE, SLOTS
from estimators.cell_variances import Moments, variances_of_means
from estimators.sample_designs import SampleDesign

_NO_VARIATION = 1e-14


@dataclass(frozen=True, slots=True, eq=False)
class CellMeans:
    """Means of G groups; (G,) each, NaN where nobody answered.

    Parameters
    ----------
    base : (G,) float
        Rows with an answer.
    value, standard_error, low, high, effective_base, degrees_of_freedom : (G,) float
        As in an :class:`estimators.results.Estimate`.
    no_variation : (G,) bool
        Where the answers do not differ though not everybody was asked.
    """

    base: Floats
    value: Floats
    standard_error: Floats
    low: Floats
    high: Floats
    effective_base: Floats
    degrees_of_freedom: Floats
    no_variation: Bools


@dataclass(frozen=True, slots=True, eq=False)
class RowCells:
    """Where each row sits among the groups of a grouping and the buckets of a sample.

    Parameters
    ----------
    slot : (n,) int
        Group of each row, after those outside the base and those in no group.
    groups : int
        Groups.
    buckets : Buckets
        Buckets of the sample.
    """

    slot: Codes
    groups: int
    buckets: Buckets

    @property
    def cell(self) -> Codes:
        """(n,) bucket and slot of each row in one number."""
        if len(self.buckets.rows) == 1:
            return self.slot
        return self.buckets.of_rows * (self.groups + SLOTS) + self.slot

    def sums(self, cell: Codes, numbers: Floats | None) -> Floats:
        """(B, G) sums over the rows of each group, or how many these are; zero where outside."""
        size = self.groups + SLOTS
        found = np.bincount(cell, numbers, len(self.buckets.rows) * size)
        return found.reshape(-1, size)[:, SLOTS:].astype(np.float64)


def row_cells(codes: NDArray[Any], groups: int, base: Bools | None, buckets: Buckets) -> RowCells:
    """Place rows by their group; -1 for none."""
    slot = np.add(codes, SLOTS, dtype=np.intp)
    if base is not None:
        slot[~base] = OUTSIDE
    return RowCells(slot, groups, buckets)


def means_of_cells(
    values: Floats, answered: Bools, cells: RowCells, design: SampleDesign, confidence: float
) -> CellMeans:
    """Estimate the mean of every group.

    Parameters
    ----------
    values : (n,) float
        Answers, zero where there is none.
    answered : (n,) bool
        Who gave one.
    cells : RowCells
        Their groups.
    design : SampleDesign
        The sample.
    confidence : float
        Between 0 and 1.
    """
    rows = _GroupedRows(cells.cell, cells, design, answered & (cells.slot >= SLOTS))
    base = cell_bases(design, cells.buckets, rows.base_sums(), None)
    value, residuals = _means(values, rows, base)
    moments = _moments(residuals, rows)
    variance = variances_of_means(moments, base)
    spread = _spreads(value, residuals, rows, base)[:, None]
    precision = precision_of_cells(variance, spread, base)
    df = base.counts.degrees_of_freedom
    error = standard_errors(variance, df, precision.no_variation)[:, 0]
    half = np.where(np.isnan(error) | (df <= 0), np.inf, error)
    half[half > 0] *= t_quantiles(df, confidence)[half > 0]
    some = base.rows > 0

    def known(numbers: Floats) -> Floats:
        return np.where(some, numbers, np.nan)

    return CellMeans(
        base=base.rows,
        value=known(value),
        standard_error=known(error),
        low=known(value - half),
        high=known(value + half),
        effective_base=known(precision.effective_base[:, 0]),
        degrees_of_freedom=known(df),
        no_variation=precision.no_variation[:, 0] & some,
    )


@dataclass(frozen=True, slots=True, eq=False)
class _GroupedRows:
    """Rows with an answer in a group, and sums over them; ``cell`` is (n,) bucket and slot."""

    cell: Codes
    cells: RowCells
    design: SampleDesign
    inside: Bools

    def sums(self, numbers: Floats) -> Floats:
        """(B, G) sums of numbers that are zero for all other rows."""
        return self.cells.sums(self.cell, numbers)

    def weighted_sums(self, numbers: Floats) -> Floats:
        """(B, G) sums of weight times number."""
        buckets = self.cells.buckets
        if buckets.vary:
            return self.sums(self.design.weights * numbers)
        return buckets.weights[:, None] * self.sums(numbers)

    def squares(self, numbers: Floats, total: Floats, rows: Floats) -> Floats:
        """(B, G) squared deviations from the mean of each cell."""
        return self.sums(self.deviations(numbers, total, rows) ** 2)

    def deviations(self, numbers: Floats, total: Floats, rows: Floats) -> Floats:
        """(n,) deviations from the mean of each cell; zero for all other rows."""
        means = np.pad(total / np.maximum(rows, 1), ((0, 0), (SLOTS, 0)))
        return np.where(self.inside, numbers - means.ravel()[self.cell], 0.0)

    def by_group(self, numbers: Floats) -> Floats:
        """(n,) the number of each row's group; zero for rows in none."""
        return np.pad(numbers, (SLOTS, 0))[self.cells.slot]

    def base_sums(self) -> tuple[Floats, Floats]:
        """(k, B, G) rows and powers of weights of those with an answer, and of the others."""
        powers = self.cells.buckets.powers(self.design.weights)
        heard, silent = self.inside, ~self.inside
        return (
            np.stack([self.sums(heard.astype(float)), *(self.sums(p * heard) for p in powers)]),
            np.stack([self.sums(silent.astype(float)), *(self.sums(p * silent) for p in powers)]),
        )


def _means(values: Floats, rows: _GroupedRows, base: CellBases) -> tuple[Floats, Floats]:
    """(G,) means in two passes, so that few digits are lost, and (n,) residuals about them."""
    size = np.where(base.size > 0, base.size, 1.0)
    found, residuals = np.zeros(len(size)), np.where(rows.inside, values, 0.0)
    for _ in range(2):
        step = (base.ratio * rows.weighted_sums(residuals)).sum(axis=0) / size
        found += step
        residuals = np.where(rows.inside, residuals - rows.by_group(step), 0.0)
    return found, residuals


def _spreads(value: Floats, residuals: Floats, rows: _GroupedRows, base: CellBases) -> Floats:
    """(G,) weighted variances of the values; zero where they are rounding noise."""
    size = np.where(base.size > 0, base.size, 1.0)
    spread = (base.ratio * rows.weighted_sums(residuals * residuals)).sum(axis=0) / size
    return np.where(spread <= (_NO_VARIATION * value) ** 2, 0.0, spread)


def _moments(residuals: Floats, grouped: _GroupedRows) -> Moments:
    """Moments of the residuals by bucket and group."""
    buckets, weights = grouped.cells.buckets, grouped.design.weights
    rows = grouped.sums(grouped.inside.astype(float))
    plain_total = grouped.sums(residuals)
    plain_squares = grouped.squares(residuals, plain_total, rows)
    if not buckets.vary:
        weight = buckets.weights[:, None]
        found = [weight * plain_total, weight * weight * plain_squares]
    else:
        weighed = weights * residuals
        total = grouped.sums(weighed)
        found = [total, grouped.squares(weighed, total, rows)]
    found += [plain_total, plain_squares]
    if buckets.need_inverse_weights:
        found += _of_inverse_weights(residuals, plain_total, rows, grouped)
    return Moments(*(numbers[:, :, None] for numbers in (rows, *found)))


def _of_inverse_weights(
    residuals: Floats, plain_total: Floats, rows: Floats, grouped: _GroupedRows
) -> list[Floats]:
    """Moments that second stages need where weights vary, in the order of their fields."""
    buckets = grouped.cells.buckets
    powers = buckets.powers(grouped.design.weights)
    weight, inverse, inverse_square = powers[0], powers[2], powers[3]
    total = grouped.sums(inverse * grouped.inside)
    apart = grouped.deviations(inverse, total, rows)
    cross = grouped.sums(grouped.deviations(residuals, plain_total, rows) * apart)
    outside = buckets.rows[:, None] - grouped.cells.sums(grouped.cell, None) > 0
    left = [
        np.where(outside, np.maximum(whole[:, None] - grouped.sums(power), 0.0), 0.0)
        for power in (inverse_square, weight)
        for whole in (np.bincount(buckets.of_rows, power, len(buckets.rows)),)
    ]
    return [cross, total, grouped.sums(apart * apart), *left]
