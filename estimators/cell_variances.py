"""Variances of the means or shares of many groups at once, from sums by bucket.

The formulas are those of :mod:`estimators.design_variance` and :mod:`estimators.response_variance`.
Squared deviations are put together from sums about the mean of each bucket, so that no digits
cancel.

References
----------
Cochran, W. G. (1977). Sampling Techniques, 3rd ed., equation 11.24 (two stages).
Särndal, C.-E., Swensson, B., Wretman, J. (1992). Model Assisted Survey Sampling, result 15.6.1
(response homogeneity groups).
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import Any

import numpy as np

from estimators.array_checks import Codes, Floats
from estimators.cell_bases import CellBases, CellCounts
from estimators.cell_buckets import Buckets


@dataclass(frozen=True, slots=True, eq=False)
class Moments:
    """Residuals of those who answered, by bucket; B buckets, G groups, A figures of each group.

    Parameters
    ----------
    rows : (B, G, 1) float
        Answers.
    total, squares : (B, G, A) float
        Sum of weight times residual, and of its squared deviations from the mean of the bucket.
    plain_total, plain_squares : (B, G, A) float
        The same without weights.
    cross, inverse, inverse_squares : float or (B, G, A) float
        Sum of products of the deviations of residual and inverse weight; sum of inverse weights,
        and of their squared deviations. Where second stages need them, else 0.
    outside_inverse_squares : float or (B, G, 1) float
        Sum of squared inverse weights of the rows outside the group.
    outside_weight : float or (B, G, 1) float
        Sum of the weights of the rows outside the group.
    """

    rows: Floats
    total: Floats
    squares: Floats
    plain_total: Floats
    plain_squares: Floats
    cross: Floats | float = 0.0
    inverse: Floats | float = 0.0
    inverse_squares: Floats | float = 0.0
    outside_inverse_squares: Floats | float = 0.0
    outside_weight: Floats | float = 0.0

    def of(self, groups: Codes) -> Moments:
        """Return the moments of some of the groups."""
        parts: list[Any] = [getattr(self, field.name) for field in fields(self)]
        chosen: list[Any] = [p if isinstance(p, float) else p[:, groups] for p in parts]
        return Moments(*chosen)


@dataclass(frozen=True, slots=True, eq=False)
class _Sums:
    """Contributions of rows to the estimate, by bucket, and the rows outside that add nothing."""

    rows: Floats
    total: Floats
    squares: Floats
    outside: Floats

    def inside_about(self, centre: Floats) -> Floats:
        """Sum of squared deviations of the rows inside from a number of each bucket."""
        middle = self.total / np.maximum(self.rows, 1)
        return self.squares + self.rows * (middle - centre) ** 2

    def squares_about(self, centre: Floats) -> Floats:
        """Sum of squared deviations of all kept rows from a number of each bucket."""
        return self.inside_about(centre) + self.outside * centre**2


def variances_of_means(moments: Moments, base: CellBases) -> Floats:
    """(G, A) variances of weighted means or shares of the groups.

    Parameters
    ----------
    moments : Moments
        Residuals about the mean of each group, zero outside the base.
    base : CellBases
        The groups.
    """
    follow = base.follow_response
    found = np.empty(moments.total.shape[1:])
    direct, later = np.flatnonzero(~follow), np.flatnonzero(follow)
    if not later.size:
        return _direct(moments, base)
    found[direct] = _direct(moments.of(direct), base.of(direct))
    found[later] = _of_both_phases(moments.of(later), base.of(later))
    return found


def _direct(moments: Moments, base: CellBases) -> Floats:
    """Variance of the sample, as if those who did not answer had not been asked."""
    counts, buckets = base.counts, base.buckets
    scale = (base.ratio / _positive(base.size))[:, :, None]
    outside = (counts.kept - base.answered)[:, :, None]
    sums = _Sums(moments.rows, scale * moments.total, scale**2 * moments.squares, outside)
    variance = _between(sums, buckets, counts)
    if _has_second_stage(buckets):
        centres = sums.total / np.maximum(counts.kept, 1)[:, :, None]
        if buckets.vary:
            lonely = _lonely_given(moments, centres, base)
        else:
            outer = buckets.weights[:, None, None]
            lonely = _lonely_alike(sums, centres, base.ratio[:, :, None] * outer, outer)
        variance += _within(sums, centres, lonely, buckets, counts)
    return variance * counts.subgroup_factor[:, None]


def _of_both_phases(moments: Moments, base: CellBases) -> Floats:
    """Variance of the sample asked, had all answered, plus that of who of it answered."""
    buckets, counts, groups = base.buckets, base.counts_of_asked(), _response_groups(moments, base)
    weights = buckets.weights[:, None, None] * base.scale[:, None]
    sums = _had_all_answered(moments, base, groups, weights)
    drawn = _between(sums, buckets, counts)
    if _has_second_stage(buckets):
        centres = sums.total / np.maximum(counts.kept, 1)[:, :, None]
        lonely = _lonely_alike(sums, centres, weights, weights)
        drawn += _within(sums, centres, lonely, buckets, counts)
    later, unseen = _parts_of_phases(buckets, counts)
    squares = buckets.response.first(weights) ** 2 * groups.spreads
    lonely_groups = (groups.answered == 1) & (groups.asked > 1)
    drawn += (unseen * squares * (groups.asked - 1) * lonely_groups).sum(axis=0)
    silent = groups.asked * (groups.asked - groups.answered) / np.maximum(groups.answered, 1)
    answers = np.asarray((later * squares * silent).sum(axis=0))
    return np.asarray(drawn * counts.subgroup_factor[:, None] + answers)


def _between(sums: _Sums, buckets: Buckets, counts: CellCounts) -> Floats:
    """Sum over strata of (1-f) n/(n-1) times the squared deviations of unit totals."""
    units, members = counts.units[:, :, None], counts.members[:, :, None]
    totals = buckets.strata.sums(sums.total)
    centres = totals / np.maximum(units, 1)
    single = (units == 1) & (members > 0)
    if single.any():
        in_base = np.maximum((units * (members > 0)).sum(axis=0), 1)
        centres = np.where(single, totals.sum(axis=0) / in_base, centres)
    if buckets.are_units:
        deviations = sums.total - buckets.strata.spread(centres)
        squares = buckets.strata.sums(deviations**2 * (counts.kept > 0)[:, :, None])
    else:
        squares = sums.squares_about(centres)
    factor = np.where(units > 1, units / np.maximum(units - 1, 1), 1.0)
    return np.asarray(((1 - counts.fractions[:, :, None]) * factor * squares).sum(axis=0))


def _within(
    sums: _Sums,
    centres: Floats,
    lonely: tuple[Floats, Floats],
    buckets: Buckets,
    counts: CellCounts,
) -> Floats:
    """Sum over units of f (1-g) m/(m-1) times the squared deviations of their rows.

    ``lonely`` serves units with one row: squared deviations over squared weights, and its weight.
    """
    kept = counts.kept[:, :, None]
    spread = sums.squares_about(centres) * kept / np.maximum(kept - 1, 1)
    values, weights = lonely
    pairs = np.maximum(buckets.strata.sums(np.maximum(kept - 1, 0)), 1)
    pooled = buckets.strata.spread(buckets.strata.sums(values) / pairs)
    spread = np.where(kept == 1, weights**2 * pooled, spread)
    unseen = np.maximum(1 - counts.row_fractions, 0.0)
    part = buckets.strata.spread(counts.fractions) * unseen
    return np.asarray((part[:, :, None] * spread).sum(axis=0))


def _lonely_alike(
    sums: _Sums, centres: Floats, inner: Floats, outer: Floats
) -> tuple[Floats, Floats]:
    """Deviations over weights, and weights, where the rows of a unit inside a group weigh alike."""
    inside, outside = sums.inside_about(centres), sums.outside * centres**2
    values = inside * _inverse(inner) ** 2 + outside * _inverse(outer) ** 2
    return values, np.where(sums.rows > 0, inner, outer)


def _lonely_given(moments: Moments, centres: Floats, base: CellBases) -> tuple[Floats, Floats]:
    """Return the same where weights vary within units."""
    ratio, size = base.ratio[:, :, None], _positive(base.size)[:, None]
    rows, some = np.maximum(moments.rows, 1), moments.rows > 0
    slope = centres / ratio  # what an inverse weight is multiplied by
    middle = moments.plain_total / rows / size - slope * (moments.inverse / rows)
    inside = (
        moments.plain_squares / size**2
        - 2 * slope * moments.cross / size
        + slope**2 * moments.inverse_squares
    )
    values = np.maximum(inside, 0.0) + moments.rows * middle**2
    alone = ratio * np.where(some, _inverse(np.asarray(moments.inverse)), 0.0)
    return (
        values + centres**2 * moments.outside_inverse_squares,
        np.where(some, alone, moments.outside_weight),
    )


@dataclass(frozen=True, slots=True, eq=False)
class _ResponseGroups:
    """Rows, mean residual and variance of residuals of each response group; (K, G, 1 or A)."""

    asked: Floats
    answered: Floats
    centres: Floats
    spreads: Floats


def _response_groups(moments: Moments, base: CellBases) -> _ResponseGroups:
    gather, size = base.buckets.response, _positive(base.size)[:, None]
    total, squares = moments.plain_total / size, moments.plain_squares / size**2
    asked, answered = gather.sums(base.asked)[:, :, None], gather.sums(base.answered)[:, :, None]
    centres = gather.sums(total) / np.maximum(answered, 1)
    apart = total / np.maximum(moments.rows, 1) - gather.spread(centres)
    within = gather.sums(squares + moments.rows * apart**2)
    pairs = np.maximum(answered - 1, 0)
    spreads = np.where(pairs > 0, within / np.maximum(pairs, 1), 0.0)
    pooled = _pooled(within, centres, answered, pairs)
    lonely = (answered == 1) & (asked > 1)
    return _ResponseGroups(asked, answered, centres, np.where(lonely, pooled, spreads))


def _pooled(within: Floats, centres: Floats, answered: Floats, pairs: Floats) -> Floats:
    """(G, A) variance within groups, pooled; that of all answers where every group has one."""
    all_pairs, rows = pairs.sum(axis=0), answered.sum(axis=0)
    overall = (answered * centres).sum(axis=0) / np.maximum(rows, 1)
    all_squares = (within + answered * (centres - overall) ** 2).sum(axis=0)
    of_all = np.where(rows > 1, all_squares / np.maximum(rows - 1, 1), 0.0)
    return np.where(all_pairs > 0, within.sum(axis=0) / np.maximum(all_pairs, 1), of_all)


def _had_all_answered(
    moments: Moments, base: CellBases, groups: _ResponseGroups, weights: Floats
) -> _Sums:
    """Contributions of all who were asked: the answers stretched, the others at their centre."""
    spread, size = base.buckets.response.spread, _positive(base.size)[:, None]
    stretch = spread(np.sqrt(np.maximum(groups.asked - 1, 0) / np.maximum(groups.answered - 1, 1)))
    centres, asked = spread(groups.centres), base.asked[:, :, None]
    shift = stretch * (moments.plain_total / size / np.maximum(moments.rows, 1) - centres)
    silent = asked - moments.rows
    apart = moments.rows * silent / np.maximum(asked, 1) * shift**2
    return _Sums(
        asked,
        weights * (asked * centres + moments.rows * shift),
        weights**2 * (stretch**2 * moments.plain_squares / size**2 + apart),
        (base.buckets.rows[:, None] - base.asked)[:, :, None],
    )


def _parts_of_phases(buckets: Buckets, counts: CellCounts) -> tuple[Floats, Floats]:
    """(K, G, 1) how much of the draw of answers is still to be added, and of the draw of rows."""
    gather = buckets.response
    fraction = gather.first(buckets.strata.spread(counts.fractions))[:, :, None]
    if not buckets.are_units:
        return np.ones_like(fraction), 1 - fraction
    unseen = 1 - gather.first(counts.row_fractions)[:, :, None]
    alone = (gather.sums(np.ones(len(buckets.rows))) == 1)[:, None, None]
    later = np.where(alone, fraction, 1.0)
    return later, np.where(alone, fraction * unseen, 1 - fraction)


def _has_second_stage(buckets: Buckets) -> bool:
    return buckets.are_units and buckets.stages.is_corrected


def _positive(numbers: Floats) -> Floats:
    """Numbers to divide by, 1 for groups in which nobody answered."""
    return np.where(numbers > 0, numbers, 1.0)


def _inverse(numbers: Floats) -> Floats:
    return np.divide(1.0, numbers, out=np.zeros_like(numbers), where=numbers > 0)
