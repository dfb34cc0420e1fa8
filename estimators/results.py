"""What an estimator gives back: frozen values that remember their question."""

from __future__ import annotations

import math
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Caution:
    """Something a reader of the figure has to know.

    Parameters
    ----------
    code : str
        Stable name of the kind of caution, for programs.
    sentence : str
        One plain sentence, for people.
    """

    code: str
    sentence: str


@dataclass(frozen=True, slots=True)
class Interval:
    """A confidence interval.

    Parameters
    ----------
    low, high : float
        The two ends, in the unit of the estimate; infinite when the data give no bound.
    confidence : float
        Confidence level between 0 and 1.
    method : str
        Name of the method as in the literature.
    """

    low: float
    high: float
    confidence: float
    method: str

    @property
    def half_width(self) -> float:
        """Half of high minus low, also where the arms differ."""
        return (self.high - self.low) / 2.0


@dataclass(frozen=True, slots=True)
class Estimate:
    """One figure with its interval.

    Parameters
    ----------
    value : float
        The estimate, in the unit of the answers.
    standard_error : float
        Estimated standard deviation of the estimate over repeats of the survey.
    interval : Interval
        The confidence interval.
    degrees_of_freedom : float
        Degrees of freedom behind the standard error; may be infinite.
    base : int
        Rows with an answer inside ``where``.
    weighted_base : float
        Sum of their weights: the estimated number of units the figure speaks for.
    design_effect : float
        Variance relative to simple random sampling without replacement of the same base.
    effective_base : float
        ``base / design_effect``.
    equivalent_base : float
        Answers of a simple random sample from an endless universe that would be as precise.
    cautions : tuple of Caution
        What a reader has to know.
    most_units : int or None
        Of a share whose rows each speak for the same number of units: how many units the figure
        can be about at most.
    """

    value: float
    standard_error: float
    interval: Interval
    degrees_of_freedom: float
    base: int
    weighted_base: float
    design_effect: float
    effective_base: float
    equivalent_base: float
    cautions: tuple[Caution, ...] = ()
    most_units: int | None = None

    @property
    def half_width(self) -> float:
        """Half of high minus low."""
        return self.interval.half_width

    @property
    def relative_standard_error(self) -> float:
        """Standard error as a part of the value; NaN where the value is 0."""
        if self.value == 0:
            return math.nan
        return self.standard_error / abs(self.value)


@dataclass(frozen=True, slots=True, kw_only=True)
class Difference(Estimate):
    """First figure minus second figure, with its interval and the test of no difference.

    The fields are those of :class:`Estimate`. ``base`` counts the rows with an answer on either
    side, each once, and ``weighted_base`` their weights. A difference has no base of its own that
    could be reduced: ``effective_base`` and ``equivalent_base`` are NaN.

    Parameters
    ----------
    p_value : float
        Chance of a difference at least as large in either direction if there were none; NaN where
        the sample cannot say.
    """

    p_value: float
