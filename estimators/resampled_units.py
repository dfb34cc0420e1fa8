"""Resampling within groups: by how much each drawn unit, or row of a unit, counts more or less.

A factor is written as its distance from 1, so that a sum over the sample needs only what changes.

References
----------
Rao, J. N. K., Wu, C. F. J., Yue, K. (1992). Some recent work on resampling methods for complex
surveys. Survey Methodology 18, 209-217 (equation for the weights with n - 1 units redrawn).
Wolter, K. M. (2007). Introduction to Variance Estimation, 2nd ed., chapter 4 (jackknife).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from estimators.array_checks import Codes, Floats

Changes = NDArray[np.float32]

_BITS = np.uint64(32)
_PIECE = 2**17  # factors made at a time, few enough for the cache of a processor
_KINDS = 2**16  # of a 16-bit number
_LARGE = 400  # members of a group from which Poisson counts save time
_SELDOM = 4  # standard deviations
_LEAST = 0.5  # a unit without another in its stratum never counts less than this part of itself


@dataclass(frozen=True, slots=True, eq=False)
class Resampling:
    """Members of groups that are redrawn within their group; K members, G groups.

    Parameters
    ----------
    group : (K,) int
        Group of each member.
    parts : (G,) float
        Part of the variance between members that is to be shown; 0 where nothing is to vary.
    order : (J,) int
        Members that are redrawn, group by group.
    firsts : (g,) int
        Where each group starts in ``order``.
    starts, sizes : (S,) uint64
        For each of the S members redrawn: where its group starts in ``order``, and how many
        members that group has.
    stretches : (J,) float32
        In the same order, how much one more draw adds.
    drops : (J,) float32
        In the same order, what a member loses that is not drawn.
    rarities : (65536,) float32 or None
        Where all groups are large: Poisson counts, each as often as it is likely.
    """

    group: Codes
    parts: Floats
    order: Codes
    firsts: Codes
    starts: NDArray[np.uint64]
    sizes: NDArray[np.uint64]
    stretches: Changes
    drops: Changes
    rarities: Changes | None

    def changes(self, chance: np.random.Generator, replicates: int) -> Changes:
        """(replicates, K) factors minus 1: mean 0, and the variance of a sum they give is right."""
        members, redrawn = len(self.group), len(self.order)
        in_place = 0 < redrawn == members and bool((self.order == np.arange(members)).all())
        changes = (np.empty if in_place else np.zeros)((replicates, members), np.float32)
        step = max(1, _PIECE // members)
        for start in range(0, replicates if redrawn else 0, step):
            piece = changes[start : start + step]
            found = self._counts(chance, len(piece))
            np.multiply(found, self.stretches, out=piece if in_place else found)
            if in_place:
                piece -= self.drops
            else:
                piece[:, self.order] = found - self.drops
        return changes

    def _counts(self, chance: np.random.Generator, replicates: int) -> Changes:
        """(replicates, J) how often each member is drawn."""
        if self.rarities is not None:
            return self._counts_of_large(chance, replicates, self.rarities)
        redrawn, draws = len(self.order), len(self.sizes)
        raw = chance.integers(0, 2**64, (replicates * draws + 1) // 2, dtype=np.uint64)
        fractions = raw.view(np.uint32)[: replicates * draws].reshape(replicates, draws)
        places = np.multiply(fractions, self.sizes, dtype=np.uint64)  # in units of 2**-32
        places >>= _BITS
        places += self.starts
        places += (np.arange(replicates, dtype=np.uint64) * np.uint64(redrawn))[:, None]
        drawn = np.bincount(places.view(np.int64).ravel(), minlength=replicates * redrawn)
        return drawn.reshape(replicates, redrawn).astype(np.float32)

    def _counts_of_large(
        self, chance: np.random.Generator, replicates: int, rarities: Changes
    ) -> Changes:
        """Do the same in a third of the time: independent Poisson counts, then the draws they lack.

        Given their sum, independent Poisson counts are plain draws, and so are the draws added.
        Chances are kept to 1 in 65,536, the same for every member of a group.
        """
        shape = (replicates, len(self.order))
        raw = chance.integers(0, 2**64, shape[0] * shape[1] // 4 + 1, dtype=np.uint64)
        counts = rarities.take(raw.view(np.uint16)[: shape[0] * shape[1]].reshape(shape))
        starts, ends = self.firsts, np.append(self.firsts[1:], shape[1])
        wanted = ends - starts - 1
        lacks = wanted - np.add.reduceat(counts, starts, axis=1).astype(np.intp)
        for row, group in np.argwhere(lacks < 0):  # too many: this group is drawn afresh
            counts[row, starts[group] : ends[group]] = 0
            lacks[row, group] = wanted[group]
        offsets = np.arange(replicates)[:, None] * shape[1] + starts
        sizes = np.broadcast_to(ends - starts, lacks.shape).ravel()
        fractions = chance.random(int(lacks.sum()))
        places = (fractions * np.repeat(sizes, lacks.ravel())).astype(np.intp)
        np.add.at(counts.reshape(-1), places + np.repeat(offsets, lacks.ravel()), np.float32(1))
        return counts


def resampling(group: Codes, present: NDArray[np.bool_], parts: Floats) -> Resampling:
    """Prepare redrawing c - 1 of the c members of each group, with replacement.

    Parameters
    ----------
    group : (K,) int
        Group of each member.
    present : (K,) bool
        Members that count; the others are neither drawn nor changed.
    parts : (G,) float
        Variance of the factor of a member, as a part of that of plain redrawing.
    """
    counts = np.bincount(group[present], minlength=len(parts))
    varies = present & (counts > 1)[group] & (parts > 0)[group]
    order = np.flatnonzero(varies)
    order = order[np.argsort(group[order], kind="stable")]
    redrawn = np.where((counts > 1) & (parts > 0), counts, 0)
    starts = np.cumsum(redrawn) - redrawn
    draws = np.maximum(redrawn - 1, 0)
    reach = np.sqrt(np.maximum(parts, 0.0))
    ratio = np.divide(redrawn, draws, out=np.zeros(len(parts)), where=draws > 0)
    return Resampling(
        group=group,
        parts=parts,
        order=order,
        firsts=starts[redrawn > 0],
        starts=np.repeat(starts, draws).astype(np.uint64),
        sizes=np.repeat(redrawn, draws).astype(np.uint64),
        stretches=(reach * ratio)[group[order]].astype(np.float32),
        drops=reach[group[order]].astype(np.float32),
        rarities=_rarities(int(redrawn[redrawn > 0].min(initial=np.iinfo(np.int64).max))),
    )


def _rarities(smallest: int) -> Changes | None:
    """Poisson counts by likelihood, with a mean that seldom gives more draws than wanted."""
    if not _LARGE <= smallest < np.iinfo(np.int64).max:
        return None
    mean = 1 - 1 / smallest - _SELDOM / math.sqrt(smallest)
    likely = np.cumsum([math.exp(-mean) * mean**k / math.factorial(k) for k in range(16)])
    ranks = (np.arange(_KINDS) + 0.5) / _KINDS
    return np.searchsorted(likely, ranks).astype(np.float32)


def single_changes(
    chance: np.random.Generator, replicates: int, errors: Floats, compared: NDArray[np.bool_]
) -> Changes:
    """(replicates, C) changes by units alone in their stratum, each against all units.

    Parameters
    ----------
    chance : Generator
        Random numbers.
    replicates : int
        How many.
    errors : (C,) float
        Root of the part not drawn for units alone in their stratum; 0 for all others.
    compared : (C,) bool
        Units whose mean such a unit is compared with.
    """
    alone = np.flatnonzero(errors)
    low = 1 - _LEAST  # two values with mean 0 and variance 1, the smaller one -low
    rises = chance.random((replicates, len(alone))) < low**2 / (1 + low**2)
    steps = np.where(rises, 1 / low, -low) * errors[alone]
    changes = np.zeros((replicates, len(errors)))
    changes[:, alone] = steps
    changes -= steps.sum(axis=1, keepdims=True) / compared.sum() * compared
    return changes.astype(np.float32)


def deletions(group: Codes, present: NDArray[np.bool_], members: Codes) -> Floats:
    """(r, K) factors minus 1 when each of the r members is left out in turn.

    The others of its group share what it counted. A member alone in its group counts twice
    instead, against all: the sign does not matter for a variance.
    """
    counts = np.bincount(group[present], minlength=int(group.max()) + 1)
    sizes = counts[group[members]]
    others = (group == group[members][:, None]) & present
    changes: Floats = others / np.maximum(sizes - 1.0, 1.0)[:, None]
    changes[np.arange(len(members)), members] = np.where(sizes > 1, -1.0, 1.0)
    return changes
