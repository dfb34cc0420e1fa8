"""Estimates from samples with intervals that are right for the way the sample was drawn.

Arrays in, frozen results out. Every method is named after its published source in its docstring.
"""

from __future__ import annotations

from estimators.errors import InputError
from estimators.mean_intervals import mean_interval
from estimators.means_and_totals import mean, ratio, total
from estimators.proportion_intervals import proportion_interval
from estimators.proportions import proportion
from estimators.quantiles import quantile
from estimators.results import Caution, Estimate, Interval
from estimators.sample_designs import SampleDesign
from estimators.sampling_distributions import (
    SamplingDistribution,
    mean_distribution,
    total_distribution,
)
from estimators.stratified_distributions import (
    stratified_mean_distribution,
    stratified_total_distribution,
)
from estimators.universes import Universe, plug_in_universe

METHODS_VERSION = 1

__all__ = [
    "METHODS_VERSION",
    "Caution",
    "Estimate",
    "InputError",
    "Interval",
    "SampleDesign",
    "SamplingDistribution",
    "Universe",
    "mean",
    "mean_distribution",
    "mean_interval",
    "plug_in_universe",
    "proportion",
    "proportion_interval",
    "quantile",
    "ratio",
    "stratified_mean_distribution",
    "stratified_total_distribution",
    "total",
    "total_distribution",
]
