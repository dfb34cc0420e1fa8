"""The sampling plan: how people got into the sample, in the manager's words."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum


class SamplingMethod(StrEnum):
    """How people got in."""

    CHANCE = "drawn by chance from a list"
    EVERYBODY = "everybody was invited, some answered"
    GROUPS = "whole groups were drawn first"
    QUOTA = "quotas or an online panel"
    NOT_SURE = "not sure"


@dataclass(frozen=True, slots=True)
class StratumCount:
    """How many units the universe has in one stratum; None while unknown."""

    label: str
    population_size: int | None


@dataclass(frozen=True, slots=True)
class SamplingPlan:
    """What the manager told about the sample.

    Parameters
    ----------
    universe : str
        Whom figures speak for, "all garden centres in the four regions".
    unit_one, unit_many : str
        What one row is, "garden centre", "garden centres".
    universe_size : int or None
        Units in the universe; None for "I don't know".
    as_of, source : str
        Date and origin of the universe count.
    method : SamplingMethod
        How people got in.
    replacement : bool
        True when each unit could be drawn twice.
    strata_column : str
        Question key by which the draw was made separately; "" for none.
    strata : tuple of StratumCount
        Universe counts by stratum, in the manager's order.
    weights_column : str
        Column of weights in the file; "" for none.
    clusters_column : str
        Column that names the group drawn first; "" for none.
    universe_clusters : int or None
        Groups in the universe; None for unknown.
    provisional : bool
        True until a person has confirmed the plan.
    """

    universe: str = ""
    unit_one: str = "respondent"
    unit_many: str = "respondents"
    universe_size: int | None = None
    as_of: str = ""
    source: str = ""
    method: SamplingMethod = SamplingMethod.NOT_SURE
    replacement: bool = False
    strata_column: str = ""
    strata: tuple[StratumCount, ...] = ()
    weights_column: str = ""
    clusters_column: str = ""
    universe_clusters: int | None = None
    provisional: bool = True
