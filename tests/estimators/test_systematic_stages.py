from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest

from estimators import InputError, SampleDesign, mean, proportion, tabulate, total
from estimators.systematic_stages import systematic_stages

PUBLISHED = Path(__file__).parents[1] / "published_values" / "replicates.json"
TEN = json.loads(PUBLISHED.read_text(encoding="utf-8"))["cases"][2]


def by_differences(values, population_size):
    """Wolter's v3 for a mean: (1 - f)/n times the mean of half the squared differences of pairs."""
    n = len(values)
    pairs = [(values[i] - values[i + 1]) ** 2 / 2 for i in range(0, n, 2)]
    return (1 - n / population_size) / n * sum(pairs) / len(pairs)


def test_neighbours_are_compared_in_the_order_of_the_list():
    order = np.array([50.0, 10, 40, 20, 60, 30])
    values = np.array([5.0, 1, 3, 2, 9, 4])
    design = SampleDesign.systematic(order, population_size=60)
    expected = by_differences(values[np.argsort(order)], 60)
    found = mean(values, design)
    assert found.standard_error**2 == pytest.approx(expected)
    assert found.degrees_of_freedom == 3
    assert total(values, design).standard_error == pytest.approx(60 * found.standard_error)
    assert [c.code for c in found.cautions] == ["systematic_sample"]


def test_published_samples_of_a_list_that_rises():
    samples = np.array(TEN["values"], dtype=float).T
    design = SampleDesign.systematic(range(4), population_size=40)
    found = [mean(sample, design) for sample in samples]
    true = TEN["expected"]["systematic_variance"]
    assert np.var([e.value for e in found]) == pytest.approx(true["value"], abs=true["tolerance"])
    estimated = np.mean([e.standard_error**2 for e in found])
    assert estimated == pytest.approx(np.mean([by_differences(s, 40) for s in samples]))
    simple = [mean(s, SampleDesign.simple_random(4, population_size=40)) for s in samples]
    apart = abs(np.mean([e.standard_error**2 for e in simple]) - true["value"])
    assert abs(estimated - true["value"]) < apart / 4


def test_an_odd_row_joins_the_last_pair():
    stages = systematic_stages([1, 2, 3, 4, 5], 50)
    assert stages.stratum.tolist() == [0, 0, 1, 1, 1]
    assert stages.units_there.tolist() == [20, 30]
    assert systematic_stages([7], 3).units_there.tolist() == [3]


def test_a_complete_list_leaves_nothing_to_chance():
    found = mean(np.arange(6.0), SampleDesign.systematic(range(6), population_size=6))
    assert found.standard_error == 0


def test_order_without_meaning_gives_the_error_of_a_simple_sample():
    chance = np.random.default_rng(4)
    values = chance.normal(size=4_000)
    design = SampleDesign.systematic(chance.permutation(4_000), population_size=9_000)
    simple = SampleDesign.simple_random(4_000, population_size=9_000)
    expected = mean(values, simple).standard_error
    assert mean(values, design).standard_error == pytest.approx(expected, rel=0.1)
    gave = chance.random(4_000) < 0.6
    few = mean(values, simple, answered=gave).standard_error
    found = mean(values, design, answered=gave)
    assert found.standard_error == pytest.approx(few, rel=0.1)
    assert {c.code for c in found.cautions} == {"systematic_sample", "answers_missing"}


def test_tables_give_the_same_numbers():
    chance = np.random.default_rng(1)
    chosen, group = chance.random(50) < 0.4, chance.random(50) < 0.5
    design = SampleDesign.systematic(chance.permutation(50), population_size=200)
    table = tabulate({"q": chosen.astype(int)}, {"g": group.astype(int)}, design).columns
    row = (table["answer"] == 1) & (table["grouping"] == "g") & (table["group"] == 1)
    expected = proportion(chosen, design, where=group)
    assert table["low"][row].tolist() == pytest.approx([expected.interval.low])


@pytest.mark.parametrize(
    ("order", "size", "message"),
    [
        ([1, 2, 2], 9, "order must give every row a place of its own, but got 2 in two rows"),
        ([1, np.nan], 9, "order must be a finite number for every row, but got nan in row 1"),
        (["a", "b"], 9, "order must hold numbers only"),
        ([1, 2, 3], 2, "population_size must not be smaller than the 3 rows"),
        ([1, 2, 3], 2.5, "population_size must be a whole number"),
    ],
)
def test_wrong_lists_are_named(order, size, message):
    with pytest.raises(InputError, match=message):
        SampleDesign.systematic(order, population_size=size)
