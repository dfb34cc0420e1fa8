"""What figure is asked for."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum


class Statistic(StrEnum):
    """What is estimated."""

    SHARE = "share"
    AVERAGE = "average"
    TOTAL = "total"
    MEDIAN = "median"


@dataclass(frozen=True, slots=True)
class FigureRequest:
    """One figure, named completely.

    Parameters
    ----------
    question : str
        Key of the question.
    statistic : Statistic
        What is estimated.
    answers : tuple of str
        Codes counted together; for shares, and totals of people.
    group_question, group_answer : str
        Who the figure is about: an answer of another question; "" for everyone.
    confidence : float
        Confidence level.
    method : str
        Interval method of a share.
    missing_counted : bool
        True when "don't know" and "refused" stay in the base where people are counted.
    split_by : str
        Key of the question whose groups stand in the rows under the figure; "" for none.
    """

    question: str
    statistic: Statistic
    answers: tuple[str, ...] = ()
    group_question: str = ""
    group_answer: str = ""
    confidence: float = 0.95
    method: str = "wilson"
    missing_counted: bool = False
    split_by: str = ""

    @property
    def counts_people(self) -> bool:
        """Whether it counts who chose an answer: a share, or how many that are in all."""
        if self.statistic is Statistic.SHARE:
            return True
        return self.statistic is Statistic.TOTAL and bool(self.answers)
