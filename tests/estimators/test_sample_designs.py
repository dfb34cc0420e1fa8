from __future__ import annotations

import math

import numpy as np
import pytest

from estimators import InputError, SampleDesign, mean, proportion, total
from tests.support.contracts import CLUSTERS, SIZES, STRATA, N, designs


def test_weights_follow_from_the_counts():
    simple = SampleDesign.simple_random(4, population_size=10)
    assert simple.weights.tolist() == [2.5] * 4
    strata = SampleDesign.stratified(["b", "a", "b"], population_sizes={"a": 7, "b": 3})
    assert strata.weights.tolist() == [1.5, 7.0, 1.5]
    stages = SampleDesign.two_stage(
        [1, 1, 2], cluster_sizes={1: 8, 2: 5, 3: 99}, population_clusters=6
    )
    assert stages.weights.tolist() == [3 * 4.0, 3 * 4.0, 3 * 5.0]
    assert SampleDesign.clustered([1, 1, 2], population_clusters=6).weights.tolist() == [3.0] * 3


def test_properties_of_every_design():
    expected = {  # population size, degrees of freedom: units minus strata
        "simple random": (200, 47),
        "with replacement": (200, 47),
        "stratified": (430, 45),
        "attempted census": (100, 47),
        "clustered": (None, 9),
        "two stages": (None, 9),
        "weighted": (None, 9),
        "quota": (None, 47),
    }
    for name, design in designs().items():
        assert design.n == N
        assert (design.population_size, design.degrees_of_freedom) == expected[name], name
        assert design.weights.shape == (N,)


def test_a_census_has_infinite_degrees_of_freedom():
    assert SampleDesign.simple_random(5, population_size=5).degrees_of_freedom == math.inf
    sizes = {"all": 3, "part": 9}
    strata = ["all"] * 3 + ["part"] * 4
    assert SampleDesign.stratified(strata, population_sizes=sizes).degrees_of_freedom == 3


def test_arrays_are_read_only_and_copied():
    given = np.ones(3) * 4
    design = SampleDesign.weighted(given)
    given[0] = 100.0
    assert design.weights.tolist() == [4.0] * 3
    with pytest.raises(ValueError, match="read-only"):
        design.weights[0] = 1.0


def test_without_correction_is_an_endless_universe():
    design = SampleDesign.simple_random(10, population_size=12).without_correction()
    assert design.population_size is None
    values = np.arange(10.0)
    found = mean(values, design)
    assert found.standard_error == pytest.approx(values.std(ddof=1) / math.sqrt(10))
    assert found.equivalent_base == pytest.approx(10)
    assert total(values, design).value == pytest.approx(12 * 4.5)
    clusters = SampleDesign.clustered(CLUSTERS).without_correction()
    assert clusters.cautions == ()


def test_unknown_number_of_clusters_is_a_caution_and_no_correction():
    values = np.arange(float(N))
    for design in (
        SampleDesign.clustered(CLUSTERS, strata=STRATA),
        SampleDesign.two_stage(CLUSTERS, cluster_sizes=dict.fromkeys(CLUSTERS.tolist(), 50)),
        SampleDesign.weighted(np.ones(N), clusters=CLUSTERS),
    ):
        found = mean(values, design)
        assert [c.code for c in found.cautions] == ["endless_first_stage"]
        assert found.standard_error == mean(values, design.without_correction()).standard_error


def test_attempted_census_is_a_simple_or_a_stratified_sample():
    values = np.arange(float(N))
    pairs = [
        (
            SampleDesign.attempted_census(N, population_size=90),
            SampleDesign.simple_random(N, population_size=90),
        ),
        (
            SampleDesign.attempted_census(N, strata=STRATA, population_sizes=SIZES),
            SampleDesign.stratified(STRATA, population_sizes=SIZES),
        ),
    ]
    for attempted, plain in pairs:
        assert mean(values, attempted).interval == mean(values, plain).interval
        assert [c.code for c in attempted.cautions] == ["attempted_census"]


def test_relative_weights_are_scaled_where_the_universe_is_known():
    weights = np.array([0.5, 1.0, 1.5])
    scaled = SampleDesign.weighted(weights, population_size=300)
    assert scaled.weights.tolist() == [50.0, 100.0, 150.0]
    absolute = SampleDesign.weighted(weights * 90, population_size=300)
    assert absolute.weights.tolist() == (weights * 90).tolist()
    assert not SampleDesign.weighted(weights * 1.0011).relative_weights
    assert SampleDesign.weighted(weights * 1.0009).relative_weights


def test_a_row_of_weight_zero_speaks_for_nobody():
    design = SampleDesign.weighted([2.0, 4.0, 0.0, 3.0])
    found = proportion([True, False, True, True], design)
    assert found.value == pytest.approx(5 / 9)
    assert found.base == 3


def test_labels_of_any_kind():
    for labels in (
        [1, 2, 1],
        np.array(["x", "y", "x"]),
        np.array(["x", 3, "x"], dtype=object),
        [True, False, True],
    ):
        kinds = dict.fromkeys(np.asarray(labels).tolist(), 9)
        assert SampleDesign.stratified(labels, population_sizes=kinds).population_size == 18


