"""From sums by cell to shares, their variances and what is known about them.

The residual of a row is 1 - p where it chose the answer and -p where it chose another, so that all
its moments are polynomials of the sums of both cells. Sums over the other answers are added up, not
subtracted from the whole, so that no digits cancel.
"""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np

from estimators.array_checks import Bools, Floats
from estimators.cell_bases import CellBases, cell_bases
from estimators.cell_buckets import Buckets
from estimators.cell_precision import precision_of_cells, standard_errors
from estimators.cell_variances import Moments, variances_of_means
from estimators.sample_designs import SampleDesign
from estimators.share_evidence import ShareEvidence

_MANY = 2**18  # numbers worked on at once


@dataclass(frozen=True, slots=True, eq=False)
class CellShares:
    """Shares of G groups and A answers before their intervals; NaN where nobody answered.

    Parameters
    ----------
    base, asked : (G, A) float
        Rows with an answer, and rows of the group.
    share, standard_error, degrees_of_freedom, effective_base : (G, A) float
        As in an :class:`estimators.results.Estimate`.
    equivalent_base, sampling_fraction, stand_in_effect, universe : (G, A) float
        As in :class:`estimators.share_evidence.ShareEvidence`.
    no_variation : (G, A) bool
        Where the answers do not differ though not everybody was asked.
    """

    base: Floats
    asked: Floats
    share: Floats
    standard_error: Floats
    degrees_of_freedom: Floats
    effective_base: Floats
    equivalent_base: Floats
    sampling_fraction: Floats
    stand_in_effect: Floats
    universe: Floats
    no_variation: Bools

    def evidence(self, design: SampleDesign) -> ShareEvidence:
        """Say what the sample knows about the shares, all at once."""
        everyone = bool((self.asked[self.base > 0] == design.n).all())
        return ShareEvidence(
            share=self.share,
            base=self.base,
            equivalent_base=self.equivalent_base,
            sampling_fraction=self.sampling_fraction,
            degrees_of_freedom=self.degrees_of_freedom,
            stand_in_effect=self.stand_in_effect,
            universe=self.universe,
            simple_random=everyone and design.is_simple and design.stages.is_corrected,
        )


