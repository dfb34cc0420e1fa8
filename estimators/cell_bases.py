"""Bases of many groups at once: the arithmetic of single figures, as arrays.

Everything here says for G groups and B buckets what :mod:`estimators.linearized_values` and
:mod:`estimators.design_counts` say for one base.
"""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np

from estimators.array_checks import Bools, Codes, Floats
from estimators.cell_buckets import Buckets
from estimators.sample_designs import SampleDesign

_ALL = 1 - 1e-12  # a sampling fraction from here on is all there is
_SAME = 1e-12
_CLUSTER_LIKENESS = 0.05  # as for single figures


@dataclass(frozen=True, slots=True, eq=False)
class CellCounts:
    """Units and fractions of G groups; H strata, B buckets.

    Parameters
    ----------
    kept : (B, G) float
        Rows inside a group or outside of it, without those asked in vain.
    units, members : (H, G) float
        Units with kept rows, and with an answer in the group.
    fractions : (H, G) float
        Part of the units that was drawn and answered.
    row_fractions : (B, G) float
        Part of the members of each unit that was drawn and answered; 1 where rows are units.
    """

    kept: Floats
    units: Floats
    members: Floats
    fractions: Floats
    row_fractions: Floats

    @property
    def sampled(self) -> Bools:
        """(H, G) strata with answers in the group that were not drawn completely."""
        return np.asarray((self.members > 0) & (self.fractions < _ALL))

    @property
    def is_census(self) -> Bools:
        """(G,) whether nothing is left to chance."""
        return np.asarray(~self.sampled.any(axis=0))

    @property
    def degrees_of_freedom(self) -> Floats:
        """(G,) the smaller of units minus strata and units with answers minus 1."""
        sampled = self.sampled
        of_totals = (self.units * sampled).sum(axis=0) - sampled.sum(axis=0)
        of_members = (self.members * sampled).sum(axis=0) - 1
        return np.where(self.is_census, np.inf, np.minimum(of_totals, of_members))

    @property
    def subgroup_factor(self) -> Floats:
        """(G,) k(c-1) / ((k-1)c), NaN where one unit is all there is to go by."""
        k = self.members.sum(axis=0)
        c = (self.units * (self.members > 0)).sum(axis=0)
        factor = k * (c - 1) / np.maximum((k - 1) * c, 1)
        return np.where(k > 1, factor, np.where(self.is_census, 1.0, np.nan))

    def of(self, groups: Codes) -> CellCounts:
        """Return the counts of some of the groups."""
        return CellCounts(*(getattr(self, field.name)[:, groups] for field in fields(self)))


@dataclass(frozen=True, slots=True, eq=False)
class CellBases:
    """Who G groups are about and who of them answered, with the weights that follow.

    Parameters
    ----------
    design : SampleDesign
        The sample.
    buckets : Buckets
        Its buckets.
    asked, answered : (B, G) float
        Rows.
    ratio : (B, G) float
        What the weights of those who answered are multiplied by to speak for the others too.
    scale : (G,) float
        The part of it that is the same in every bucket.
    size, squares : (G,) float
        Sum of these weights, and of their squares.
    equal_weights : (G,) bool
        Whether all who answered have the same weight.
    counts : CellCounts
        Units and fractions.
    """

    design: SampleDesign
    buckets: Buckets
    asked: Floats
    answered: Floats
    ratio: Floats
    scale: Floats
    size: Floats
    squares: Floats
    equal_weights: Bools
    counts: CellCounts

    @property
    def rows(self) -> Floats:
        """(G,) rows that answered."""
        return np.asarray(self.answered.sum(axis=0))

    @property
    def rows_asked(self) -> Floats:
        """(G,) rows the group has."""
        return np.asarray(self.asked.sum(axis=0))

    @property
    def follow_response(self) -> Bools:
        """(G,) whether the draw of the answers can be told from the draw of the rows."""
        return np.asarray((self.rows < self.rows_asked) & self.buckets.groups_weigh_alike)

    @property
    def part_asked(self) -> Floats:
        """(G,) rows over the units they speak for; 0 where the universe is unknown."""
        design, rows = self.design, self.rows
        if not self.buckets.universe_is_known:
            return np.zeros_like(rows)
        if design.is_simple and design.stages.is_corrected:
            return np.asarray(self.counts.fractions[0], dtype=float)
        sized = self.size > 0
        return np.where(sized, np.minimum(rows / np.where(sized, self.size, 1.0), 1.0), 0.0)

    @property
    def correction(self) -> Floats:
        """(G,) part of the universe asked where that takes error away."""
        return np.where(self.counts.fractions.any(axis=0), self.part_asked, 0.0)

    @property
    def stand_in_effect(self) -> Floats:
        """(G,) loss by unequal weights and clusters where answers show no variation."""
        some = np.maximum(self.rows, 1)
        weighs = (self.size > 0) & ~self.equal_weights
        loss = some * self.squares / np.where(weighs, self.size, 1.0) ** 2
        per_unit = some / np.maximum(self.counts.members.sum(axis=0), 1)
        alike = 1 + (per_unit - 1) * _CLUSTER_LIKENESS
        return np.asarray(np.where(weighs, loss, 1.0) * alike)

    @property
    def most_units(self) -> Floats:
        """(G,) units a group can have at most; NaN where rows speak for different numbers."""
        design, asked = self.design, self.rows_asked
        if design.population_size is None or design.replacement:
            return np.full_like(asked, np.nan)
        part_of_census = self.counts.is_census & (asked < design.n)
        most = float(design.population_size - design.n) + asked
        return np.where(part_of_census | ~self.equal_weights, np.nan, most)

    def of(self, groups: Codes) -> CellBases:
        """Return some of the groups."""
        return replace(
            self,
            asked=self.asked[:, groups],
            answered=self.answered[:, groups],
            ratio=self.ratio[:, groups],
            scale=self.scale[groups],
            size=self.size[groups],
            squares=self.squares[groups],
            equal_weights=self.equal_weights[groups],
            counts=self.counts.of(groups),
        )

    def counts_of_asked(self) -> CellCounts:
        """Count the groups as if all had answered."""
        return count_cells(self.buckets, self.asked, self.asked)


