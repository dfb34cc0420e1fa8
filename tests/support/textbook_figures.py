"""Figures worked out a second time, from the rows of a file with textbook formulas.

Nothing of the program is used here, not even to round: what a screen prints is compared with what
these few lines print. Strata are sampled without replacement; a stratum of the list is
``(values of those who answered, size of the stratum)``.

References
----------
Cochran, W. G. (1977). Sampling Techniques, 3rd ed.: equations 5.1 and 5.12 (stratified mean and
its variance), 5A.14 (subgroups), 13.5 (answers missing at random leave a smaller sample).
Wilson, E. B. (1927). Journal of the American Statistical Association 22, 209-212.
Woodruff, R. S. (1952). Journal of the American Statistical Association 47, 635-646.
Korn, E. L., Graubard, B. I. (1998). Survey Methodology 24, 193-201 (degrees of freedom).
"""

from __future__ import annotations

import csv
import math
from dataclasses import dataclass
from decimal import ROUND_HALF_UP, Decimal
from io import StringIO
from pathlib import Path

import numpy as np
from scipy import stats


@dataclass(frozen=True, slots=True)
class Worked:
    """One figure: its value, its interval, and how many answers of an endless universe it is worth.

    Shares are parts of one.
    """

    value: float
    low: float
    high: float
    base: int
    counts_like: float
    share: bool = False

    @property
    def half_width(self) -> float:
        """Half of the distance between the ends."""
        return (self.high - self.low) / 2

    def step(self) -> float:
        """Largest power of ten not above half of the half-width, in points for a share."""
        half = self.half_width * (100 if self.share else 1)
        step = 10.0 ** math.floor(math.log10(half / 2))
        return max(step, 0.1) if self.share else step

    def printed(self, step: float | None = None, *, in_millions: bool = False) -> Printed:
        """Write value and interval in one step, and in millions where the column is."""
        step = step or self.step()
        factor = 100 if self.share else 1
        scale, unit = 1, "%" if self.share else ""
        if in_millions or (not self.share and self.value >= 1e6 and step >= 1e4):
            scale, unit = 10**6, "million"
        texts = [_rounded(x * factor, step, scale) for x in (self.value, self.low, self.high)]
        return Printed(*texts, unit)


@dataclass(frozen=True, slots=True)
class Printed:
    """A figure as it has to stand on screen, with plain spaces."""

    value: str
    low: str
    high: str
    unit: str

    @property
    def full(self) -> str:
        return f"{self.value} {self.unit}".strip()

    @property
    def between(self) -> str:
        return f"{self.low} to {self.high} {self.unit}".strip()

    @property
    def range(self) -> str:
        return f"between {self.low} and {self.high} {self.unit}".strip()


Strata = list[tuple[np.ndarray, float]]


def read_rows(source: Path | str, *, delimiter: str = ",", heads: int = 1) -> list[dict[str, str]]:
    """Read a file with the standard library: one dictionary a row, blank rows left out."""
    text = source.read_text(encoding="utf-8-sig") if isinstance(source, Path) else source
    lines = list(csv.reader(StringIO(text, newline=""), delimiter=delimiter))
    names = lines[0]
    return [dict(zip(names, line, strict=True)) for line in lines[heads:] if any(line)]


def stratified_mean(strata: Strata, *, endless: bool = False) -> Worked:
    """Mean of everyone; answers that are missing leave a smaller sample of each stratum.

    ``endless`` leaves the weights and takes the finite correction away.
    """
    value, variance, df = _mean_and_variance(strata, endless=endless)
    half = _t(df) * math.sqrt(variance)
    base = sum(len(values) for values, _ in strata)
    spread = _weighted_spread(strata)
    return Worked(value, value - half, value + half, base, spread * base / ((base - 1) * variance))


def stratified_total(strata: Strata, *, endless: bool = False) -> Worked:
    """Universe size times the mean, so worth as many answers as the mean."""
    mean = stratified_mean(strata, endless=endless)
    size = sum(size for _, size in strata)
    ends = [size * x for x in (mean.value, mean.low, mean.high)]
    return Worked(*ends, mean.base, mean.counts_like)


def stratified_share(strata: Strata, most: float = math.nan, *, endless: bool = False) -> Worked:
    """Share of ones: Wilson's interval on the answers an endless universe would have needed.

    ``most`` is the number of units the share is taken of; given, the ends are opened to whole
    units and cut to what has been seen. It is known only where every row has the same weight.
    """
    p, variance, df = _mean_and_variance(strata, endless=endless)
    base = sum(len(values) for values, _ in strata)
    like = p * (1 - p) * base / ((base - 1) * variance)
    low, high = wilson(p, like * min(1.0, (_t(base - 1) / _t(df)) ** 2))
    if not math.isnan(most):
        low, high = _whole_units(p, low, high, base, int(most))
    return Worked(p, low, high, base, like, share=True)


def stratified_median(strata: Strata, *, endless: bool = False) -> Worked:
    """Smallest answer with half of the weight at or below it; Woodruff's limits."""
    weights = np.concatenate([np.full(len(v), size / len(v)) for v, size in strata])
    answers = np.concatenate([values for values, _ in strata])
    order = np.argsort(answers, kind="stable")
    heights = np.cumsum(weights[order]) / weights.sum()

    def reached(part: float) -> float:
        return float(answers[order][np.searchsorted(heights, part - 1e-12)])

    value = reached(0.5)
    below = [((values <= value).astype(float), size) for values, size in strata]
    share, variance, df = _mean_and_variance(below, endless=endless)
    reach = _t(df) * math.sqrt(variance)
    base = len(answers)
    like = share * (1 - share) * base / ((base - 1) * variance)
    return Worked(value, reached(0.5 - reach), reached(0.5 + reach), base, like)


