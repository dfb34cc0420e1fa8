"""Sums by cell, from which every share of every table follows; sums of parts of a file add up.

A cell is an answer of a question in a group of a grouping, counted within each bucket of the
sample: a stratum, or a cluster where clusters were drawn. Rows are read in blocks that stay in
the processor's cache, and one pass counts several questions at once: it counts their joint codes,
of which the single questions are margins.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from math import prod

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.array_checks import Bools, Codes, Floats, as_mask, frozen
from estimators.cell_buckets import Buckets, buckets_of
from estimators.cell_codes import (
    Coded,
    coded_columns,
    refuse_unknown_codes,
    refuse_unnamed_groupings,
)
from estimators.errors import InputError
from estimators.sample_designs import SampleDesign

OUTSIDE, NO_GROUP = 0, 1  # slots before the groups: not in the base, in it but in no group
SLOTS = 2
EVERYONE = ""

_BLOCK = 2**15  # rows that stay in the cache
_JOINT_CELLS = 2**12  # joint cells that are counted as fast as a few
_ALIKE = 1e-9  # squared spread below which weights are compared one by one

Pair = tuple[str, str]


@dataclass(frozen=True, slots=True, eq=False)
class CellSums:
    """Sums by cell of the rows of a file, or of parts of it; parts of one file can be added.

    Parameters
    ----------
    questions, groupings : tuple of (name, how many)
        Answers of each question and groups of each grouping.
    spans : tuple of (first, last)
        The rows that were counted, last exclusive.
    sums : {(question, grouping): (k, B, G + 2, A + 1) float}
        Rows and, where the weights need it, sums of powers of them; by bucket, group (after those
        outside the base and those in no group) and answer (after those who gave none).
    extremes : {(question, grouping): (2, B, G + 2) float}
        Smallest and largest weight of those who answered, where that matters; infinite where they
        certainly differ.
    """

    questions: tuple[tuple[str, int], ...]
    groupings: tuple[tuple[str, int], ...]
    spans: tuple[tuple[int, int], ...]
    sums: Mapping[Pair, Floats]
    extremes: Mapping[Pair, Floats]

    def __add__(self, other: CellSums) -> CellSums:
        """Return the sums of both parts together."""
        if (self.questions, self.groupings) != (other.questions, other.groupings):
            raise InputError(
                "cells",
                "parts with other questions, groupings or numbers of codes",
                "must be counted alike to be added",
                "count every part with the same codes={name: how many}",
            )
        return CellSums(
            self.questions,
            self.groupings,
            _joined(self.spans + other.spans),
            {pair: frozen(sums + other.sums[pair]) for pair, sums in self.sums.items()},
            {pair: _wider(found, other.extremes[pair]) for pair, found in self.extremes.items()},
        )


@dataclass(frozen=True, slots=True, eq=False)
class _Part:
    """Checked rows to be counted."""

    answers: Coded
    groupings: Coded
    buckets: Buckets
    rows: slice
    weights: Floats
    base: Bools | None

    def slots(self, name: str, here: slice) -> tuple[Codes, int]:
        """Bucket and slot of the rows of a block in one number, and how many there are."""
        codes, groups = self.groupings[name]
        slot = np.add(codes[here], SLOTS, dtype=np.intp)
        if self.base is not None:
            slot[~self.base[here]] = OUTSIDE
        size = groups + SLOTS
        if len(self.buckets.rows) > 1:
            slot += self.buckets.of_rows[self.rows][here] * size
        return slot, len(self.buckets.rows) * size


def cells_of(
    answers: Mapping[str, ArrayLike],
    groupings: Mapping[str, ArrayLike],
    design: SampleDesign,
    *,
    rows: tuple[int, int] | None = None,
    where: ArrayLike | None = None,
    codes: Mapping[str, int] | None = None,
) -> CellSums:
    """Count the cells of a file, or of some of its rows.

    Parameters
    ----------
    answers, groupings : {name: (m,) int}
        Codes from 0 of the rows counted; -1 where there is no answer or no group.
    design : SampleDesign
        How all n rows of the file were drawn.
    rows : tuple of (first, last), optional
        Which rows of the file these m are, last exclusive; all when not given.
    where : (m,) bool, optional
        Who of them the figures are about.
    codes : {name: how many}, optional
        Answers of a question, or groups of a grouping; give them when counting parts of a file.

    Returns
    -------
    CellSums
        To be added to those of other rows. Their size does not depend on the number of rows.

    Raises
    ------
    InputError
        If arrays do not fit the rows, or codes are not whole numbers from -1.
    """
    first, last = _span(rows, design.n)
    refuse_unnamed_groupings(groupings)
    refuse_unknown_codes(codes, answers, groupings)
    split = coded_columns(groupings, "groupings", last - first, codes)
    part = _Part(
        answers=coded_columns(answers, "answers", last - first, codes),
        groupings=split or {EVERYONE: (np.full(last - first, -1, np.int8), 0)},
        buckets=buckets_of(design),
        rows=slice(first, last),
        weights=design.weights[first:last],
        base=_base(as_mask(where, "where", last - first), design, slice(first, last)),
    )
    sums = _counted(part)
    asks_for_extremes = part.buckets.vary and not design.replacement
    known = design.population_size is not None
    return CellSums(
        tuple((name, how_many) for name, (_, how_many) in part.answers.items()),
        tuple((name, how_many) for name, (_, how_many) in part.groupings.items()),
        ((first, last),),
        sums,
        {pair: _extremes(part, pair, sums[pair]) for pair in sums if asks_for_extremes and known},
    )


def _base(where: Bools | None, design: SampleDesign, rows: slice) -> Bools | None:
    """(m,) rows the figures are about; a row without weight speaks for nobody."""
    if not design.has_zero_weights:
        return where
    speaks = design.weights[rows] > 0
    return speaks if where is None else where & speaks


def _counted(part: _Part) -> dict[Pair, Floats]:
    """Count every pair of a question and a grouping."""
    buckets, rows = len(part.buckets.rows), len(part.weights)
    largest = buckets * (SLOTS + max(groups for _, groups in part.groupings.values()))
    bundles = list(_bundles({name: size + 1 for name, (_, size) in part.answers.items()}, largest))
    kinds = part.buckets.kinds
    found = {
        (number, name): np.zeros((kinds, buckets * (SLOTS + groups) * prod(bundle.values())))
        for number, bundle in enumerate(bundles)
        for name, (_, groups) in part.groupings.items()
    }
    block = max(_BLOCK, 4 * max((sums.shape[1] for sums in found.values()), default=0))
    for start in range(0, rows, block):
        _add_block(part, bundles, found, slice(start, min(start + block, rows)))
    pairs: dict[Pair, Floats] = {}
    for (number, name), sums in found.items():
        shape = (kinds, buckets, SLOTS + part.groupings[name][1], *bundles[number].values())
        for place, question in enumerate(bundles[number]):
            others = tuple(3 + k for k in range(len(bundles[number])) if k != place)
            margin = sums.reshape(shape).sum(axis=others) if others else sums.reshape(shape)
            margin.setflags(write=False)
            pairs[question, name] = margin
    return pairs


def _bundles(sizes: Mapping[str, int], groups: int) -> Iterator[dict[str, int]]:
    """Questions that one pass counts together, small ones first."""
    bundle: dict[str, int] = {}
    for name in sorted(sizes, key=lambda question: sizes[question]):
        if bundle and groups * prod(bundle.values()) * sizes[name] > _JOINT_CELLS:
            yield bundle
            bundle = {}
        bundle[name] = sizes[name]
    if bundle:
        yield bundle


def _add_block(
    part: _Part, bundles: list[dict[str, int]], found: dict[tuple[int, str], Floats], here: slice
) -> None:
    """Count one block of rows into what was found before."""
    powers = part.buckets.powers(part.weights[here])
    slots = {name: part.slots(name, here)[0] for name in part.groupings}
    cell = np.empty(here.stop - here.start, np.intp)
    for number, bundle in enumerate(bundles):
        joint, size = _joint_codes(part, bundle, here), prod(bundle.values())
        for name, slot in slots.items():
            np.multiply(slot, size, out=cell)
            np.add(cell, joint, out=cell)
            sums = found[number, name]
            sums[0] += np.bincount(cell, minlength=sums.shape[1])
            for kind, power in enumerate(powers, start=1):
                sums[kind] += np.bincount(cell, power, sums.shape[1])


def _joint_codes(part: _Part, bundle: dict[str, int], here: slice) -> Codes:
    """(m,) one number for the answers to all questions of a bundle."""
    joint: Codes | None = None
    for name, size in bundle.items():
        code = np.add(part.answers[name][0][here], 1, dtype=np.intp)
        joint = code if joint is None else joint * size + code
    return np.zeros(here.stop - here.start, np.intp) if joint is None else joint


def _extremes(part: _Part, pair: Pair, sums: Floats) -> Floats:
    """(2, B, G + 2) smallest and largest weight of the answers; looked up only where near."""
    count, weight, square = sums[:3, :, :, 1:].sum(axis=-1)
    near = count * square - weight * weight <= _ALIKE * weight * weight
    near[:, OUTSIDE] = False
    low = np.where(count == 0, np.inf, np.where(count == 1, weight, -np.inf))
    high = np.where(count == 0, -np.inf, np.where(count == 1, weight, np.inf))
    near &= count > 1
    if near.any():
        slot, _ = part.slots(pair[1], slice(0, len(part.weights)))
        rows = np.flatnonzero(near.ravel()[slot] & (part.answers[pair[0]][0] >= 0))
        low[near], high[near] = np.inf, -np.inf
        np.minimum.at(low.ravel(), slot[rows], part.weights[rows])
        np.maximum.at(high.ravel(), slot[rows], part.weights[rows])
    return frozen(np.stack([low, high]))


def _wider(first: Floats, second: Floats) -> Floats:
    return frozen(np.stack([np.minimum(first[0], second[0]), np.maximum(first[1], second[1])]))


def _span(rows: tuple[int, int] | None, n: int) -> tuple[int, int]:
    first, last = (0, n) if rows is None else rows
    if not 0 <= first <= last <= n:
        raise InputError(
            "rows",
            rows,
            f"must lie within the {n:,} rows of the design",
            "pass the first row and the one after the last",
        )
    return int(first), int(last)


def _joined(spans: tuple[tuple[int, int], ...]) -> tuple[tuple[int, int], ...]:
    """Spans in order, those that touch made one; rows counted twice are refused."""
    joined: list[tuple[int, int]] = []
    for first, last in sorted(span for span in spans if span[0] < span[1]):
        if joined and first < joined[-1][1]:
            raise InputError(
                "cells",
                f"row {first} in two parts",
                "must not count a row twice",
                "add every part of the file once",
            )
        if joined and first == joined[-1][1]:
            first = joined.pop()[0]
        joined.append((first, last))
    return tuple(joined)


def question_cells(cells: CellSums, question: str) -> tuple[Floats, Floats | None]:
    """Return the sums of one question side by side: everyone, then every group of every grouping.

    Returns
    -------
    tuple of (sums, extremes)
        (k, B, groups, A + 1) and (2, B, groups) or None.
    """
    names = [name for name, _ in cells.groupings]
    found = [cells.sums[question, name] for name in names]
    everyone = found[0][:, :, NO_GROUP:].sum(axis=2, keepdims=True)
    sums: NDArray[np.float64] = np.concatenate(
        [everyone, *(part[:, :, SLOTS:] for part in found)], axis=2
    )
    if not cells.extremes:
        return sums, None
    weights = [cells.extremes[question, name] for name in names]
    low = weights[0][0, :, NO_GROUP:].min(axis=1, keepdims=True)
    high = weights[0][1, :, NO_GROUP:].max(axis=1, keepdims=True)
    return sums, np.concatenate(
        [np.stack([low, high]), *(part[:, :, SLOTS:] for part in weights)], axis=2
    )