def cell_bases(
    design: SampleDesign,
    buckets: Buckets,
    sums: tuple[Floats, Floats],
    extremes: Floats | None,
) -> CellBases:
    """Find the bases of G groups.

    Parameters
    ----------
    design, buckets
        The sample.
    sums : tuple of ((k, B, G) float, (k, B, G) float)
        Rows and sums of powers of weights of those who answered, and of those who did not.
    extremes : (2, B, G) float or None
        Smallest and largest weight of those who answered, where the weights of a bucket vary.
    """
    heard, silent = sums
    answered, asked = heard[0], heard[0] + silent[0]
    weights = buckets.weights[:, None]
    if buckets.vary:
        weight, square, weight_asked = heard[1], heard[2], heard[1] + silent[1]
    else:
        weight, square, weight_asked = (
            weights * answered,
            weights * weights * answered,
            weights * asked,
        )
    ratio, scale = _ratio(buckets, (asked, answered), (weight_asked, weight))
    return CellBases(
        design=design,
        buckets=buckets,
        asked=asked,
        answered=answered,
        ratio=ratio,
        scale=scale,
        size=(ratio * weight).sum(axis=0),
        squares=(ratio * ratio * square).sum(axis=0),
        equal_weights=_equal(buckets, ratio, answered, extremes),
        counts=count_cells(buckets, asked, answered),
    )


def count_cells(buckets: Buckets, asked: Floats, answered: Floats) -> CellCounts:
    """Count units and fractions of groups; (B, G) rows asked and answered."""
    stages, by_stratum = buckets.stages, buckets.strata.sums
    kept = buckets.rows[:, None] - (asked - answered)
    units, members, response = kept, answered, asked
    if buckets.are_units:
        units, members, response = (by_stratum(x > 0) for x in (kept, answered, asked))
    drawn, there = stages.units_drawn[:, None], stages.units_there[:, None]
    part = drawn * members / np.maximum(response, 1) / there
    fractions = np.where(members > 0, part, stages.fractions[:, None])
    if not buckets.are_units:
        return CellCounts(kept, units, members, fractions, np.ones_like(kept))
    drawn = (stages.rows_drawn / stages.rows_there)[:, None]
    row_fractions = np.where(asked > 0, drawn * answered / np.maximum(asked, 1), drawn)
    alone = by_stratum((kept == 1) & (row_fractions < _ALL))
    pairs = by_stratum(np.maximum(kept - 1, 0))
    fractions = np.where((alone > 0) & (pairs == 0), 0.0, fractions)
    return CellCounts(kept, units, members, fractions, row_fractions)


def _ratio(
    buckets: Buckets, rows: tuple[Floats, Floats], weights: tuple[Floats, Floats]
) -> tuple[Floats, Floats]:
    """(B, G) weight asked over weight that answered, and (G,) what keeps the sum of weights."""
    missing = np.asarray((rows[0] > rows[1]).any(axis=0))
    if not missing.any():
        return np.ones_like(rows[0]), np.ones(len(missing))
    asked, heard = (buckets.response.sums(x) for x in (weights if buckets.weights_given else rows))
    some = heard > 0
    of_group = np.where(some, asked / np.where(some, heard, 1.0), 1.0)
    ratio = buckets.response.spread(of_group)
    counted = (ratio * weights[1]).sum(axis=0)
    known = missing & (counted > 0)
    scale = np.where(known, weights[0].sum(axis=0) / np.where(known, counted, 1.0), 1.0)
    return np.where(known, ratio * scale, 1.0), scale


def _equal(buckets: Buckets, ratio: Floats, answered: Floats, extremes: Floats | None) -> Bools:
    """(G,) whether all who answered have the same weight; False where that does not matter."""
    if buckets.vary and extremes is None:
        return np.zeros(answered.shape[1], dtype=bool)
    low, high = (buckets.weights[:, None],) * 2 if extremes is None else extremes
    some = answered > 0
    least = np.where(some, low * ratio, np.inf).min(axis=0)
    most = np.where(some, high * ratio, -np.inf).max(axis=0)
    known = np.isfinite(least) & np.isfinite(most)
    apart = np.where(known, most, 0.0) - np.where(known, least, 0.0)
    return np.asarray(known & (apart <= _SAME * np.where(known, least, 0.0)))
