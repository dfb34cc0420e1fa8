"""The measurement runs at a tiny size and says what it promises; no times are judged here."""

from __future__ import annotations

from tests.benchmarks.tabulate_speed import measure


def test_the_measurement_runs():
    found = measure(rows=300, pairs=20, repeats=2)
    assert (found["rows"], found["pairs"], found["repeats"]) == (300, 20, 2)
    assert found["times_bare_sums"] == found["tabulate"] / found["bare_sums"] > 0
    assert found["faster_than_pandas"] == found["pandas"] / found["tabulate"] > 0