def shares_of_cells(
    sums: Floats, extremes: Floats | None, buckets: Buckets, design: SampleDesign
) -> CellShares:
    """Estimate the shares of one question.

    Parameters
    ----------
    sums : (k, B, G, A + 1) float
        Rows and sums of powers of weights, first of those who gave no answer.
    extremes : (2, B, G) float or None
        Smallest and largest weight of the answers, where that matters.
    buckets, design
        The sample.
    """
    whole = sums_of_buckets(buckets, design) if buckets.need_inverse_weights else None
    step = max(1, _MANY // (sums.shape[1] * sums.shape[3]))
    parts = [
        _of_groups(
            sums[:, :, here],
            None if extremes is None else extremes[:, :, here],
            whole,
            buckets,
            design,
        )
        for here in (slice(k, k + step) for k in range(0, sums.shape[2], step))
    ]
    names = [field.name for field in fields(CellShares)]
    return CellShares(*(np.concatenate([getattr(p, name) for p in parts]) for name in names))


def sums_of_buckets(buckets: Buckets, design: SampleDesign) -> Floats:
    """(k, B) rows and sums of powers of weights of all rows of each bucket."""
    size = len(buckets.rows)
    powers = buckets.powers(design.weights)
    return np.stack([buckets.rows, *(np.bincount(buckets.of_rows, p, size) for p in powers)])


def _of_groups(
    sums: Floats,
    extremes: Floats | None,
    whole: Floats | None,
    buckets: Buckets,
    design: SampleDesign,
) -> CellShares:
    answered, silent = np.ascontiguousarray(sums[..., 1:]), sums[..., 0]
    heard = _over_answers(answered, np.ones((answered.shape[-1], 1)))[..., 0]
    base = cell_bases(design, buckets, (heard, silent), extremes)
    share = _shares(answered, base)
    left = None if whole is None else whole[:, :, None] - heard - silent
    variance = variances_of_means(_moments(answered, left, share, base), base)
    precision = precision_of_cells(variance, share * (1 - share), base)
    df = base.counts.degrees_of_freedom
    fraction = np.where(base.counts.is_census, 1.0, base.correction)
    some = base.rows[:, None] > 0

    def wide(numbers: Floats) -> Floats:
        """One number for each group, or NaN where nobody answered, for every answer."""
        return (
            np.where(some, numbers if numbers.ndim == 2 else numbers[:, None], np.nan) + 0 * share
        )

    return CellShares(
        base=np.where(some, base.rows[:, None], 0.0) + 0 * share,
        asked=base.rows_asked[:, None] + 0 * share,
        share=wide(share),
        standard_error=wide(standard_errors(variance, df, precision.no_variation)),
        degrees_of_freedom=wide(df),
        effective_base=wide(precision.effective_base),
        equivalent_base=wide(np.where(precision.no_variation, np.nan, precision.equivalent_base)),
        sampling_fraction=wide(fraction),
        stand_in_effect=wide(base.stand_in_effect),
        universe=wide(base.most_units),
        no_variation=precision.no_variation & some,
    )


def _shares(sums: Floats, base: CellBases) -> Floats:
    """(G, A) weighted share of every answer."""
    rows, size = np.maximum(base.rows, 1)[:, None], base.size[:, None]
    counted: Floats = sums[0].sum(axis=0) / rows
    weights = sums[1] if base.buckets.vary else base.buckets.weights[:, None, None] * sums[0]
    weighted = (base.ratio[:, :, None] * weights).sum(axis=0) / np.where(size > 0, size, 1.0)
    shares: Floats = np.where(base.equal_weights[:, None], counted, np.minimum(weighted, 1.0))
    return shares


def _moments(sums: Floats, left: Floats | None, share: Floats, base: CellBases) -> Moments:
    """Moments of the residuals about the shares.

    Parameters
    ----------
    sums : (k, B, G, A) float
        Sums of every answer.
    left : (k, B, G) float or None
        Sums of the rows outside the group, where weights vary within units.
    share : (G, A) float
        Share of every answer.
    base : CellBases
        The groups.
    """
    others = _over_answers(sums, 1 - np.eye(sums.shape[-1]))
    rows = base.answered[:, :, None]
    both = sums[0] * others[0] / np.maximum(rows, 1)
    plain_total = (1 - share) * sums[0] - share * others[0]
    if not base.buckets.vary:
        weight = base.buckets.weights[:, None, None]
        return Moments(rows, weight * plain_total, weight * weight * both, plain_total, both)
    high, low = _means(sums[1], sums[0]), _means(others[1], others[0])
    total = (1 - share) * sums[1] - share * others[1]
    squares = (
        (1 - share) ** 2 * _squares(sums[2], sums[1], sums[0])
        + share**2 * _squares(others[2], others[1], others[0])
        + both * ((1 - share) * high + share * low) ** 2
    )
    if left is None:
        return Moments(rows, total, squares, plain_total, both)
    apart = _means(sums[3], sums[0]) - _means(others[3], others[0])
    inner = _squares(sums[4], sums[3], sums[0]) + _squares(others[4], others[3], others[0])
    outside = (base.buckets.rows[:, None] - base.asked) > 0
    left = np.where(outside, np.maximum(left, 0.0), 0.0)[..., None]
    return Moments(
        rows=rows,
        total=total,
        squares=squares,
        plain_total=plain_total,
        plain_squares=both,
        cross=both * apart,
        inverse=sums[3] + others[3],
        inverse_squares=inner + both * apart**2,
        outside_inverse_squares=left[4],
        outside_weight=left[1],
    )


def _over_answers(sums: Floats, which: Floats) -> Floats:
    """(..., m) sums over the answers marked in the columns of ``which``, all in one product."""
    flat = sums.reshape(-1, sums.shape[-1]) @ which
    return np.asarray(flat.reshape(*sums.shape[:-1], -1))


def _means(total: Floats, rows: Floats) -> Floats:
    return total / np.maximum(rows, 1)


def _squares(square: Floats, total: Floats, rows: Floats) -> Floats:
    """Squared deviations from the mean of each cell."""
    return np.where(rows > 1, np.maximum(square - total * _means(total, rows), 0.0), 0.0)
