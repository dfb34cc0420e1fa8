"""From what a caller says about a universe to the checked counts a design is built of."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from estimators.array_checks import (
    Codes,
    Floats,
    as_count,
    as_counts_by_label,
    as_labels,
    refuse_labels_without_rows,
)
from estimators.errors import InputError
from estimators.sampling_stages import SamplingStages, stages_of_clusters

Counts = Mapping[Any, int]
Strata = tuple[Codes, list[object]]

_RELATIVE = 1e-3  # a mean weight this close to 1 says nothing about the size of the universe


def are_relative(weights: Floats) -> bool:
    """Whether the weights average 1, so that they do not say how large the universe is."""
    return abs(float(weights.mean()) - 1.0) <= _RELATIVE


def stratum_codes(strata: ArrayLike | None, n: int) -> tuple[Codes, list[object]]:
    """Return (n,) stratum codes and their labels; one stratum when none are given."""
    if strata is None:
        return np.zeros(n, np.intp), ["everyone"]
    return as_labels(strata, "strata", n)


def stratum_sizes(sizes: Counts, strata: Strata, name: str, *, replacement: bool = False) -> Floats:
    """Return the universe of each stratum, with rows in each and not more rows than units."""
    if not isinstance(sizes, Mapping):
        raise InputError(
            name, repr(sizes), "must give a number for each stratum", "pass {stratum: number}"
        )
    codes, labels = strata
    found = as_counts_by_label(sizes, name, labels, "stratum")
    refuse_labels_without_rows(sizes, name, labels)
    if not replacement:
        rows = np.bincount(codes, minlength=len(labels))
        for label, drawn, there in zip(labels, rows, found, strict=True):
            refuse_more_than_there(int(drawn), int(there), f"{name}[{label!r}]", "rows")
    return found


def refuse_more_than_there(drawn: int, there: int, name: str, what: str) -> None:
    """Refuse a universe smaller than the sample drawn from it without replacement."""
    if drawn > there:
        raise InputError(
            name,
            f"{there:,}",
            f"must not be smaller than the {drawn:,} {what} drawn from it",
            "correct the number, or the rows of the file",
        )


def cluster_codes(clusters: ArrayLike, stratum: Codes) -> tuple[Codes, list[object]]:
    """Return (n,) cluster codes and their labels; a cluster in two strata is refused."""
    codes, labels = as_labels(clusters, "clusters", len(stratum))
    home = np.zeros(len(labels), np.intp)
    home[codes] = stratum
    strayed = np.flatnonzero(home[codes] != stratum)
    if strayed.size:
        raise InputError(
            "clusters",
            repr(labels[codes[strayed[0]]]),
            "must lie in one stratum each",
            "give clusters of different strata different labels",
        )
    return codes, labels


def clusters_there(counts: int | Counts | None, strata: Strata, cluster: Codes) -> Floats:
    """Return the clusters each stratum has in the universe; infinite where nothing is said."""
    _, labels = strata
    if counts is None:
        return np.full(len(labels), np.inf)
    if isinstance(counts, Mapping):
        found = as_counts_by_label(counts, "population_clusters", labels, "stratum")
        refuse_labels_without_rows(counts, "population_clusters", labels)
    elif len(labels) > 1:
        raise InputError(
            "population_clusters",
            repr(counts),
            f"must be given for each of the {len(labels)} strata",
            "pass {stratum: number of clusters}",
        )
    else:
        found = np.array([as_count(counts, "population_clusters")], dtype=float)
    drawn = _clusters_drawn(strata, cluster)
    for label, sampled, there in zip(labels, drawn, found, strict=True):
        name = "population_clusters" + (f"[{label!r}]" if len(labels) > 1 else "")
        refuse_more_than_there(int(sampled), int(there), name, "clusters")
    return found


def cluster_members(
    sizes: Counts | None, clusters: tuple[Codes, list[object]]
) -> tuple[Floats, Floats]:
    """Return rows and members of each drawn cluster; without sizes every member answered."""
    codes, labels = clusters
    rows = np.bincount(codes, minlength=len(labels)).astype(float)
    if sizes is None:
        return rows, rows
    if not isinstance(sizes, Mapping):
        raise InputError(
            "cluster_sizes",
            repr(sizes),
            "must give a number for each cluster",
            "pass {cluster: number of members}",
        )
    members = as_counts_by_label(sizes, "cluster_sizes", labels, "cluster")
    for label, drawn, there in zip(labels, rows, members, strict=True):
        refuse_more_than_there(int(drawn), int(there), f"cluster_sizes[{label!r}]", "rows")
    return rows, members


def drawn_clusters(
    clusters: ArrayLike,
    strata: ArrayLike | None,
    population_clusters: int | Counts | None,
    cluster_sizes: Counts | None,
) -> tuple[SamplingStages, Floats, int | None]:
    """Return stages, (n,) weights and, where every cluster was drawn, the size of the universe."""
    stratum = stratum_codes(strata, np.size(clusters))
    cluster = cluster_codes(clusters, stratum[0])
    there = clusters_there(population_clusters, stratum, cluster[0])
    rows, members = cluster_members(cluster_sizes, cluster)
    stages = stages_of_clusters(
        (stratum[0], names_of(stratum[1])), (cluster[0], names_of(cluster[1])), there, members
    )
    drawn = _clusters_drawn(stratum, cluster[0])
    first = np.where(np.isfinite(there), there / drawn, 1.0)[stratum[0]]
    all_drawn = bool(np.all(drawn == there))
    return stages, first * (members / rows)[cluster[0]], int(members.sum()) if all_drawn else None


def invited(
    n: int, strata: ArrayLike | None, sizes: Counts | None, population_size: int | None
) -> tuple[ArrayLike, Counts]:
    """Return the strata of an attempted census and the people invited in each."""
    if strata is None or sizes is None:
        raise InputError(
            "strata" if strata is None else "population_sizes",
            None,
            "must be given together with the other of strata and population_sizes",
            "give both or neither",
        )
    found = stratum_sizes(sizes, stratum_codes(strata, as_count(n, "n")), "population_sizes")
    if population_size is not None and population_size != found.sum():
        raise InputError(
            "population_size",
            population_size,
            f"must equal the sum of population_sizes, {int(found.sum()):,}",
            "correct one of them or leave population_size out",
        )
    return strata, sizes


def _clusters_drawn(strata: Strata, cluster: Codes) -> Floats:
    """(H,) clusters drawn in each stratum."""
    codes, labels = strata
    home = np.zeros(cluster.max() + 1, np.intp)
    home[cluster] = codes
    return np.bincount(home, minlength=len(labels)).astype(float)


def names_of(labels: list[object]) -> tuple[str, ...]:
    """Return the labels as texts."""
    return tuple(str(label) for label in labels)
