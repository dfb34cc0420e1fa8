from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from estimators import InputError, SampleDesign, proportion, tabulate
from estimators.proportion_intervals import METHODS
from estimators.share_tables import COLUMNS
from tests.support import contracts
from tests.support.slow_variance import (
    loop_mean_contributions,
    loop_subgroup_factor,
    loop_variance,
)
from tests.support.table_designs import assert_same_figures, figures_of, random_design, rows_of

N = contracts.N


def cell_by_cell(answers, groupings, design, table, *, where=None, **named):
    """The same table from one call of proportion() for every cell."""
    found = []
    for row in range(len(table)):
        codes, mask = answers[table.question[row]], where
        if table.grouping[row]:
            group = groupings[table.grouping[row]] == table.group[row]
            mask = group if where is None else group & where
        chosen = codes == table.answer[row]
        found.append(
            figures_of(proportion(chosen, design, where=mask, answered=codes >= 0, **named))
        )
    return np.array(found)


@settings(max_examples=150, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_every_cell_is_what_proportion_says(seed):
    draw = np.random.default_rng(seed)
    n = int(draw.choice([1, 2, 3, 5, 8, 13, 30, 60]))
    _, design = random_design(draw, n)
    answers = {name: draw.integers(0, 3, n) for name in ("mood", "use")}
    missing = draw.choice([0.0, 0.1, 0.6])
    for codes in answers.values():
        codes[draw.random(n) < missing] = -1
    groupings = {"region": draw.integers(-1, 3, n), "size": draw.integers(0, 2, n)}
    where = None if draw.random() < 0.5 else draw.random(n) < 0.6
    method = str(draw.choice(["wilson", *METHODS]))
    size = {"mood": 4, "use": 3, "region": 3, "size": 2}
    table = tabulate(answers, groupings, design, where=where, codes=size, method=method)
    assert len(table) == (4 + 3) * (1 + 3 + 2)
    wanted = cell_by_cell(answers, groupings, design, table, where=where, method=method)
    assert_same_figures(rows_of(table), wanted)


@pytest.mark.parametrize("name", list(contracts.designs()))
def test_every_design_with_enough_rows(name, rng):
    design = contracts.designs()[name]
    answers = {"mood": np.where(rng.random(N) < 0.2, -1, rng.integers(0, 3, N))}
    groupings = {"wave": rng.integers(0, 2, N)}
    for used in (design, design.without_correction()):
        table = tabulate(answers, groupings, used)
        wanted = cell_by_cell(answers, groupings, used, table)
        np.testing.assert_allclose(rows_of(table), wanted, rtol=1e-12, atol=1e-13)
        assert np.isfinite(table.standard_error).all()


def test_weighted_clusters_of_a_subgroup_against_plain_loops(rng):
    """Between and within clusters as in Cochran (1977), equation 11.24, by loops."""
    strata = np.array(["a", "b"])[np.arange(40) % 2]
    clusters = np.array([f"{s}{k % 5}" for k, s in enumerate(strata)])
    weights, wave, mood = rng.gamma(3, 1, 40) + 1, rng.integers(0, 2, 40), rng.integers(0, 3, 40)
    design = SampleDesign.weighted(weights, strata=strata, clusters=clusters)
    table = tabulate({"mood": mood}, {"wave": wave}, design)
    for row in np.flatnonzero(table.grouping == "wave"):
        inside = wave == table.group[row]
        chosen = (mood == table.answer[row]).astype(float)
        added = loop_mean_contributions(chosen, weights, inside)
        variance = loop_variance(added, strata, clusters)
        variance *= loop_subgroup_factor(strata, clusters, inside)
        assert table.standard_error[row] == pytest.approx(math.sqrt(variance), rel=1e-12)
        share = sum(w for w, c, i in zip(weights, chosen, inside, strict=True) if c and i)
        assert table.value[row] == pytest.approx(share / weights[inside].sum(), rel=1e-13)


def test_columns_are_those_promised_and_read_only(rng):
    table = tabulate({"mood": rng.integers(0, 3, 20)}, {}, SampleDesign.simple_random(20))
    assert tuple(table.columns) == COLUMNS
    assert {len(column) for column in table.columns.values()} == {3}
    for column in table.columns.values():
        with pytest.raises(ValueError, match="read-only"):
            column[0] = column[1]
    assert (table.confidence, table.method, table.cautions) == (0.95, "wilson", ())


def test_rows_come_by_question_grouping_group_and_answer():
    codes = np.array([0, 1, 1, 0])
    design = SampleDesign.quota(4)
    table = tabulate({"b": codes, "a": codes}, {"z": codes, "y": codes}, design)
    assert table.question.tolist() == ["b"] * 10 + ["a"] * 10
    assert table.grouping.tolist()[:10] == [""] * 2 + ["z"] * 4 + ["y"] * 4
    assert table.group.tolist()[:6] == [0, 0, 0, 0, 1, 1]
    assert table.answer.tolist()[:4] == [0, 1, 0, 1]
    assert [c.code for c in table.cautions] == ["quota_sample"]


def test_an_answer_nobody_gave_keeps_its_row_and_a_group_without_answers_is_no_number():
    mood, wave = np.array([0, 0, 2, -1]), np.array([0, 0, 0, 1])
    design = SampleDesign.simple_random(4)
    table = tabulate({"mood": mood}, {"wave": wave}, design, codes={"mood": 4, "wave": 3})
    assert len(table) == 4 * (1 + 3)
    nobody = table.base == 0
    assert (table.group[nobody] >= 1).all()
    assert nobody.sum() == 8
    for name in COLUMNS[5:]:
        assert np.isnan(table.columns[name][nobody]).all()
        assert not np.isnan(table.columns[name][~nobody]).any()
    unheard = (table.answer == 3) & (table.grouping == "")
    assert table.value[unheard] == 0
    assert table.high[unheard] > 0
    assert table.no_variation[unheard]


def test_a_question_nobody_answered_has_no_rows_unless_its_answers_are_named():
    nobody, design = np.full(5, -1), SampleDesign.simple_random(5)
    assert len(tabulate({"mood": nobody}, {}, design)) == 0
    assert np.isnan(tabulate({"mood": nobody}, {}, design, codes={"mood": 2}).value).all()
    assert len(tabulate({}, {"wave": nobody}, design)) == 0


def test_order_of_rows_does_not_matter(rng):
    mood, wave, weights = rng.integers(-1, 3, N), rng.integers(-1, 2, N), rng.gamma(2, 1, N)
    where, order = rng.random(N) < 0.7, rng.permutation(N)
    tables = []
    for rows in (np.arange(N), order):
        design = SampleDesign.weighted(
            weights[rows], strata=contracts.STRATA[rows], clusters=contracts.CLUSTERS[rows]
        )
        given = {"mood": mood[rows]}, {"wave": wave[rows]}
        tables.append(rows_of(tabulate(*given, design, where=where[rows])))
    np.testing.assert_allclose(*tables, rtol=1e-12, atol=1e-14)


def test_many_units_are_counted_question_by_question_with_the_same_result(rng, monkeypatch):
    design = contracts.designs()["two stages"]
    answers = {name: rng.integers(0, 3, N) for name in "abc"}
    codes = {"a": 4, "wave": 3}
    given = answers, {"wave": rng.integers(-1, 2, N)}, design
    whole = rows_of(tabulate(*given, codes=codes))
    monkeypatch.setattr("estimators.share_tables._MANY_UNITS", 5)
    monkeypatch.setattr("estimators.cell_shares._MANY", 1)
    np.testing.assert_array_equal(rows_of(tabulate(*given, codes=codes)), whole)


def test_bounds_open_to_whole_counts_only_in_groups_that_weigh_alike():
    """By wave the weights are equal, over both they differ: as proportion() sees it."""
    wave, mood = np.arange(40) % 2, np.arange(40) % 3
    design = SampleDesign.weighted(2.0 + wave, population_size=100)
    for weights in (design, SampleDesign.weighted(2 + wave + 1e-9 * mood, population_size=100)):
        table = tabulate({"mood": mood}, {"wave": wave}, weights)
        wanted = cell_by_cell({"mood": mood}, {"wave": wave}, weights, table)
        np.testing.assert_allclose(rows_of(table), wanted, rtol=1e-12)


def test_hypergeometric_bounds_are_for_everyone_in_a_simple_random_sample():
    mood, design = np.arange(20) % 2, SampleDesign.simple_random(20, population_size=50)
    table = tabulate({"mood": mood}, {}, design, method="hypergeometric")
    wanted = cell_by_cell({"mood": mood}, {}, design, table, method="hypergeometric")
    np.testing.assert_allclose(rows_of(table), wanted)
    with pytest.raises(InputError, match="must fit the sample"):
        tabulate({"mood": mood}, {"half": mood}, design, method="hypergeometric")


GOOD = np.array([0, 1, -1, 1])


@pytest.mark.parametrize(
    ("message", "answers", "groupings", "named"),
    [
        (r"^answers must be a dict", [GOOD], {}, {}),
        (r"^answers\['q'\] must hold whole numbers.*float64", {"q": GOOD / 2}, {}, {}),
        (r"^answers\['q'\] must hold one code for each of the 4 rows", {"q": GOOD[1:]}, {}, {}),
        (r"^answers\['q'\] must hold codes from 0.*but got -2", {"q": GOOD - 1}, {}, {}),
        (r"^answers\['q'\] must hold codes below the 1 ", {"q": GOOD}, {}, {"codes": {"q": 1}}),
        (r"^groupings\['g'\] must hold whole", {"q": GOOD}, {"g": list("abcd")}, {}),
        (r"^groupings must all have names", {"q": GOOD}, {"": GOOD}, {}),
        (r"^codes must name only answers and groupings", {"q": GOOD}, {}, {"codes": {"x": 2}}),
        (r"^codes\['q'\] must be a whole number", {"q": GOOD}, {}, {"codes": {"q": 1.5}}),
        (r"^where must hold true or false", {"q": GOOD}, {}, {"where": GOOD}),
        (r"^where must hold one entry", {"q": GOOD}, {}, {"where": [True]}),
        (r"^confidence must lie", {"q": GOOD}, {}, {"confidence": 95}),
        (r"^method must be the name", {"q": GOOD}, {}, {"method": "gauss"}),
    ],
)
def test_wrong_calls_are_refused_by_name(message, answers, groupings, named):
    with pytest.raises(InputError, match=message):
        tabulate(answers, groupings, SampleDesign.simple_random(4), **named)


@pytest.mark.parametrize("kind", [np.int8, np.uint8, np.int64, bool, np.uint64])
def test_codes_of_any_whole_type(kind):
    codes = np.array([0, 1, 1, 0, 1]).astype(kind)
    table = tabulate({"q": codes}, {"g": codes}, SampleDesign.simple_random(5))
    assert table.value.tolist() == [0.4, 0.6, 1.0, 0.0, 0.0, 1.0]


def test_input_stays_as_it_was(rng):
    codes, where = rng.integers(-1, 2, N), rng.random(N) < 0.5
    before = codes.copy(), where.copy()
    tabulate({"q": codes}, {"g": codes}, contracts.designs()["quota"], where=where)
    assert (codes == before[0]).all()
    assert (where == before[1]).all()
