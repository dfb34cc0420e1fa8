"""Every sample that a design can draw from a tiny universe, with its chance."""

from __future__ import annotations

from itertools import combinations, product


def subsets(units, n):
    """All samples of n units without replacement; each as likely as the next."""
    return [list(chosen) for chosen in combinations(units, n)]


def draws(units, n):
    """All ordered samples of n units with replacement."""
    return [list(chosen) for chosen in product(units, repeat=n)]


def stratified_subsets(strata, sizes):
    """All stratified samples: strata {label: units}, sizes {label: how many}."""
    parts = [subsets(units, sizes[label]) for label, units in strata.items()]
    return [[unit for part in chosen for unit in part] for chosen in product(*parts)]


def two_stage_subsets(clusters, n, sizes):
    """All two-stage samples as (chance, [(cluster, unit), ...]); sizes {cluster: how many}."""
    first = subsets(clusters, n)
    found = []
    for chosen in first:
        inner = [subsets([(c, u) for u in range(len(clusters[c]))], sizes[c]) for c in chosen]
        ways = list(product(*inner))
        for way in ways:
            rows = [row for part in way for row in part]
            found.append((1 / (len(first) * len(ways)), rows))
    return found


class Moments:
    """Mean of estimates, their true variance, and the mean of their estimated variances."""

    def __init__(self):
        self.pairs = []

    def add(self, estimate, chance=1.0):
        self.pairs.append((chance, estimate.value, estimate.standard_error**2))

    @property
    def _sum(self):
        return sum(chance for chance, _, _ in self.pairs)

    @property
    def mean(self):
        return sum(c * value for c, value, _ in self.pairs) / self._sum

    @property
    def variance(self):
        centre = self.mean
        return sum(c * (value - centre) ** 2 for c, value, _ in self.pairs) / self._sum

    @property
    def estimated_variance(self):
        return sum(c * v for c, _, v in self.pairs) / self._sum