REFUSED = {
    "n must be a whole number of 1 or more": lambda: SampleDesign.simple_random(0),
    "n must be a whole number of 1 or more, but got 2.5": lambda: SampleDesign.simple_random(2.5),
    "population_size must not be smaller than the 9 rows": (
        lambda: SampleDesign.simple_random(9, population_size=8)
    ),
    "population_size must be a whole number": (
        lambda: SampleDesign.simple_random(9, population_size=10.5)
    ),
    r"population_sizes must say a number for every stratum in the rows, but got b": (
        lambda: SampleDesign.stratified(["a", "b"], population_sizes={"a": 3})
    ),
    r"population_sizes must name only strata that have rows, but got 'c'": (
        lambda: SampleDesign.stratified(["a", "b"], population_sizes={"a": 3, "b": 3, "c": 4})
    ),
    r"population_sizes\['a'\] must not be smaller than the 2 rows": (
        lambda: SampleDesign.stratified(["a", "a"], population_sizes={"a": 1})
    ),
    r"population_sizes\['a'\] must be a whole number of 1 or more, but got -4": (
        lambda: SampleDesign.stratified(["a", "a"], population_sizes={"a": -4})
    ),
    "population_sizes must give a number for each stratum": (
        lambda: SampleDesign.stratified(["a", "a"], population_sizes=7)
    ),
    "strata must have a label in every row, but got nothing in row 1": (
        lambda: SampleDesign.stratified(["a", None], population_sizes={"a": 7})
    ),
    "strata must have a label in every row": (
        lambda: SampleDesign.stratified([1.0, np.nan], population_sizes={1.0: 7})
    ),
    "clusters must lie in one stratum each, but got 'k'": (
        lambda: SampleDesign.clustered(["k", "k"], strata=["a", "b"])
    ),
    "clusters must hold one entry for each of the 3 rows": (
        lambda: SampleDesign.weighted([1.0, 2.0, 3.0], clusters=["a", "b"])
    ),
    "strata must hold one entry for each of the 2 rows": (
        lambda: SampleDesign.attempted_census(2, strata=["a"], population_sizes={"a": 4})
    ),
    "population_clusters must be given for each of the 2 strata, but got 9": (
        lambda: SampleDesign.clustered(["k", "l"], strata=["a", "b"], population_clusters=9)
    ),
    "population_clusters must not be smaller than the 2 clusters drawn": (
        lambda: SampleDesign.clustered(["k", "l"], population_clusters=1)
    ),
    r"population_clusters\['b'\] must not be smaller than the 2 clusters drawn": (
        lambda: SampleDesign.clustered(
            ["j", "k", "l"], strata=["a", "b", "b"], population_clusters={"a": 1, "b": 1}
        )
    ),
    "population_clusters must name only strata that have rows": (
        lambda: SampleDesign.clustered(["k", "l"], population_clusters={"everyone": 4, "z": 4})
    ),
    "population_clusters must come together with clusters": (
        lambda: SampleDesign.weighted([1.0, 2.0], population_clusters=9)
    ),
    "cluster_sizes must say a number for every cluster in the rows, but got l": (
        lambda: SampleDesign.two_stage(["k", "l"], cluster_sizes={"k": 4})
    ),
    r"cluster_sizes\['k'\] must not be smaller than the 2 rows": (
        lambda: SampleDesign.two_stage(["k", "k"], cluster_sizes={"k": 1})
    ),
    "cluster_sizes must give a number for each cluster": (
        lambda: SampleDesign.two_stage(["k", "k"], cluster_sizes=3)
    ),
    "weights must be finite and not negative, but got -1.0 in row 1": (
        lambda: SampleDesign.weighted([1.0, -1.0])
    ),
    "weights must be finite and not negative, but got nan in row 0": (
        lambda: SampleDesign.quota(2, weights=[np.nan, 1.0])
    ),
    "weights must not all be zero": lambda: SampleDesign.weighted([0.0, 0.0]),
    "weights must hold one entry for each of the 3 rows": (
        lambda: SampleDesign.quota(3, weights=[1.0, 1.0])
    ),
    "population_size must be one whole number when there are clusters": (
        lambda: SampleDesign.weighted([1.0, 2.0], clusters=[1, 2], population_size={"a": 4})
    ),
    "population_sizes must be given together": (
        lambda: SampleDesign.attempted_census(2, strata=["a", "b"])
    ),
    "strata must be given together": (
        lambda: SampleDesign.attempted_census(2, population_sizes={"a": 4})
    ),
    "population_size must equal the sum of population_sizes, 9": (
        lambda: SampleDesign.attempted_census(
            2, strata=["a", "b"], population_sizes={"a": 4, "b": 5}, population_size=8
        )
    ),
}


@pytest.mark.parametrize("message", REFUSED)
def test_what_cannot_be_is_refused_by_name(message):
    with pytest.raises(InputError, match=f"^{message}") as refusal:
        REFUSED[message]()
    assert str(refusal.value).endswith(".")


def test_with_replacement_there_may_be_more_rows_than_units():
    assert SampleDesign.simple_random(9, population_size=8, replacement=True).n == 9
    sizes = {"a": 1}
    design = SampleDesign.stratified(["a", "a"], population_sizes=sizes, replacement=True)
    assert design.weights.tolist() == [0.5, 0.5]
