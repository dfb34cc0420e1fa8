"""Strata, clusters and sampling fractions of a sample that comes with weights."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike

from estimators.array_checks import Codes, Floats, as_count
from estimators.design_parts import (
    Counts,
    Strata,
    cluster_codes,
    clusters_there,
    names_of,
    refuse_more_than_there,
    stratum_sizes,
)
from estimators.errors import InputError
from estimators.sampling_stages import SamplingStages, stages_of_clusters, stages_of_rows

_ROUNDING = 1e-9


def universe_of_weights(
    population_size: int | Counts | None, strata: Strata, *, clustered: bool
) -> int | None:
    """Return the units in the universe, all strata together; None where nothing is said."""
    if population_size is None:
        return None
    if isinstance(population_size, Mapping):
        if clustered:
            raise InputError(
                "population_size",
                "a number for each stratum",
                "must be one whole number when there are clusters",
                "give the clusters of each stratum as population_clusters",
            )
        return int(stratum_sizes(population_size, strata, "population_size").sum())
    size = as_count(population_size, "population_size")
    refuse_more_than_there(len(strata[0]), size, "population_size", "rows")
    return size


def weighted_stages(
    weights: Floats,
    strata: Strata,
    clusters: ArrayLike | None,
    population_size: int | Counts | None,
    population_clusters: int | Counts | None,
    *,
    scaled: bool,
) -> SamplingStages:
    """Return the stages of a weighted sample; ``scaled`` weights say how many units there are."""
    codes, labels = strata
    if clusters is None:
        _refuse_clusters_without_labels(population_clusters)
        there = _units_there(weights, strata, population_size)
        return stages_of_rows(codes, there, names_of(labels))
    cluster = cluster_codes(clusters, codes)
    there = clusters_there(population_clusters, strata, cluster[0])
    rows = np.bincount(cluster[0]).astype(float)
    members = _members(weights, strata, cluster[0], there) if scaled else rows
    return stages_of_clusters(
        (codes, names_of(labels)), (cluster[0], names_of(cluster[1])), there, members
    )


def _units_there(weights: Floats, strata: Strata, population_size: int | Counts | None) -> Floats:
    """(H,) units of each stratum; one number for several strata is split as the weights say."""
    codes, labels = strata
    if population_size is None:
        return np.full(len(labels), np.inf)
    if isinstance(population_size, Mapping):
        return stratum_sizes(population_size, strata, "population_size")
    size = as_count(population_size, "population_size")
    if len(labels) == 1:
        return np.array([float(size)])
    rows = np.bincount(codes, minlength=len(labels)).astype(float)
    estimated = np.bincount(codes, weights=weights) * (size / weights.sum())
    sensible = estimated >= rows * (1 - _ROUNDING)  # else the fraction of the whole sample
    return np.where(sensible, np.maximum(estimated, rows), rows * (size / len(codes)))


def _members(weights: Floats, strata: Strata, cluster: Codes, there: Floats) -> Floats:
    """(C,) members of each drawn cluster: its weights times the part of the clusters drawn.

    A weight is the product of both stages, so what the first stage leaves of it says how many
    members of its cluster a row speaks for. Never fewer than the rows seen, which is the answer
    where the weights come from the first stage alone.
    """
    codes, labels = strata
    home = np.zeros(cluster.max() + 1, np.intp)
    home[cluster] = codes
    fraction = np.bincount(home, minlength=len(labels)) / there
    rows = np.bincount(cluster).astype(float)
    estimated = np.bincount(cluster, weights=weights) * fraction[home]
    return np.where(estimated > rows * (1 + _ROUNDING), estimated, rows)


def _refuse_clusters_without_labels(population_clusters: int | Counts | None) -> None:
    if population_clusters is not None:
        raise InputError(
            "population_clusters",
            "a number",
            "must come together with clusters",
            "pass the cluster of each row as well",
        )
