"""Distributions of sums the slow way: every sample, or exact whole-number polynomials."""

from __future__ import annotations

import itertools
import math
from collections import Counter
from fractions import Fraction


def every_sample(units, n, *, replacement):
    """Sum -> probability by listing every sample of single units."""
    samples = (
        itertools.product(units, repeat=n) if replacement else itertools.combinations(units, n)
    )
    sums = Counter(sum(sample) for sample in samples)
    number = len(units) ** n if replacement else math.comb(len(units), n)
    return {value: Fraction(times, number) for value, times in sorted(sums.items())}


def without_replacement(values, counts, n):
    """Sum -> probability by the multivariate hypergeometric distribution in exact whole numbers."""
    states = {(0, 0): 1}
    for value, count in zip(values, counts, strict=True):
        following = Counter()
        for (drawn, total), ways in states.items():
            for more in range(min(count, n - drawn) + 1):
                following[drawn + more, total + more * value] += ways * math.comb(count, more)
        states = following
    number = math.comb(sum(counts), n)
    return {t: Fraction(ways, number) for (drawn, t), ways in states.items() if drawn == n}


def with_replacement(values, counts, n):
    """Sum -> probability by adding one draw after the other in exact whole numbers."""
    states = {0: 1}
    for _ in range(n):
        following = Counter()
        for total, ways in states.items():
            for value, count in zip(values, counts, strict=True):
                following[total + value] += ways * count
        states = following
    number = sum(counts) ** n
    return {total: Fraction(ways, number) for total, ways in states.items()}
