from __future__ import annotations

import tracemalloc
from functools import reduce
from itertools import pairwise
from operator import add

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from estimators import InputError, SampleDesign, cells_of, share_table, tabulate
from tests.support.table_designs import random_design, rows_of

SIZES = {"mood": 3, "use": 4, "region": 3}


def file_of(draw, n):
    answers = {"mood": draw.integers(-1, 3, n), "use": draw.integers(0, 4, n)}
    return answers, {"region": draw.integers(-1, 3, n)}


def parts_of(answers, groupings, design, cuts, where=None):
    ends = [0, *cuts, design.n]
    return [
        cells_of(
            {name: codes[first:last] for name, codes in answers.items()},
            {name: codes[first:last] for name, codes in groupings.items()},
            design,
            rows=(first, last),
            where=None if where is None else where[first:last],
            codes=SIZES,
        )
        for first, last in pairwise(ends)
    ]


@settings(max_examples=80, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_parts_in_any_order_give_the_whole(seed):
    draw = np.random.default_rng(seed)
    n = int(draw.integers(2, 60))
    _, design = random_design(draw, n)
    answers, groupings = file_of(draw, n)
    where = None if draw.random() < 0.5 else draw.random(n) < 0.7
    parts = parts_of(answers, groupings, design, sorted(draw.integers(0, n, 2)), where)
    draw.shuffle(parts)
    whole = tabulate(answers, groupings, design, where=where, codes=SIZES)
    added = share_table(reduce(add, parts), design)
    np.testing.assert_allclose(rows_of(added), rows_of(whole), rtol=1e-11, atol=1e-12)


def test_sums_are_those_of_a_plain_loop(rng):
    weights, mood, region = rng.gamma(2, 1, 30), rng.integers(-1, 2, 30), rng.integers(-1, 2, 30)
    where = rng.random(30) < 0.8
    design = SampleDesign.weighted(weights)
    cells = cells_of({"mood": mood}, {"region": region}, design, where=where)
    wanted = np.zeros((3, 1, 4, 3))
    for weight, answer, group, about in zip(weights, mood, region, where, strict=True):
        slot = group + 2 if about else 0
        wanted[:, 0, slot, answer + 1] += [1, weight, weight**2]
    np.testing.assert_allclose(cells.sums["mood", "region"], wanted, rtol=1e-13)


def test_joint_counting_of_many_questions_gives_each_its_own_sums(rng):
    answers = {f"q{k}": rng.integers(-1, 1 + k, 500) for k in range(9)}
    region = rng.integers(-1, 3, 500)
    together = cells_of(answers, {"region": region}, SampleDesign.simple_random(500))
    for name, codes in answers.items():
        for group in range(-1, 3):
            found = together.sums[name, "region"][0, 0, group + 2]
            inside = codes[region == group] + 1
            assert found.tolist() == np.bincount(inside, minlength=len(found)).tolist()


def test_blocks_of_rows_add_up(rng, monkeypatch):
    answers, groupings = file_of(rng, 2_000)
    design = SampleDesign.weighted(rng.gamma(2, 1, 2_000))
    once = cells_of(answers, groupings, design)
    monkeypatch.setattr("estimators.cell_sums._BLOCK", 7)
    again = cells_of(answers, groupings, design)
    for pair, sums in once.sums.items():
        np.testing.assert_allclose(again.sums[pair], sums, rtol=1e-13)


def test_weights_that_follow_from_counts_are_counted_in_rows_alone(rng):
    answers, groupings = file_of(rng, 40)
    strata = np.arange(40) % 2
    sizes = {0: 90, 1: 60}
    design = SampleDesign.stratified(strata, population_sizes=sizes)
    assert cells_of(answers, groupings, design).sums["mood", "region"].shape == (1, 2, 5, 4)
    weighted = SampleDesign.weighted(1.0 + np.arange(40), strata=strata)
    assert cells_of(answers, groupings, weighted).sums["mood", "region"].shape == (3, 2, 5, 4)


def test_memory_does_not_grow_with_the_rows_of_a_part(rng):
    """Sums of 400,000 rows take blocks of 32,768 rows, not copies of all of them."""
    n = 400_000
    answers = {f"q{k}": rng.integers(-1, 4, n).astype(np.int8) for k in range(6)}
    groupings = {f"g{k}": rng.integers(0, 4, n).astype(np.int8) for k in range(3)}
    design = SampleDesign.simple_random(n)
    tracemalloc.start()
    cells_of(answers, groupings, design)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert peak < 8 * n * 2  # the codes of one column as counted would take 8 n


def test_parts_that_do_not_fit_are_refused(rng):
    answers, groupings = file_of(rng, 20)
    design = SampleDesign.simple_random(20)
    first, second = parts_of(answers, groupings, design, [8])
    with pytest.raises(InputError, match=r"^cells must hold every one of the 20 rows .* 0 to 7"):
        share_table(first, design)
    with pytest.raises(InputError, match=r"^cells must not count a row twice, but got row 8"):
        first + second + second
    with pytest.raises(InputError, match=r"^cells must be counted alike to be added"):
        first + cells_of({"mood": answers["mood"][8:]}, {}, design, rows=(8, 20))
    with pytest.raises(InputError, match=r"^rows must lie within the 20 rows"):
        cells_of(answers, groupings, design, rows=(5, 25))
    with pytest.raises(InputError, match=r"must hold one code for each of the 10 rows"):
        cells_of(answers, groupings, design, rows=(0, 10))


def test_sums_are_read_only(rng):
    answers, groupings = file_of(rng, 20)
    first, second = parts_of(answers, groupings, SampleDesign.simple_random(20), [8])
    for cells in (first, first + second):
        with pytest.raises(ValueError, match="read-only"):
            cells.sums["mood", "region"][0] = 0
