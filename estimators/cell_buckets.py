"""The smallest parts of a sample that tables of cells add up over: its strata or its clusters."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from estimators.array_checks import Bools, Codes, Floats
from estimators.linearized_values import answered_base
from estimators.sample_designs import SampleDesign
from estimators.sampling_stages import SamplingStages

_SAME = 1e-12


@dataclass(frozen=True, slots=True, eq=False)
class Gathering:
    """How buckets sit in larger groups: adds up over them, or hands a number down to them.

    Parameters
    ----------
    codes : (B,) int
        Group of each bucket; every group has at least one.
    order : (B,) int or None
        Buckets in the order of their groups; None where every bucket is its own group.
    starts : (K,) int
        Where each group begins in that order.
    """

    codes: Codes
    order: Codes | None
    starts: Codes

    def sums(self, numbers: Floats | Bools) -> Floats:
        """(K, ...) sums over the buckets of each group."""
        numbers = np.asarray(numbers, dtype=np.float64)
        if self.order is None:
            return numbers
        if len(self.starts) == 1:
            return np.asarray(numbers.sum(axis=0, keepdims=True))
        return np.asarray(np.add.reduceat(numbers[self.order], self.starts, axis=0))

    def first(self, numbers: Floats) -> Floats:
        """(K, ...) number of one bucket of each group."""
        return numbers if self.order is None else numbers[self.order[self.starts]]

    def spread(self, numbers: Floats) -> Floats:
        """(B, ...) number of the group of each bucket."""
        return numbers if self.order is None else numbers[self.codes]


@dataclass(frozen=True, slots=True, eq=False)
class Buckets:
    """Strata where rows were drawn one by one, else the units drawn first; B buckets, n rows.

    Parameters
    ----------
    stages : SamplingStages
        Strata, clusters and fractions.
    of_rows : (n,) int
        Bucket of each row.
    rows : (B,) float
        Rows of each bucket.
    weights : (B,) float
        Weight of its rows; of any one of them where they vary.
    vary : bool
        Whether rows of one bucket weigh differently somewhere.
    weights_given : bool
        Whether the weights came from outside.
    groups_weigh_alike : bool
        Whether rows weigh the same wherever not answering is a matter of chance.
    universe_is_known : bool
        Whether it is known what part of the universe was asked.
    strata, response : Gathering
        Stratum of each bucket, and group within which not answering is a matter of chance.
    """

    stages: SamplingStages
    of_rows: Codes
    rows: Floats
    weights: Floats
    vary: bool
    weights_given: bool
    groups_weigh_alike: bool
    universe_is_known: bool
    strata: Gathering
    response: Gathering

    @property
    def are_units(self) -> bool:
        """Whether buckets are what was drawn first, and not strata of rows."""
        return self.stages.unit is not None

    @property
    def need_inverse_weights(self) -> bool:
        """Whether the second stage may ask for answers apart from their weights."""
        return self.vary and self.are_units and self.stages.is_corrected

    @property
    def kinds(self) -> int:
        """How many sums each cell needs: rows, weights, squares and those of inverse weights."""
        if not self.vary:
            return 1
        return 5 if self.need_inverse_weights else 3

    def powers(self, weights: Floats) -> list[Floats]:
        """Powers of the weights that are added up cell by cell beside the rows."""
        found = [weights, weights * weights] if self.vary else []
        if self.need_inverse_weights:
            inverse = np.divide(1.0, weights, out=np.zeros_like(weights), where=weights > 0)
            found += [inverse, inverse * inverse]
        return found


def buckets_of(design: SampleDesign) -> Buckets:
    """Find the buckets of a design."""
    stages = design.stages
    units = stages.unit is not None
    of_rows = stages.row_units if units else stages.stratum
    size = len(stages.rows_drawn) if units else len(stages.units_drawn)
    home = stages.unit_stratum if units else np.arange(size)
    weights = np.zeros(size)
    weights[of_rows] = design.weights
    vary, alike = _compared(design, weights if size == 1 else weights[of_rows])
    return Buckets(
        stages=stages,
        of_rows=of_rows,
        rows=stages.rows_drawn if units else stages.units_drawn,
        weights=weights,
        vary=vary,
        weights_given=design.weights_given,
        groups_weigh_alike=alike,
        universe_is_known=answered_base(design, None, None).universe_is_known,
        strata=_gathering(home),
        response=_gathering(home if design.weights_given else _response(stages, of_rows, size)),
    )


def _compared(design: SampleDesign, of_bucket: Floats) -> tuple[bool, bool]:
    """Whether weights vary within buckets, and are alike where not answering is by chance."""
    if not design.weights_given:
        return False, True
    vary = bool((design.weights != of_bucket).any())
    if not vary or design.stages.unit is not None:
        return vary, design.stages.unit is None
    return True, bool((np.abs(design.weights - of_bucket) <= _SAME * design.weights).all())


def _response(stages: SamplingStages, of_rows: Codes, size: int) -> Codes:
    """(B,) response group of each bucket: all rows of a bucket belong to one."""
    found = np.zeros(size, np.intp)
    found[of_rows] = stages.response_group
    return found


def _gathering(codes: Codes) -> Gathering:
    size = len(codes)
    if np.array_equal(codes, np.arange(size)):
        return Gathering(codes, None, codes)
    order = np.argsort(codes, kind="stable")
    starts = np.flatnonzero(np.diff(codes[order], prepend=-1))
    return Gathering(codes, order, starts)