def subgroup_mean(
    values: np.ndarray, inside: np.ndarray, strata: np.ndarray, sizes: dict[str, int]
) -> Worked:
    """Mean of a subgroup that cuts across strata, where everybody answered.

    Rows outside count as zero (Cochran 1977, 5A.14); the variance carries k(c-1)/((k-1)c), and
    the degrees of freedom are at most k - 1, k members among c rows of the strata they lie in.
    """
    mean, variance, df, spread = _subgroup(values, inside, strata, sizes)
    half, k = _t(df) * math.sqrt(variance), int(inside.sum())
    return Worked(mean, mean - half, mean + half, k, spread * k / ((k - 1) * variance))


def subgroup_share(chosen: np.ndarray, inside: np.ndarray, universe: int) -> Worked:
    """Share in a subgroup of a simple sample, where everybody answered.

    The subgroup has at most N - n + k units, because the others were met outside of it.
    """
    n, k = len(chosen), int(inside.sum())
    strata = np.full(n, "all")
    p, variance, df, _ = _subgroup(chosen.astype(float), inside, strata, {"all": universe})
    like = p * (1 - p) * k / ((k - 1) * variance)
    low, high = wilson(p, like * min(1.0, (_t(k - 1) / _t(df)) ** 2))
    return Worked(p, *_whole_units(p, low, high, k, universe - n + k), k, like, share=True)


def _whole_units(p: float, low: float, high: float, base: int, units: int) -> tuple[float, float]:
    """Open the ends to whole units, and cut them to what has been seen."""
    seen = round(p * base)
    fewest = max(math.floor(low * units + 1e-6), seen)
    return fewest / units, min(math.ceil(high * units - 1e-6), units - (base - seen)) / units


def _subgroup(
    values: np.ndarray, inside: np.ndarray, strata: np.ndarray, sizes: dict[str, int]
) -> tuple[float, float, float, float]:
    """Mean, its variance, degrees of freedom, and weighted variance of the answers."""
    weights = np.array([sizes[h] / np.sum(strata == h) for h in strata])
    size = float(weights[inside].sum())
    mean = float((weights * values)[inside].sum() / size)
    residuals = np.where(inside, weights * (values - mean) / size, 0.0)
    lived_in = [h for h in sizes if (inside & (strata == h)).any()]
    variance, rows = 0.0, 0
    for label in lived_in:
        found = residuals[strata == label]
        rows += len(found)
        left = 1 - len(found) / sizes[label]
        variance += left * len(found) * float(np.var(found, ddof=1))
    k = int(inside.sum())
    variance *= k * (rows - 1) / ((k - 1) * rows)
    spread = float((weights * (values - mean) ** 2)[inside].sum()) / size
    return mean, variance, min(rows - len(lived_in), k - 1), spread


def wilson(p: float, n: float) -> tuple[float, float]:
    """Wilson's score interval at 95 %."""
    z = float(stats.norm.ppf(0.975))
    centre = (p + z * z / (2 * n)) / (1 + z * z / n)
    half = z / (1 + z * z / n) * math.sqrt(p * (1 - p) / n + z * z / (4 * n * n))
    return centre - half, centre + half


def column_step(column: list[Worked]) -> float:
    """The one step of a table column: that of its median half-width."""
    half = float(np.median([worked.half_width for worked in column]))
    return Worked(0.0, -half, half, 0, 0.0, column[0].share).step()


def column_texts(table: dict[str, Worked]) -> dict[str, Printed]:
    """Every figure of a column in its one step and its one unit, by label."""
    step = column_step([*table.values()])
    millions = any(worked.printed(step).unit == "million" for worked in table.values())
    return {k: worked.printed(step, in_millions=millions) for k, worked in table.items()}


def count_text(number: float) -> str:
    """Write a whole number with commas."""
    return f"{round(number):,}"


def _mean_and_variance(strata: Strata, *, endless: bool) -> tuple[float, float, float]:
    parts = _parts(strata)
    value = sum(part * float(np.mean(v)) for part, (v, _) in zip(parts, strata, strict=True))
    variance = sum(
        part**2 * (1 if endless else 1 - len(v) / size) * float(np.var(v, ddof=1)) / len(v)
        for part, (v, size) in zip(parts, strata, strict=True)
    )
    return value, variance, sum(len(v) for v, _ in strata) - len(strata)


def _parts(strata: Strata) -> list[float]:
    universe = sum(size for _, size in strata)
    return [size / universe for _, size in strata]


def _weighted_spread(strata: Strata) -> float:
    parts = _parts(strata)
    mean = sum(part * float(np.mean(v)) for part, (v, _) in zip(parts, strata, strict=True))
    return sum(
        part * float(np.mean((v - mean) ** 2)) for part, (v, _) in zip(parts, strata, strict=True)
    )


def _t(df: float) -> float:
    return float(stats.t.ppf(0.975, df))


def _rounded(number: float, step: float, scale: int) -> str:
    exact = Decimal(repr(float(number)))
    unit = Decimal(repr(step)) if step < 1 else Decimal(round(step))
    rounded = (exact / unit).quantize(Decimal(1), rounding=ROUND_HALF_UP) * unit / scale
    places = max(0, -round(math.log10(step / scale)))
    return f"{rounded:,.{places}f}".replace("-", "\u2212")
