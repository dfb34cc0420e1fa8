"""What a figure is based on, counted in units and strata: who was asked, who answered.

Not having answered is not the same as being outside the base: rows that were asked and did not
answer drop out, as if response were one more random draw, and rows outside stay and count as zero.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from estimators import cautions as caution
from estimators.array_checks import Bools, Floats
from estimators.results import Caution
from estimators.sampling_stages import SamplingStages, counts_by

_ALL = 1 - 1e-12  # a sampling fraction from here on is all there is


@dataclass(frozen=True, slots=True, eq=False)
class BaseCounts:
    """Counts behind one base; H strata, C units, n rows.

    Parameters
    ----------
    kept : (n,) bool or None
        Rows inside the base or outside of it, without those asked in vain; None for all rows.
    units : (H,) float
        Units with at least one kept row.
    kept_units : (C,) bool or None
        Which units these are; None for all.
    members : (H,) float
        Units with at least one answer in the base.
    fractions : (H,) float
        Part of the units of each stratum that was drawn and answered.
    rows : (C,) float
        Kept rows of each unit.
    row_fractions : (C,) float
        Part of the members of each unit that was drawn and answered.
    cautions : tuple of Caution
        About strata and stages.
    """

    kept: Bools | None
    units: Floats
    kept_units: Bools | None
    members: Floats
    fractions: Floats
    rows: Floats
    row_fractions: Floats
    cautions: tuple[Caution, ...]

    @property
    def sampled(self) -> Bools:
        """(H,) strata with answers in the base that were not drawn completely."""
        return (self.members > 0) & (self.fractions < _ALL)

    @property
    def is_census(self) -> bool:
        """Whether the base lies in strata drawn completely, so that nothing is left to chance."""
        return not bool(self.sampled.any())

    @property
    def degrees_of_freedom_of_totals(self) -> float:
        """Units minus strata, over the sampled strata of the base; infinite in a census."""
        sampled = self.sampled
        if not sampled.any():
            return math.inf
        return float(self.units[sampled].sum() - sampled.sum())

    @property
    def degrees_of_freedom(self) -> float:
        """The same, but no more than the units with answers minus 1."""
        sampled = self.sampled
        if not sampled.any():
            return math.inf
        return min(self.degrees_of_freedom_of_totals, float(self.members[sampled].sum()) - 1)

    @property
    def subgroup_factor(self) -> float:
        """What the variance of a mean, share or ratio is multiplied by: k(c-1) / ((k-1)c).

        k units have answers in the base, c units lie in the strata of the base. NaN where one
        unit is all there is to go by.
        """
        k = float(self.members.sum())
        c = float(self.units[self.members > 0].sum())
        if k > 1:
            return k * (c - 1) / ((k - 1) * c)
        return 1.0 if self.is_census else math.nan


def count_base(stages: SamplingStages, where: Bools | None, base: Bools | None) -> BaseCounts:
    """Count a base.

    Parameters
    ----------
    stages : SamplingStages
        Strata and clusters.
    where : (n,) bool or None
        Who the figure is about.
    base : (n,) bool or None
        Who of them answered; None for all rows.
    """
    kept = None if base is where else _kept(where, base)
    rows = stages.rows_drawn if kept is None else _per_unit(stages, kept)
    kept_units = None if kept is None or rows.all() else rows > 0
    answered = _per_unit(stages, base)
    asked = answered if base is where else _per_unit(stages, where)
    members = _units_per_stratum(stages, answered)
    response = _units_per_stratum(stages, asked)
    drawn_there = stages.units_drawn * members
    fractions = np.where(
        members > 0, drawn_there / np.maximum(response, 1) / stages.units_there, stages.fractions
    )
    row_fractions = _row_fractions(stages, answered, asked)
    fractions, not_measured = _without_unmeasured(stages, fractions, rows, row_fractions)
    units = stages.units_drawn if kept_units is None else _per_stratum(stages, kept_units)
    notes = [caution.SECOND_STAGE_NOT_MEASURED] if not_measured else []
    notes += _single_unit_strata(stages, units, members, fractions)
    return BaseCounts(
        kept, units, kept_units, members, fractions, rows, row_fractions, tuple(notes)
    )


def design_degrees_of_freedom(stages: SamplingStages) -> float:
    """Return units minus strata, over strata that were not drawn completely."""
    return count_base(stages, None, None).degrees_of_freedom_of_totals


def _kept(where: Bools | None, base: Bools | None) -> Bools | None:
    """Rows that are not asked in vain; None where that is nobody."""
    if base is None:
        return None
    in_vain = ~base if where is None else where & ~base
    return ~in_vain if in_vain.any() else None


def _per_unit(stages: SamplingStages, rows: Bools | None) -> Floats:
    """(C,) rows of each unit that are in the mask."""
    if rows is None:
        return stages.rows_drawn
    if stages.unit is None:
        return rows.astype(float)
    return counts_by(stages.unit, rows, len(stages.rows_drawn))


def _per_stratum(stages: SamplingStages, units: Bools) -> Floats:
    """(H,) units of each stratum that are in the mask."""
    return counts_by(stages.unit_stratum, units, len(stages.units_drawn))


def _units_per_stratum(stages: SamplingStages, rows_of_unit: Floats) -> Floats:
    """(H,) units of each stratum with at least one such row."""
    if rows_of_unit is stages.rows_drawn:
        return stages.units_drawn
    return _per_stratum(stages, rows_of_unit > 0)


def _row_fractions(stages: SamplingStages, answered: Floats, asked: Floats) -> Floats:
    """(C,) part of its members that was drawn in a unit, times the part of those that answered."""
    if stages.unit is None:
        return stages.rows_drawn
    drawn = stages.rows_drawn / stages.rows_there
    return np.where(asked > 0, drawn * answered / np.maximum(asked, 1), drawn)


def _without_unmeasured(
    stages: SamplingStages, fractions: Floats, rows: Floats, row_fractions: Floats
) -> tuple[Floats, bool]:
    """Take strata as drawn from endlessly many units where no unit shows its second stage."""
    if stages.unit is None or not fractions.any():
        return fractions, False
    strata = len(fractions)
    alone = ((rows == 1) & (row_fractions < _ALL)).astype(float)
    alone_in = np.bincount(stages.unit_stratum, weights=alone, minlength=strata)
    pairs = np.bincount(stages.unit_stratum, weights=np.maximum(rows - 1, 0), minlength=strata)
    unmeasured = (alone_in > 0) & (pairs == 0) & (fractions > 0)
    return np.where(unmeasured, 0.0, fractions), bool(unmeasured.any())


def _single_unit_strata(
    stages: SamplingStages, units: Floats, members: Floats, fractions: Floats
) -> list[Caution]:
    """Name strata with one unit that is not all there is."""
    single = (units == 1) & (members > 0) & (fractions < _ALL)
    if not single.any() or len(units) == 1 or not stages.stratum_names:
        return []
    return [
        caution.single_cluster_strata([stages.stratum_names[h] for h in np.flatnonzero(single)])
    ]
