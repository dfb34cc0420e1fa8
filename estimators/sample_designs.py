"""How the sample was drawn: one class, one named constructor for every way of sampling."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from estimators import cautions as caution
from estimators.array_checks import Floats, as_count, as_weights, frozen
from estimators.design_counts import design_degrees_of_freedom
from estimators.design_parts import (
    Counts,
    are_relative,
    drawn_clusters,
    invited,
    names_of,
    refuse_more_than_there,
    stratum_codes,
    stratum_sizes,
)
from estimators.results import Caution
from estimators.sampling_stages import SamplingStages, stages_of_rows
from estimators.systematic_stages import systematic_stages
from estimators.weighted_stages import universe_of_weights, weighted_stages


@dataclass(frozen=True, slots=True, eq=False)
class SampleDesign:
    """A sample and how it was drawn; make one with a constructor named after the way of sampling.

    Parameters
    ----------
    n : int
        Rows: respondents who answered something.
    weights : (n,) float
        Units of the universe each row speaks for, or relative weights with mean 1.
    population_size : int or None
        Units in the universe; None where unknown or endless.
    stages : SamplingStages
        Strata, clusters and sampling fractions.
    weights_given : bool
        True where the weights came from outside; False where they follow from counts.
    relative_weights : bool
        True where the weights say nothing about the size of the universe: then no totals.
    scaled_weights : bool
        True where relative weights were scaled so that they add up to the universe.
    replacement : bool
        Whether a unit could be drawn more than once.
    cautions : tuple of Caution
        What every figure of this design carries.
    """

    n: int
    weights: Floats
    population_size: int | None
    stages: SamplingStages
    weights_given: bool = False
    relative_weights: bool = False
    scaled_weights: bool = False
    replacement: bool = False
    cautions: tuple[Caution, ...] = ()

    @property
    def degrees_of_freedom(self) -> float:
        """Units minus strata, over strata not drawn completely; infinite in a census."""
        return design_degrees_of_freedom(self.stages)

    @property
    def is_simple(self) -> bool:
        """Whether the rows were drawn one by one from everyone, all with the same chance."""
        one_by_one = self.stages.unit is None and len(self.stages.units_drawn) == 1
        return one_by_one and not self.weights_given

    @property
    def has_zero_weights(self) -> bool:
        """Whether some rows speak for nobody."""
        return self.weights_given and not bool(self.weights.all())

    def without_correction(self) -> SampleDesign:
        """Return the same sample as if drawn from an endless universe."""
        kept = tuple(c for c in self.cautions if c is not caution.ENDLESS_FIRST_STAGE)
        return replace(self, population_size=None, stages=self.stages.endless(), cautions=kept)

    @classmethod
    def simple_random(
        cls, n: int, *, population_size: int | None = None, replacement: bool = False
    ) -> SampleDesign:
        """Describe a simple random sample.

        Parameters
        ----------
        n : int
            Rows.
        population_size : int, optional
            Units in the universe; None for an endless one.
        replacement : bool
            Whether a unit could be drawn more than once.

        Raises
        ------
        InputError
            If a number is not whole and positive, or n exceeds the universe without replacement.

        References
        ----------
        Cochran, W. G. (1977). Sampling Techniques, 3rd ed., chapter 2.
        """
        rows = as_count(n, "n")
        size = None if population_size is None else as_count(population_size, "population_size")
        if size is not None and not replacement:
            refuse_more_than_there(rows, size, "population_size", "rows")
        there = np.inf if size is None or replacement else float(size)
        return cls(
            n=rows,
            weights=frozen(np.full(rows, 1.0 if size is None else size / rows)),
            population_size=size,
            stages=stages_of_rows(np.zeros(rows, np.intp), np.array([there]), ("everyone",)),
            relative_weights=size is None,
            replacement=replacement,
        )

    @classmethod
    def stratified(
        cls,
        strata: ArrayLike,
        *,
        population_sizes: Counts,
        replacement: bool = False,
    ) -> SampleDesign:
        """Describe a simple random sample within each stratum.

        Parameters
        ----------
        strata : (n,) labels
            Stratum of each row.
        population_sizes : dict
            {label: units of that stratum in the universe}, one for every stratum.
        replacement : bool
            Whether a unit could be drawn more than once.

        Raises
        ------
        InputError
            If a stratum lacks a size or rows, or has more rows than units.

        References
        ----------
        Cochran, W. G. (1977). Sampling Techniques, 3rd ed., chapter 5.
        """
        stratum = stratum_codes(strata, np.size(strata))
        sizes = stratum_sizes(
            population_sizes, stratum, "population_sizes", replacement=replacement
        )
        there = np.full(len(sizes), np.inf) if replacement else sizes
        stages = stages_of_rows(stratum[0], there, names_of(stratum[1]))
        return cls(
            n=len(stratum[0]),
            weights=frozen((sizes / stages.units_drawn)[stratum[0]]),
            population_size=int(sizes.sum()),
            stages=stages,
            replacement=replacement,
        )

    @classmethod
    def attempted_census(
        cls,
        n: int,
        *,
        population_size: int | None = None,
        strata: ArrayLike | None = None,
        population_sizes: Counts | None = None,
    ) -> SampleDesign:
        """Describe a survey that invited everybody and was answered by some.

        Parameters
        ----------
        n : int
            Rows.
        population_size : int, optional
            People invited; not needed with strata.
        strata, population_sizes : optional
            As for :meth:`stratified`: those who answered are taken to be like the others of their
            stratum.

        Raises
        ------
        InputError
            As :meth:`simple_random` and :meth:`stratified`, if only one of ``strata`` and
            ``population_sizes`` is given, or if the sizes do not add up to ``population_size``.
        """
        if strata is None and population_sizes is None:
            base = cls.simple_random(n, population_size=population_size)
        else:
            stratum, sizes = invited(n, strata, population_sizes, population_size)
            base = cls.stratified(stratum, population_sizes=sizes)
        return replace(base, cautions=(caution.ATTEMPTED_CENSUS,))

    @classmethod
    def systematic(cls, order: ArrayLike, *, population_size: int) -> SampleDesign:
        """Describe every so-many-th unit of an ordered list.

        Parameters
        ----------
        order : (n,) float
            Place of each row in the list; only which comes first matters.
        population_size : int
            Units on the list.

        Raises
        ------
        InputError
            If a place is missing or taken twice, or the list is shorter than the sample.

        References
        ----------
        Wolter, K. M. (2007). Introduction to Variance Estimation, 2nd ed., section 8.2.
        """
        base = cls.simple_random(np.size(order), population_size=population_size)
        stages = systematic_stages(order, as_count(population_size, "population_size"))
        return replace(base, stages=stages, cautions=(caution.SYSTEMATIC_SAMPLE,))

    @classmethod
    def clustered(
        cls,
        clusters: ArrayLike,
        *,
        population_clusters: int | Counts | None = None,
        strata: ArrayLike | None = None,
    ) -> SampleDesign:
        """Describe a random sample of clusters of which every member answered.

        Parameters and errors are those of :meth:`two_stage`, without ``cluster_sizes``.

        References
        ----------
        Cochran, W. G. (1977). Sampling Techniques, 3rd ed., chapters 9 and 9A.
        """
        return cls._of_clusters(clusters, strata, population_clusters, None)

    @classmethod
    def two_stage(
        cls,
        clusters: ArrayLike,
        *,
        cluster_sizes: Counts,
        population_clusters: int | Counts | None = None,
        strata: ArrayLike | None = None,
    ) -> SampleDesign:
        """Describe a random sample of clusters and a random sample of members in each.

        Parameters
        ----------
        clusters : (n,) labels
            Cluster of each row.
        cluster_sizes : dict
            {cluster: members it has in the universe}; clusters without rows are passed over.
        population_clusters : int or dict, optional
            Clusters in the universe; {stratum: clusters} where there are strata.
        strata : (n,) labels, optional
            Stratum of each row, within which the clusters were drawn.

        Raises
        ------
        InputError
            If a cluster lies in two strata, or a number is missing, not whole or too small.

        References
        ----------
        Cochran, W. G. (1977). Sampling Techniques, 3rd ed., equations 11.22 and 11.24.
        """
        return cls._of_clusters(clusters, strata, population_clusters, cluster_sizes)

    @classmethod
    def weighted(
        cls,
        weights: ArrayLike,
        *,
        strata: ArrayLike | None = None,
        clusters: ArrayLike | None = None,
        population_size: int | Counts | None = None,
        population_clusters: int | Counts | None = None,
    ) -> SampleDesign:
        """Describe a sample whose rows come with weights.

        Parameters
        ----------
        weights : (n,) float
            Units each row speaks for; or weights with mean 1, which are scaled to
            ``population_size`` where that is given.
        strata, clusters : (n,) labels, optional
            Stratum and cluster of each row.
        population_size : int or dict, optional
            Units in the universe; {stratum: units} where rows were drawn within strata. Without
            clusters it also corrects for the part of the universe that was asked; one number for
            several strata is split over them as the weights say.
        population_clusters : int or dict, optional
            Clusters in the universe; {stratum: clusters} where there are strata. The members of a
            drawn cluster then follow from its weights.

        Raises
        ------
        InputError
            If a weight is negative or not finite, a cluster lies in two strata, or a number is
            missing, not whole or too small.

        References
        ----------
        Lohr, S. L. (2021). Sampling: Design and Analysis, 3rd ed., chapters 6 and 7.
        """
        given = as_weights(weights)
        stratum = stratum_codes(strata, len(given))
        size = universe_of_weights(population_size, stratum, clustered=clusters is not None)
        relative, scaled = are_relative(given), False
        if relative and size is not None:
            given, relative, scaled = given * (size / given.sum()), False, True
        endless = clusters is not None and population_clusters is None
        return cls(
            n=len(given),
            weights=frozen(given),
            population_size=size,
            stages=weighted_stages(
                given, stratum, clusters, population_size, population_clusters, scaled=not relative
            ),
            weights_given=True,
            relative_weights=relative,
            scaled_weights=scaled,
            cautions=(caution.ENDLESS_FIRST_STAGE,) if endless else (),
        )

    @classmethod
    def quota(cls, n: int, *, weights: ArrayLike | None = None) -> SampleDesign:
        """Describe respondents who were not drawn at random, such as quotas of an online panel.

        Parameters
        ----------
        n : int
            Rows.
        weights : (n,) float, optional
            Weights made from known margins.

        Raises
        ------
        InputError
            If n is not whole and positive, or a weight is negative or not finite.

        References
        ----------
        Baker, R., et al. (2013). Summary report of the AAPOR task force on non-probability
        sampling. Journal of Survey Statistics and Methodology 1, 90-143.
        """
        rows = as_count(n, "n")
        given = np.ones(rows) if weights is None else as_weights(weights, rows)
        return cls(
            n=rows,
            weights=frozen(given),
            population_size=None,
            stages=stages_of_rows(np.zeros(rows, np.intp), np.array([np.inf]), ("everyone",)),
            weights_given=weights is not None,
            relative_weights=are_relative(given),
            cautions=(caution.QUOTA_SAMPLE,),
        )

    @classmethod
    def _of_clusters(
        cls,
        clusters: ArrayLike,
        strata: ArrayLike | None,
        population_clusters: int | Counts | None,
        cluster_sizes: Counts | None,
    ) -> SampleDesign:
        stages, weights, size = drawn_clusters(clusters, strata, population_clusters, cluster_sizes)
        known = population_clusters is not None
        return cls(
            n=len(weights),
            weights=frozen(weights),
            population_size=size,
            stages=stages,
            relative_weights=not known,
            cautions=() if known else (caution.ENDLESS_FIRST_STAGE,),
        )
