"""What is computed without a server: reading, the first figure, exact distributions, a mean."""

from __future__ import annotations

import tempfile
from io import BytesIO
from pathlib import Path

import numpy as np
import pandas as pd

from app.charts.fan_figure import fan_figure
from app.charts.palette import LIGHT
from app.intake import read_fieldwork_file
from app.store import open_database
from app.study.fans import fan_of
from app.study.figures import compute_figure, default_request
from app.study.study_data import prepare_study
from app.widgets.deliveries import deliver
from app.widgets.figure_address import first_question
from estimators import SampleDesign, Universe, mean, mean_distribution
from tests.benchmarks import tabulate_speed
from tests.benchmarks.timing import Result, in_turn, median_of, seconds_of

_REPEATS_SHOWN = 10_000  # repeats of the survey the exact distribution has to beat


def reading(data: bytes, runs: int, *, limit: float | None = None) -> Result:
    """Read a fieldwork file against pandas reading the same bytes."""
    ours, other = in_turn(
        lambda: read_fieldwork_file(data, file_name="answers.csv"),
        lambda: pd.read_csv(BytesIO(data)),
        runs,
    )
    note = f"{len(data) / 1e6:.1f} MB"
    return Result("read_fieldwork_file", ours, "pandas.read_csv", other, limit, note)


def first_figure(data: bytes, runs: int) -> Result:
    """From the bytes of an upload to the picture of the first figure, on an empty store."""
    ours, other = in_turn(lambda: _first_figure(data), lambda: pd.read_csv(BytesIO(data)), runs)
    note = "read, guess questions, store, prepare, compute, draw"
    return Result("first figure", ours, "pandas.read_csv", other, None, note)


def _first_figure(data: bytes) -> None:
    with tempfile.TemporaryDirectory() as folder:
        database = open_database(Path(folder))
        delivery = deliver(database, "", data, "answers.csv")
        file = database.current_file(delivery.study_id)
        read = read_fieldwork_file(database.file_bytes(file.fingerprint), file_name="answers.csv")
        study = database.study(delivery.study_id)
        plan = database.plan(study.id).plan
        prepared = prepare_study(study, database.questions(study.id), plan, read.answers)
        figure = compute_figure(prepared, default_request(first_question(prepared)))
        fan_figure(fan_of(prepared, figure), LIGHT)


def exact_distribution(universe: int, sample: int, repeats: int, runs: int) -> Result:
    """The exact distribution of a mean against repeats of the same survey, drawn row by row."""
    values = np.arange(11.0)
    parts = np.array([3, 2, 3, 4, 6, 11, 14, 20, 18, 11, 8]) / 100
    counts = np.floor(universe * parts).astype(int)
    counts[7] += universe - counts.sum()
    rows, draw = np.repeat(values, counts), np.random.default_rng(3)

    def repeated() -> None:
        for _ in range(repeats):
            draw.choice(rows, sample, replace=False).mean()

    ours, other = in_turn(
        lambda: mean_distribution(Universe(values, counts), sample), repeated, runs
    )
    scale = _REPEATS_SHOWN / repeats
    note = f"11 values, n = {sample:,} of {universe:,}; {repeats:,} repeats timed, times {scale:g}"
    return Result(
        "exact distribution", ours, f"{_REPEATS_SHOWN:,} repeats", other * scale, 1.0, note
    )


def one_mean(rows: int, runs: int) -> Result:
    """One mean with its interval."""
    answers = np.random.default_rng(5).normal(7, 2, rows)
    design = SampleDesign.simple_random(rows, population_size=rows * 4)
    seconds = median_of(lambda: mean(answers, design), runs * 10)
    return Result("mean()", seconds, note=f"{rows:,} rows, {1000 * seconds:.2f} ms")


def tables(rows: int, pairs: int, runs: int) -> Result:
    """Every cell of many weighted tables, against the sums no table can do without."""
    found = tabulate_speed.measure(rows, pairs, runs)
    return Result(
        "tabulate",
        found["tabulate"],
        against="three bare bincounts",
        against_seconds=found["bare_sums"],
        limit=2.0,
        note=f"{rows:,} rows x {pairs} pairs; {found['faster_than_pandas']:.0f} x faster than "
        "a pandas group-by loop",
    )


def first_figure_in_browser(data: bytes) -> Result:
    """From the drop of a file to the number of its first figure in a real browser, once."""
    from tests.support import browser_pages as pages
    from tests.support.running_server import running_server

    number = ".st-key-first_figure .hr-number"
    with (
        tempfile.TemporaryDirectory() as folder,
        running_server(Path(folder) / "data") as server,
        pages.started_browser() as browser,
    ):
        path = Path(folder) / "answers.csv"
        path.write_bytes(data)
        page, _ = pages.opened_page(browser, server.address)
        pages.go(page, f"{server.address}/file")

        def drop() -> None:
            page.locator("input[type=file]").set_input_files(path)
            page.wait_for_selector(number)

        seconds = seconds_of(drop)
    note = f"{len(data) / 1e6:.1f} MB over loopback, first file of a fresh server"
    return Result("first figure in the browser", seconds, limit=3.0, note=note)
