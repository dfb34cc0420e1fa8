"""The harness runs at a tiny size, so that it cannot rot; no times are judged here."""

from __future__ import annotations

import json
from io import BytesIO

import pandas as pd
import pytest

from tests.benchmarks.__main__ import LATEST, Sizes, line, measure, report
from tests.benchmarks.generated_files import fieldwork_file
from tests.benchmarks.timing import Result

TINY = Sizes(
    rows=120,
    columns=12,
    universe=60,
    sample=10,
    large_rows=200,
    table_rows=500,
    table_pairs=10,
    repeats=3,
    figures=3,
    requests=2,
    runs=2,
    servers=False,
)
KEYS = {
    "name",
    "seconds",
    "against",
    "against_seconds",
    "limit",
    "note",
    "ratio",
    "holds",
}


@pytest.fixture(scope="module")
def tiny():
    results = list(measure(TINY))
    return results, json.loads(json.dumps(report(results, TINY)))


def test_everything_that_needs_no_server_is_measured(tiny):
    _, written = tiny
    names = [record["name"] for record in written["results"]]
    assert names == [
        "read_fieldwork_file",
        "read_fieldwork_file",
        "first figure",
        "exact distribution",
        "mean()",
        "tabulate",
        "readout page, written",
    ]


def test_every_record_is_complete(tiny):
    for record in tiny[1]["results"]:
        assert set(record) == KEYS
        assert record["seconds"] > 0
        assert (record["ratio"] is None) == (record["against_seconds"] is None)
    assert tiny[1]["sizes"]["rows"] == 120
    assert tiny[1]["machine"]["cores"] >= 1


def test_every_result_is_one_line(tiny):
    for result in tiny[0]:
        assert result.name in line(result)
        assert "\n" not in line(result)


def test_a_limit_is_judged_by_the_ratio_or_by_the_seconds():
    assert Result("a", 2.0, "b", 1.0, limit=2.0).holds is True
    assert Result("a", 2.1, "b", 1.0, limit=2.0).holds is False
    assert Result("a", 2.0, limit=3.0).holds is True
    assert Result("a", 2.0).holds is None


def test_the_generated_file_is_the_same_each_time_and_as_large_as_asked():
    data = fieldwork_file(50, 9)
    assert data == fieldwork_file(50, 9)
    assert pd.read_csv(BytesIO(data)).shape == (50, 9)


def test_the_written_results_have_the_same_shape():
    written = json.loads(LATEST.read_text(encoding="utf-8"))
    assert written["sizes"]["runs"] >= 5
    assert all(set(record) == KEYS for record in written["results"])
