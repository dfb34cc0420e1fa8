"""How the rows sit in strata and clusters, and how much of the universe was drawn at each stage.

A *unit* is what was drawn first: a cluster where there are clusters, otherwise a row.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from estimators.array_checks import Bools, Codes, Floats, frozen

NamedCodes = tuple[Codes, tuple[str, ...]]

_ALL = 1e-12  # a sampling fraction this close to 1 is all there is


@dataclass(frozen=True, slots=True, eq=False)
class SamplingStages:
    """Integer codes and counts of both stages; H strata, C drawn units, n rows.

    Parameters
    ----------
    stratum : (n,) int
        Stratum of each row.
    unit : (n,) int or None
        Unit of each row; None where every row is a unit.
    unit_stratum : (C,) int
        Stratum of each unit.
    units_drawn : (H,) float
        Units drawn in each stratum.
    units_there : (H,) float
        Units the universe has in each stratum; infinite where that is unknown or endless.
    rows_drawn : (C,) float
        Rows in each unit.
    rows_there : (C,) float
        Members each unit has in the universe.
    response_group : (n,) int
        Group within which not answering is a matter of chance: the stratum, or the cluster.
    stratum_names : tuple of str
        Label of each stratum, for cautions; empty where no stratum is the caller's own.
    """

    stratum: Codes
    unit: Codes | None
    unit_stratum: Codes
    units_drawn: Floats
    units_there: Floats
    rows_drawn: Floats
    rows_there: Floats
    response_group: Codes
    stratum_names: tuple[str, ...]

    @property
    def fractions(self) -> Floats:
        """(H,) part of the units of each stratum that was drawn; 0 where unknown."""
        return self.units_drawn / self.units_there

    @property
    def is_corrected(self) -> bool:
        """Whether any stratum has a known number of units."""
        return bool(np.isfinite(self.units_there).any())

    @property
    def row_units(self) -> Codes:
        """(n,) unit of each row."""
        return np.arange(len(self.stratum)) if self.unit is None else self.unit

    @property
    def response_groups(self) -> int:
        """How many response groups there are."""
        return int(self.response_group.max()) + 1

    def endless(self) -> SamplingStages:
        """Return the same rows, drawn from endlessly many units."""
        return replace(self, units_there=frozen(np.full_like(self.units_there, np.inf)))


def stages_of_rows(stratum: Codes, rows_there: Floats, names: tuple[str, ...]) -> SamplingStages:
    """Describe a sample in which every row was drawn by itself.

    Parameters
    ----------
    stratum : (n,) int
        Stratum of each row.
    rows_there : (H,) float
        Universe of each stratum; infinite where unknown.
    names : tuple of str
        Label of each stratum.
    """
    stratum = frozen(stratum)
    ones = frozen(np.ones(len(stratum)))
    drawn = np.bincount(stratum, minlength=len(rows_there)).astype(float)
    return SamplingStages(
        stratum, None, stratum, frozen(drawn), frozen(rows_there), ones, ones, stratum, names
    )


def stages_of_clusters(
    strata: NamedCodes, clusters: NamedCodes, clusters_there: Floats, members: Floats
) -> SamplingStages:
    """Describe a sample of clusters; where all clusters were drawn they act as strata of rows.

    Parameters
    ----------
    strata, clusters : tuple of ((n,) int, names)
        Stratum and cluster of each row and what they are called; a cluster lies in one stratum.
    clusters_there : (H,) float
        Clusters each stratum has in the universe; infinite where unknown.
    members : (C,) float
        Members each drawn cluster has in the universe.
    """
    stratum, cluster = strata[0], clusters[0]
    home = _home(stratum, cluster, len(members))
    drawn = np.bincount(home, minlength=len(clusters_there))
    all_drawn = drawn >= clusters_there * (1 - _ALL)
    if all_drawn.any():
        turned = all_drawn[stratum]
        return _with_clusters_as_strata(strata, clusters, clusters_there, members, turned)
    return _two_stages(stratum, cluster, clusters_there, members, cluster, strata[1])


def _with_clusters_as_strata(
    strata: NamedCodes,
    clusters: NamedCodes,
    clusters_there: Floats,
    members: Floats,
    turned: Bools,
) -> SamplingStages:
    """Turn the clusters of the rows in ``turned`` into strata, and these rows into units."""
    (old, names), (cluster, cluster_names) = strata, clusters
    kinds, stratum = np.unique(np.where(turned, len(names) + cluster, old), return_inverse=True)
    there = np.concatenate([clusters_there, members])[kinds]
    new_names = tuple((*names, *cluster_names)[kind] for kind in kinds)
    if turned.all():
        return stages_of_rows(stratum.astype(np.intp), there, new_names)
    rows = np.arange(len(cluster))
    marks, unit = np.unique(np.where(turned, len(members) + rows, cluster), return_inverse=True)
    rows_there = np.concatenate([members, np.ones(len(rows))])[marks]
    group = np.unique(np.where(turned, len(marks) + stratum, unit), return_inverse=True)[1]
    return _two_stages(stratum, unit, there, rows_there, group, new_names)


def sums_by(codes: Codes, values: Floats, how_many: int) -> Floats:
    """Return (how_many,) sums of the values that carry each code."""
    return np.asarray(np.bincount(codes, weights=values, minlength=how_many), dtype=np.float64)


def counts_by(codes: Codes, mask: Bools | None, how_many: int) -> Floats:
    """Return (how_many,) how often each code stands inside the mask; None for everywhere."""
    return np.bincount(codes, weights=mask, minlength=how_many).astype(np.float64)


def _two_stages(
    stratum: Codes,
    unit: Codes,
    units_there: Floats,
    rows_there: Floats,
    group: Codes,
    names: tuple[str, ...],
) -> SamplingStages:
    home = _home(stratum, unit, len(rows_there))
    drawn = np.bincount(home, minlength=len(units_there)).astype(float)
    rows = np.bincount(unit, minlength=len(rows_there)).astype(float)
    return SamplingStages(
        stratum=frozen(stratum),
        unit=frozen(unit),
        unit_stratum=frozen(home),
        units_drawn=frozen(drawn),
        units_there=frozen(units_there),
        rows_drawn=frozen(rows),
        rows_there=frozen(rows_there),
        response_group=frozen(group),
        stratum_names=names,
    )


def _home(stratum: Codes, unit: Codes, how_many: int) -> Codes:
    """(C,) stratum of each unit."""
    home = np.zeros(how_many, np.intp)
    home[unit] = stratum
    return home
