"""From the variances of many groups to what is said about them: the arrays' twin of ``precision``.

Twin of :mod:`estimators.precision`, rule for rule.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import special

from estimators.array_checks import Bools, Floats
from estimators.cell_bases import CellBases

_NO_VARIATION = 1e-14
_EXACT = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class CellPrecision:
    """How much variances are worth; (G, A) each.

    Parameters
    ----------
    equivalent_base, effective_base : (G, A) float
        As in an Estimate.
    no_variation : (G, A) bool
        The variance is zero though not everybody was asked; the rest rests on a stand-in.
    """

    equivalent_base: Floats
    effective_base: Floats
    no_variation: Bools


def precision_of_cells(variance: Floats, spread: Floats, base: CellBases) -> CellPrecision:
    """Compare variances of means with those of simple random samples.

    Parameters
    ----------
    variance, spread : (G, A) float
        Of the estimates, NaN where unknown; weighted variance of the values.
    base : CellBases
        The groups; what is said of those without answers has no meaning.
    """
    rows, census = np.maximum(base.rows, 1)[:, None], base.counts.is_census[:, None]
    noise = np.isnan(variance) | (spread <= 0) | (variance < _NO_VARIATION * spread / rows)
    flat = noise & ~census
    usual = ~noise & ~census
    left, unseen = 1 - base.correction[:, None], 1 - base.part_asked[:, None]
    divisor = np.where(usual, (rows - 1) * variance, 1.0)
    measured = np.where(usual, spread, 1.0) * rows / divisor
    exact = usual & (left > 0) & (np.abs(measured * left / rows - 1) < _EXACT)
    positive = np.where(left > 0, left, 1.0)
    measured = np.where(exact, rows / positive, measured)
    effect = base.stand_in_effect[:, None]
    stand_in = np.where(left > 0, rows / (effect * positive), np.inf)
    equivalent = np.where(census, np.inf, np.where(flat, stand_in, measured))
    effective = _effective(equivalent, unseen, rows, flat)
    return CellPrecision(equivalent, np.where(census, rows, effective), flat)


def standard_errors(variance: Floats, degrees_of_freedom: Floats, flat: Bools) -> Floats:
    """(G, A) square roots; NaN where nothing varies and nothing was drawn independently."""
    unknown = (degrees_of_freedom[:, None] <= 0) & (flat | ~(variance > 0))
    return np.where(unknown, np.nan, np.sqrt(np.maximum(variance, 0.0)))


def t_quantiles(degrees_of_freedom: Floats, confidence: float) -> Floats:
    """(G,) two-sided quantiles of the t distribution; infinite without degrees of freedom."""
    df, upper = degrees_of_freedom, (1 + confidence) / 2
    some = (df > 0) & np.isfinite(df)
    student = special.stdtrit(np.where(some, df, 1.0), upper)
    return np.where(some, student, np.where(df > 0, special.ndtri(upper), np.inf))


def _effective(equivalent: Floats, unseen: Floats, rows: Floats, flat: Bools) -> Floats:
    """(G, A) base over design effect; where the universe was all asked as for single figures."""
    known = np.isfinite(equivalent) & (unseen > 0)
    found = np.where(known, equivalent, 0.0) * unseen
    return np.where(unseen > 0, found, np.where(flat, rows, 0.0))
