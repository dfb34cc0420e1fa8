"""Weights of samples that could as well have been drawn, made from the one that was.

Both methods give the linearised variance of :mod:`estimators.design_variance` for every sum: the
jackknife exactly, the bootstrap on average over its random numbers. In two stages the factor of
a row is that of its cluster times its own; their variances 1 - f and f(1 - g)/(2 - f) make the
product right, because the mean square of the first factor is 2 - f.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal, get_args

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.array_checks import Bools, Codes, Floats, as_count, frozen
from estimators.errors import InputError
from estimators.linearized_values import AnsweredBase, answered_base
from estimators.resampled_units import (
    Resampling,
    deletions,
    resampling,
    single_changes,
)
from estimators.results import Caution
from estimators.sample_designs import SampleDesign
from estimators.sampling_stages import sums_by

Changes = NDArray[np.floating]
ReplicateMethod = Literal["bootstrap", "jackknife"]

_ENTRIES = 2**21  # factors held at a time
_ALL = 1 - 1e-12


@dataclass(frozen=True, slots=True, eq=False)
class ReplicateWeights:
    """Replicate weights of one base, made block by block and never all held; n rows.

    Parameters
    ----------
    base : AnsweredBase
        Who the figures are about, and the weights of the sample itself.
    method : str
        bootstrap or jackknife.
    scales : (R,) float, read-only
        What the squared deviation of each replicate from the estimate counts in the variance.
    seed : int
        Of the random numbers of the bootstrap.
    units : Resampling
        First stage: units within strata.
    rows : Resampling or None
        Second stage: rows within units; None where it adds no variance.
    """

    base: AnsweredBase
    method: str
    scales: Floats
    seed: int
    units: Resampling
    rows: Resampling | None

    @property
    def replicates(self) -> int:
        """How many there are."""
        return len(self.scales)

    @property
    def weights(self) -> Floats:
        """(n,) weights of the sample itself, zero for rows without an answer in the base."""
        return self.base.weights

    @property
    def cautions(self) -> tuple[Caution, ...]:
        """What has to be known about the sample and the base."""
        return self.base.cautions

    def blocks(self) -> Iterator[Floats]:
        """Yield (r, n) replicate weights until all R are there; the same at every call."""
        unit = self.base.design.stages.row_units
        for changes in self.changes():
            by_row = changes if changes.shape[1] == len(unit) else changes[:, unit]
            yield (1.0 + by_row.astype(np.float64)) * self.weights

    def changes(self) -> Iterator[Changes]:
        """Yield (r, K) replicate weights over weights, minus 1.

        A column is a row of the sample where the second stage is redrawn, and a unit where not.
        """
        return self._redrawn() if self.method == "bootstrap" else self._left_out()

    def _redrawn(self) -> Iterator[Changes]:
        chance = np.random.default_rng(self.seed)
        errors, compared = _single_units(self.base)
        unit = self.base.design.stages.row_units
        for _, size in self._parts(self.replicates):
            changes = self.units.changes(chance, size)
            if errors.any():
                changes += single_changes(chance, size, errors, compared)
            if self.rows is not None:
                within = self.rows.changes(chance, size)
                changes = (1 + changes[:, unit]) * (1 + within) - 1
            yield changes

    def _left_out(self) -> Iterator[Changes]:
        stages, counts = self.base.design.stages, self.base.counts
        units, present = _units_left_out(self.base), _present(self.base)
        errors, compared = _single_units(self.base)
        for start, size in self._parts(len(units)):
            members = units[start : start + size]
            changes = deletions(stages.unit_stratum, present, members)
            changes -= np.outer(errors[members] > 0, compared / max(compared.sum(), 1))
            yield changes if self.rows is None else changes[:, stages.row_units]
        if self.rows is not None:
            kept = np.ones(len(stages.stratum), bool) if counts.kept is None else counts.kept
            rows = _rows_left_out(self.base, self.rows.parts)
            for start, size in self._parts(len(rows)):
                yield deletions(stages.row_units, kept, rows[start : start + size])

    def _parts(self, how_many: int) -> Iterator[tuple[int, int]]:
        columns = len(self.units.group) if self.rows is None else len(self.rows.group)
        step = max(1, _ENTRIES // columns)
        return ((start, min(step, how_many - start)) for start in range(0, how_many, step))


def replicate_weights(
    design: SampleDesign,
    *,
    where: ArrayLike | None = None,
    answered: ArrayLike | None = None,
    method: ReplicateMethod = "bootstrap",
    replicates: int = 1000,
    seed: int = 0,
) -> ReplicateWeights:
    """Make replicate weights, from which any statistic of weights gets its variance.

    Parameters
    ----------
    design : SampleDesign
        How the n rows were drawn.
    where, answered : (n,) bool, optional
        Who the figures are about, and who of them gave an answer; as for
        :func:`estimators.means_and_totals.mean`.
    method : {"bootstrap", "jackknife"}
        The rescaled bootstrap, c - 1 of the c units of each stratum redrawn, then the rows within
        them; or leaving out each unit in turn, then each row where the second stage counts.
    replicates : int
        How many, for the bootstrap; the jackknife has one for each unit (and row).
    seed : int
        Of the random numbers: the same seed gives the same weights.

    Returns
    -------
    ReplicateWeights
        Nothing is made before it is asked for. No weight is negative, except where a stratum has
        a single unit, or a cluster a single row whose variance others of its stratum stand for.

    Raises
    ------
    InputError
        If the method is unknown, a number is not whole, arrays do not fit the design, nobody
        answered, or a single unit is all there is to go by.

    References
    ----------
    Rao, J. N. K., Wu, C. F. J., Yue, K. (1992). Survey Methodology 18, 209-217.
    Wolter, K. M. (2007). Introduction to Variance Estimation, 2nd ed., section 4.5.
    """
    _check_method(method)
    how_many, start = as_count(replicates, "replicates"), as_count(seed, "seed", least=0)
    base = answered_base(design, where, answered)
    _refuse_too_little(base)
    stages, counts = design.stages, base.counts
    second = _second_stage_parts(base)
    rows = None
    if second.any():
        kept = np.ones(design.n, bool) if counts.kept is None else counts.kept
        unseen = 2 - counts.fractions[stages.unit_stratum]
        rows = resampling(
            stages.row_units, kept, second / unseen if method == "bootstrap" else second
        )
    units = resampling(stages.unit_stratum, _present(base), 1 - counts.fractions)
    scales = (
        np.full(how_many, 1 / how_many) if method == "bootstrap" else _scales_left_out(base, second)
    )
    return ReplicateWeights(base, method, frozen(scales), start, units, rows)


def _present(base: AnsweredBase) -> Bools:
    """(C,) units with rows that are not asked in vain."""
    kept = base.counts.kept_units
    return np.ones(len(base.design.stages.unit_stratum), bool) if kept is None else kept


def _single_units(base: AnsweredBase) -> tuple[Floats, Bools]:
    """(C,) root of the part not drawn for units alone in a stratum of the base, and its units."""
    stages, counts = base.design.stages, base.counts
    alone = (counts.units == 1) & (counts.members > 0) & (counts.fractions < _ALL)
    of_stratum = np.where(alone, np.sqrt(np.maximum(1 - counts.fractions, 0.0)), 0.0)
    present = _present(base)
    compared = present & (counts.members > 0)[stages.unit_stratum]
    return of_stratum[stages.unit_stratum] * present, compared


def _second_stage_parts(base: AnsweredBase) -> Floats:
    """(C,) part f(1 - g) of the variance within each unit that adds to that between units.

    The rows of units with more than one stand also for units of their stratum with a single row,
    by the squares of the weights and the pooled variance of the values.
    """
    stages, counts = base.design.stages, base.counts
    home = stages.unit_stratum
    if stages.unit is None or not counts.fractions.any():
        return np.zeros(len(home))
    rows = counts.rows
    parts = counts.fractions[home] * np.maximum(1 - counts.row_fractions, 0.0)
    parts = np.where(parts < 1 - _ALL, 0.0, parts)
    alone = (rows == 1) & (parts > 0)
    if not alone.any():
        return parts
    kept = base.row_weights if counts.kept is None else base.row_weights * counts.kept
    squares = (sums_by(stages.unit, kept, len(rows)) / np.maximum(rows, 1)) ** 2
    strata = len(counts.units)
    owed = sums_by(home, np.where(alone, parts * squares, 0.0), strata)
    pairs = np.maximum(sums_by(home, np.maximum(rows - 1, 0), strata), 1)
    extra = (owed / pairs)[home] * (rows - 1) / np.maximum(rows * squares, 1e-300)
    return np.where(rows > 1, parts + extra, 0.0)


def _units_left_out(base: AnsweredBase) -> Codes:
    """Units to be left out in turn: those of strata that were not drawn completely."""
    left = base.counts.fractions[base.design.stages.unit_stratum] < _ALL
    alone, _ = _single_units(base)
    several = (base.counts.units > 1)[base.design.stages.unit_stratum]
    return np.flatnonzero(_present(base) & left & (several | (alone > 0)))


def _rows_left_out(base: AnsweredBase, parts: Floats) -> Codes:
    """Rows to be left out in turn: those of units whose second stage counts."""
    unit, kept = base.design.stages.row_units, base.counts.kept
    varies = (parts > 0)[unit]
    return np.flatnonzero(varies if kept is None else varies & kept)


def _scales_left_out(base: AnsweredBase, second: Floats) -> Floats:
    """(R,) (1-f)(c-1)/c for a unit, f(1-g)(m-1)/m for a row; 1-f for a unit alone."""
    stages, counts = base.design.stages, base.counts
    units = stages.unit_stratum[_units_left_out(base)]
    size = counts.units[units]
    between = (1 - counts.fractions[units]) * np.where(size > 1, (size - 1) / size, 1.0)
    rows = stages.row_units[_rows_left_out(base, second)]
    within = second[rows] * (counts.rows[rows] - 1) / np.maximum(counts.rows[rows], 1)
    return np.concatenate([between, within])


def _check_method(method: str) -> None:
    if method not in get_args(ReplicateMethod):
        known = " or ".join(get_args(ReplicateMethod))
        raise InputError("method", repr(method), f"must be {known}", "choose one of these")


def _refuse_too_little(base: AnsweredBase) -> None:
    if base.rows == 0 or base.counts.degrees_of_freedom <= 0:
        raise InputError(
            "answered",
            f"{base.rows:,} answers in the base",
            "must leave at least two units that were drawn independently",
            "use a larger group",
        )
