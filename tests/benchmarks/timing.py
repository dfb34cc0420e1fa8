"""Two ways of doing the same thing, timed in turn, and what came of it."""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import asdict, dataclass
from statistics import median


@dataclass(frozen=True)
class Result:
    """One measurement.

    Parameters
    ----------
    name : str
        What was measured.
    seconds : float
        Median of our runs.
    against : str
        What it is measured against; "" where only seconds are told.
    against_seconds : float or None
        Median of its runs, which took turns with ours.
    limit : float or None
        Largest ratio allowed, or largest number of seconds where there is nothing to compare with.
    note : str
        What has to be known to read it.
    """

    name: str
    seconds: float
    against: str = ""
    against_seconds: float | None = None
    limit: float | None = None
    note: str = ""

    @property
    def ratio(self) -> float | None:
        """Our time over the other."""
        return self.seconds / self.against_seconds if self.against_seconds else None

    @property
    def holds(self) -> bool | None:
        """Whether the limit holds; None without one."""
        measured = self.seconds if self.ratio is None else self.ratio
        return None if self.limit is None else measured <= self.limit

    def as_record(self) -> dict[str, object]:
        """Everything as plain values."""
        return {**asdict(self), "ratio": self.ratio, "holds": self.holds}


def seconds_of(action: Callable[[], object]) -> float:
    """Return how long something takes once."""
    begin = time.perf_counter()
    action()
    return time.perf_counter() - begin


def in_turn(
    ours: Callable[[], object], other: Callable[[], object], runs: int
) -> tuple[float, float]:
    """Run both in turn after one run each to warm up, and return the two medians."""
    ours(), other()
    pairs = [(seconds_of(ours), seconds_of(other)) for _ in range(runs)]
    return median(a for a, _ in pairs), median(b for _, b in pairs)


def median_of(action: Callable[[], object], runs: int) -> float:
    """Run after one run to warm up, and return the median."""
    action()
    return median(seconds_of(action) for _ in range(runs))
