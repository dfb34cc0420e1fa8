"""Estimates from samples with intervals that are right for the way the sample was drawn.

Arrays in, frozen results out. Every method is named after its published source in its docstring.
"""

from __future__ import annotations

from estimators.cell_sums import CellSums, cells_of
from estimators.detectable_difference import detectable_difference
from estimators.differences import difference, difference_of
from estimators.errors import InputError
from estimators.interval_coverage import mean_coverage, proportion_coverage, simulation_error
from estimators.mean_intervals import mean_interval
from estimators.mean_tables import MeanTable, tabulate_means
from estimators.means_and_totals import mean, ratio, total
from estimators.p_value_adjustment import adjust_p_values
from estimators.proportion_intervals import proportion_interval
from estimators.proportions import proportion
from estimators.quantiles import quantile
from estimators.replicate_variance import (
    replicate_distribution,
    replicate_estimates,
    replicate_sums,
    replicate_variance,
)
from estimators.replicate_weights import ReplicateWeights, replicate_weights
from estimators.results import Caution, Difference, Estimate, Interval
from estimators.sample_designs import SampleDesign
from estimators.sampling_distributions import (
    SamplingDistribution,
    mean_distribution,
    total_distribution,
)
from estimators.share_tables import ShareTable, share_table, tabulate
from estimators.skewed_mean_intervals import (
    bootstrap_t_interval,
    sample_skewness,
    skewed_mean_interval,
    skewness_caution,
)
from estimators.stratified_distributions import (
    stratified_mean_distribution,
    stratified_total_distribution,
)
from estimators.summaries import stratified_mean
from estimators.universes import Universe, plug_in_universe

METHODS_VERSION = 1

__all__ = [
    "METHODS_VERSION",
    "Caution",
    "CellSums",
    "Difference",
    "Estimate",
    "InputError",
    "Interval",
    "MeanTable",
    "ReplicateWeights",
    "SampleDesign",
    "SamplingDistribution",
    "ShareTable",
    "Universe",
    "adjust_p_values",
    "bootstrap_t_interval",
    "cells_of",
    "detectable_difference",
    "difference",
    "difference_of",
    "mean",
    "mean_coverage",
    "mean_distribution",
    "mean_interval",
    "plug_in_universe",
    "proportion",
    "proportion_coverage",
    "proportion_interval",
    "quantile",
    "ratio",
    "replicate_distribution",
    "replicate_estimates",
    "replicate_sums",
    "replicate_variance",
    "replicate_weights",
    "sample_skewness",
    "share_table",
    "simulation_error",
    "skewed_mean_interval",
    "skewness_caution",
    "stratified_mean",
    "stratified_mean_distribution",
    "stratified_total_distribution",
    "tabulate",
    "tabulate_means",
    "total",
    "total_distribution",
]
