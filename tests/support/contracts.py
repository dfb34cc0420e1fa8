"""What every estimator must keep, whatever it estimates: one battery, run over each of them."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import pytest

from estimators import (
    Estimate,
    InputError,
    SampleDesign,
    mean,
    proportion,
    quantile,
    ratio,
    total,
)


@dataclass(frozen=True)
class Estimator:
    """An estimator and the values to try it with."""

    name: str
    call: Callable[..., Estimate]
    argument: str
    scales: bool = True
    zero_one: bool = False

    def __str__(self) -> str:
        return self.name

    def values(self, n: int) -> np.ndarray:
        numbers = np.random.default_rng(n).gamma(2.0, 5.0, n)
        return (numbers > 8).astype(float) if self.zero_one else numbers


MEAN = Estimator("mean", mean, "values")
TOTAL = Estimator("total", total, "values")
RATIO = Estimator(
    "ratio", lambda v, d, **kw: ratio(v, 2 + np.arange(d.n) % 3, d, **kw), "numerator"
)
PROPORTION = Estimator("proportion", proportion, "chosen", scales=False, zero_one=True)
QUANTILE = Estimator("quantile", lambda v, d, **kw: quantile(v, 0.5, d, **kw), "values")

N = 48
STRATA = np.array(["north", "south", "west"])[np.arange(N) % 3]
CLUSTERS = np.array([f"{s}{i % 4}" for i, s in enumerate(STRATA)])
SIZES = {"north": 90, "south": 40, "west": 300}


def designs() -> dict[str, SampleDesign]:
    """One design of every kind that knows its universe."""
    weights = 2 + np.arange(N) % 5
    there = {"north": 8, "south": 9, "west": 30}
    return {
        "simple random": SampleDesign.simple_random(N, population_size=200),
        "with replacement": SampleDesign.simple_random(N, population_size=200, replacement=True),
        "stratified": SampleDesign.stratified(STRATA, population_sizes=SIZES),
        "attempted census": SampleDesign.attempted_census(N, population_size=100),
        "clustered": SampleDesign.clustered(CLUSTERS, strata=STRATA, population_clusters=there),
        "two stages": SampleDesign.two_stage(
            CLUSTERS,
            strata=STRATA,
            cluster_sizes=dict.fromkeys(CLUSTERS.tolist(), 9),
            population_clusters=there,
        ),
        "weighted": SampleDesign.weighted(weights, strata=STRATA, clusters=CLUSTERS),
        "quota": SampleDesign.quota(N, weights=weights),
    }


def assert_same(first: Estimate, second: Estimate, *, cautions: bool = True) -> None:
    """Two estimates agree in every number."""
    numbers = [
        "value",
        "standard_error",
        "degrees_of_freedom",
        "base",
        "weighted_base",
        "design_effect",
        "effective_base",
        "equivalent_base",
    ]
    for name in numbers:
        assert getattr(first, name) == pytest.approx(
            getattr(second, name), rel=1e-9, abs=1e-12, nan_ok=True
        ), name
    assert (first.interval.low, first.interval.high) == pytest.approx(
        (second.interval.low, second.interval.high), rel=1e-9, abs=1e-12, nan_ok=True
    )
    if cautions:
        assert first.cautions == second.cautions


def check_result_is_complete(estimator: Estimator) -> None:
    for name, design in designs().items():
        found = estimator.call(estimator.values(N), design)
        assert isinstance(found, Estimate), name
        assert found.interval.low <= found.value <= found.interval.high, name
        assert found.half_width == (found.interval.high - found.interval.low) / 2
        assert found.interval.confidence == 0.95
        assert found.standard_error > 0
        assert found.base == N
        assert found.weighted_base == pytest.approx(design.weights.sum())
        assert found.effective_base == pytest.approx(found.base / found.design_effect)


def check_order_of_rows_does_not_matter(estimator: Estimator) -> None:
    order = np.random.default_rng(1).permutation(N)
    values, where, answered = estimator.values(N), np.arange(N) % 5 > 0, np.arange(N) % 7 > 0
    if estimator is RATIO:
        order = np.arange(N).reshape(-1, 3)[::-1].ravel()  # keeps the denominators in place
    first = SampleDesign.weighted(2 + np.arange(N) % 5, strata=STRATA, clusters=CLUSTERS)
    second = SampleDesign.weighted(
        (2 + np.arange(N) % 5)[order], strata=STRATA[order], clusters=CLUSTERS[order]
    )
    assert_same(
        estimator.call(values, first, where=where, answered=answered),
        estimator.call(values[order], second, where=where[order], answered=answered[order]),
    )


def check_unit_of_values_does_not_matter(estimator: Estimator) -> None:
    for design in designs().values():
        once = estimator.call(estimator.values(N), design)
        if not estimator.scales:  # a share has no unit, but two sides
            other = estimator.call(1 - estimator.values(N), design)
            assert other.value == pytest.approx(1 - once.value)
            assert other.standard_error == pytest.approx(once.standard_error)
            assert other.interval.high == pytest.approx(1 - once.interval.low)
            continue
        thousand = estimator.call(estimator.values(N) * 1000, design)
        assert thousand.value == pytest.approx(1000 * once.value)
        assert thousand.standard_error == pytest.approx(1000 * once.standard_error)
        assert thousand.half_width == pytest.approx(1000 * once.half_width)
        assert thousand.degrees_of_freedom == pytest.approx(once.degrees_of_freedom, rel=1e-12)
        assert thousand.design_effect == pytest.approx(once.design_effect)


def check_a_census_has_no_sampling_error(estimator: Estimator) -> None:
    counts = dict(zip(*np.unique(STRATA, return_counts=True), strict=True))
    clusters = dict.fromkeys(SIZES, 4)
    values = estimator.values(N)
    for design in (
        SampleDesign.simple_random(N, population_size=N),
        SampleDesign.stratified(STRATA, population_sizes=counts),
        SampleDesign.clustered(CLUSTERS, strata=STRATA, population_clusters=clusters),
    ):
        found = estimator.call(values, design)
        assert found.standard_error == 0
        assert found.interval.low == found.interval.high == found.value
        assert math.isinf(found.degrees_of_freedom)
        assert found.cautions == ()
        group = estimator.call(values, design, where=np.arange(N) < 10)
        assert group.half_width == 0


def check_a_census_without_all_answers_has_error(estimator: Estimator) -> None:
    design = SampleDesign.simple_random(N, population_size=N)
    found = estimator.call(estimator.values(N), design, answered=np.arange(N) % 2 == 0)
    assert found.standard_error > 0
    assert found.half_width > 0
    assert "answers_missing" in [c.code for c in found.cautions]


def check_masks_of_all_true_change_nothing(estimator: Estimator) -> None:
    everyone = np.ones(N, bool)
    for design in designs().values():
        assert_same(
            estimator.call(estimator.values(N), design),
            estimator.call(estimator.values(N), design, where=everyone, answered=everyone),
        )


def check_values_outside_the_base_do_not_matter(estimator: Estimator) -> None:
    where, answered = np.arange(N) % 3 > 0, np.arange(N) % 5 > 0
    values = estimator.values(N)
    for bad in (np.nan, np.inf, 7.0):
        spoilt = np.where(where & answered, values, bad)
        for design in designs().values():
            assert_same(
                estimator.call(values, design, where=where, answered=answered),
                estimator.call(spoilt, design, where=where, answered=answered),
            )


def check_answers_outside_the_group_do_not_matter(estimator: Estimator) -> None:
    where, answered = np.arange(N) % 3 > 0, np.arange(N) % 5 > 0
    for design in designs().values():
        assert_same(
            estimator.call(estimator.values(N), design, where=where, answered=answered),
            estimator.call(estimator.values(N), design, where=where, answered=answered & where),
        )


def check_labels_are_only_labels(estimator: Estimator) -> None:
    names = {"north": 3, "south": 1, "west": 2}
    renamed = SampleDesign.stratified(
        [names[s] for s in STRATA], population_sizes={names[s]: k for s, k in SIZES.items()}
    )
    plain = SampleDesign.stratified(STRATA, population_sizes=SIZES)
    values = estimator.values(N)
    assert_same(estimator.call(values, plain), estimator.call(values, renamed))


def check_more_confidence_is_wider(estimator: Estimator) -> None:
    for design in designs().values():
        widths = [
            estimator.call(estimator.values(N), design, confidence=c).half_width
            for c in (0.5, 0.8, 0.9, 0.95, 0.99)
        ]
        assert widths == sorted(widths)
        assert widths[0] < widths[-1]


def check_an_endless_universe_is_not_more_precise(estimator: Estimator) -> None:
    for name, design in designs().items():
        if name == "two stages":  # there the second stage adds where clusters are unlike inside
            continue
        finite = estimator.call(estimator.values(N), design)
        endless = estimator.call(estimator.values(N), design.without_correction())
        assert endless.value == finite.value
        assert endless.half_width >= finite.half_width * (1 - 1e-12)


def check_nobody_in_the_base_is_no_number(estimator: Estimator) -> None:
    nobody = np.zeros(N, bool)
    for kind in ("where", "answered"):
        for design in designs().values():
            found = estimator.call(estimator.values(N), design, **{kind: nobody})
            assert math.isnan(found.value)
            assert math.isnan(found.interval.low)
            assert found.base == 0
            assert found.cautions[-1].code == "nobody_in_base"


def check_cautions_of_the_design_stay(estimator: Estimator) -> None:
    values = estimator.values(N)
    where = np.arange(N) % 2 == 0
    for name, code in (("quota", "quota_sample"), ("attempted census", "attempted_census")):
        design = designs()[name]
        assert code in [c.code for c in estimator.call(values, design).cautions]
        assert code in [c.code for c in estimator.call(values, design, where=where).cautions]


def check_strata_with_one_row_are_reported(estimator: Estimator) -> None:
    strata = np.where(np.arange(N) == 5, "lonely", STRATA)
    design = SampleDesign.stratified(strata, population_sizes={**SIZES, "lonely": 7})
    found = estimator.call(estimator.values(N), design)
    assert [c.code for c in found.cautions] == ["single_cluster_stratum"]
    assert "lonely" in found.cautions[0].sentence
    other = estimator.call(estimator.values(N), design, where=strata != "lonely")
    assert other.cautions == ()


def check_wrong_calls_are_refused_by_name(estimator: Estimator) -> None:
    design, values = designs()["simple random"], estimator.values(N)
    missing = values.copy()
    missing[3] = np.nan
    wrong = [
        (estimator.argument, (missing,), {}),
        (estimator.argument, (missing,), {"where": np.arange(N) < 9}),
        (estimator.argument, (values[1:],), {}),
        (estimator.argument, (values.reshape(2, -1),), {}),
        (estimator.argument, (values.astype(str),), {}),
        ("where", (values,), {"where": np.arange(N)}),
        ("where", (values,), {"where": np.ones(N - 1, bool)}),
        ("answered", (values,), {"answered": ["yes"] * N}),
        ("confidence", (values,), {"confidence": 95}),
        ("confidence", (values,), {"confidence": 0.0}),
        ("confidence", (values,), {"confidence": math.nan}),
    ]
    for argument, given, named in wrong:
        with pytest.raises(InputError, match=f"^{argument} must ") as refusal:
            estimator.call(*given, design, **named)
        assert refusal.value.argument == argument
        assert str(refusal.value).endswith(".")


def check_input_stays_as_it_was(estimator: Estimator) -> None:
    values, where = estimator.values(N), np.arange(N) % 2 == 0
    before = values.copy(), where.copy()
    for design in designs().values():
        estimator.call(values, design, where=where, answered=np.arange(N) % 3 > 0)
    assert (values == before[0]).all()
    assert (where == before[1]).all()


CHECKS = [check for name, check in sorted(globals().items()) if name.startswith("check_")]
