"""Strata and clusters as codes, and clusters that turn into strata where all were drawn."""

from __future__ import annotations

import numpy as np
import pytest

from estimators.sampling_stages import counts_by, stages_of_clusters, stages_of_rows, sums_by

STRATUM = np.array([0, 0, 0, 1, 1, 1, 1])
CLUSTER = np.array([0, 1, 1, 2, 2, 3, 3])
MEMBERS = np.array([1.0, 6.0, 2.0, 5.0])
STRATA = (STRATUM, ("north", "south"))
CLUSTERS = (CLUSTER, ("p", "q", "r", "s"))


def test_rows_are_units_where_there_are_no_clusters():
    stages = stages_of_rows(STRATUM, np.array([6.0, np.inf]), ("north", "south"))
    assert stages.unit is None
    assert stages.row_units.tolist() == list(range(7))
    assert stages.units_drawn.tolist() == [3, 4]
    assert stages.fractions.tolist() == [0.5, 0.0]
    assert stages.is_corrected
    assert not stages.endless().is_corrected


def test_clusters_are_units_where_some_were_drawn():
    stages = stages_of_clusters(STRATA, CLUSTERS, np.array([8.0, 4.0]), MEMBERS)
    assert stages.unit_stratum.tolist() == [0, 0, 1, 1]
    assert stages.units_drawn.tolist() == [2, 2]
    assert stages.fractions.tolist() == [0.25, 0.5]
    assert stages.rows_drawn.tolist() == [1, 2, 2, 2]
    assert stages.rows_there.tolist() == MEMBERS.tolist()
    assert stages.response_group.tolist() == CLUSTER.tolist()


def test_clusters_of_a_universe_drawn_completely_are_strata_of_rows():
    stages = stages_of_clusters(STRATA, CLUSTERS, np.array([2.0, 2.0]), MEMBERS)
    assert stages.unit is None
    assert stages.stratum_names == ("p", "q", "r", "s")
    assert stages.units_there.tolist() == MEMBERS.tolist()
    assert stages.units_drawn.tolist() == [1, 2, 2, 2]


def test_only_strata_drawn_completely_turn():
    stages = stages_of_clusters(STRATA, CLUSTERS, np.array([2.0, 9.0]), MEMBERS)
    assert stages.stratum_names == ("south", "p", "q")
    assert stages.stratum.tolist() == [1, 2, 2, 0, 0, 0, 0]
    assert stages.units_there.tolist() == [9.0, 1.0, 6.0]
    assert stages.units_drawn.tolist() == [2, 1, 2]
    assert sorted(stages.rows_drawn.tolist()) == [1, 1, 1, 2, 2]
    together = [set(np.flatnonzero(stages.response_group == g)) for g in range(4)]
    assert {frozenset(rows) for rows in together} == {
        frozenset({0}),
        frozenset({1, 2}),
        frozenset({3, 4}),
        frozenset({5, 6}),
    }


def test_sums_and_counts_by_code_keep_codes_nobody_has():
    codes, values = np.array([2, 0, 2]), np.array([1.0, 5.0, 7.0])
    assert sums_by(codes, values, 4).tolist() == [5.0, 0.0, 8.0, 0.0]
    assert counts_by(codes, None, 4).tolist() == [1.0, 0.0, 2.0, 0.0]
    assert counts_by(codes, np.array([True, False, True]), 4).tolist() == [0.0, 0.0, 2.0, 0.0]


def test_arrays_are_read_only():
    stages = stages_of_clusters(STRATA, CLUSTERS, np.array([2.0, 9.0]), MEMBERS)
    for array in (stages.stratum, stages.unit_stratum, stages.units_there, stages.rows_there):
        with pytest.raises(ValueError, match="read-only"):
            array[0] = 3
