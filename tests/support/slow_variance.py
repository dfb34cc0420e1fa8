"""The textbook variance formulas as plain loops, one statement of arithmetic at a time.

Written apart from the estimators, so that both agree only where both are right.
"""

from __future__ import annotations

import math
from collections import defaultdict


def loop_variance(contributions, strata, clusters, clusters_there=None, members=None):
    """Variance of a sum: between clusters within strata, and within clusters (Cochran 11.24)."""
    rows_of = defaultdict(lambda: defaultdict(list))
    for value, stratum, cluster in zip(contributions, strata, clusters, strict=True):
        rows_of[stratum][cluster].append(float(value))
    result = 0.0
    for stratum, rows in rows_of.items():
        n = len(rows)
        fraction = n / clusters_there[stratum] if clusters_there else 0.0
        totals = {c: math.fsum(v) for c, v in rows.items()}
        centre = math.fsum(totals.values()) / n
        between = math.fsum((t - centre) ** 2 for t in totals.values())
        result += (1 - fraction) * n / (n - 1) * between if n > 1 else 0.0
        for cluster, values in rows.items():
            m = len(values)
            if members is None or m == members[cluster]:
                continue
            middle = math.fsum(values) / m
            within = math.fsum((v - middle) ** 2 for v in values)
            result += fraction * (1 - m / members[cluster]) * m / (m - 1) * within
    return result


def loop_mean(values, weights, inside):
    chosen = [i for i, yes in enumerate(inside) if yes]
    size = math.fsum(weights[i] for i in chosen)
    return math.fsum(weights[i] * values[i] for i in chosen) / size, size


def loop_mean_contributions(values, weights, inside):
    """Linearised contributions of a weighted mean of a subgroup (Woodruff 1971)."""
    mean, size = loop_mean(values, weights, inside)
    return [
        weights[i] * (values[i] - mean) / size if inside[i] else 0.0 for i in range(len(values))
    ]


def loop_subgroup_factor(strata, clusters, inside):
    """k(c-1)/((k-1)c): k clusters in the base, c in the strata that the base touches."""
    touched = {s for s, yes in zip(strata, inside, strict=True) if yes}
    k = len({c for c, yes in zip(clusters, inside, strict=True) if yes})
    c = len({c for c, s in zip(clusters, strata, strict=True) if s in touched})
    return k * (c - 1) / ((k - 1) * c)
