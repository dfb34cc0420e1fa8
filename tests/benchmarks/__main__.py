"""``python -m tests.benchmarks``: measure, print a table, write ``latest.json`` beside this."""

from __future__ import annotations

import argparse
import json
import os
import platform
from collections.abc import Iterator, Sequence
from dataclasses import asdict, dataclass
from importlib.metadata import version
from pathlib import Path

from tests.benchmarks import computing, readout_pages, screen_reruns
from tests.benchmarks.generated_files import fieldwork_file
from tests.benchmarks.timing import Result
from tests.conftest import browser_path

LATEST = Path(__file__).with_name("latest.json")
_PACKAGES = ("numpy", "scipy", "pandas", "plotly", "streamlit", "sqlalchemy", "uvicorn")


@dataclass(frozen=True)
class Sizes:
    """How large everything is; the defaults are those of the limits."""

    rows: int = 10_000
    columns: int = 300
    universe: int = 12_000
    sample: int = 2_000
    repeats: int = 200
    figures: int = 40
    requests: int = 100
    large_rows: int = 65_000
    table_rows: int = 1_000_000
    table_pairs: int = 200
    runs: int = 5
    servers: bool = True


def measure(sizes: Sizes) -> Iterator[Result]:
    """Measure one thing after the other."""
    data = fieldwork_file(sizes.rows, sizes.columns)
    yield computing.reading(data, sizes.runs)
    large = fieldwork_file(sizes.large_rows, sizes.columns)
    yield computing.reading(large, sizes.runs, limit=2.5)
    yield computing.first_figure(data, sizes.runs)
    yield computing.exact_distribution(sizes.universe, sizes.sample, sizes.repeats, sizes.runs)
    yield computing.one_mean(sizes.rows, sizes.runs)
    yield computing.tables(sizes.table_rows, sizes.table_pairs, sizes.runs)
    yield readout_pages.rendering(sizes.figures, sizes.runs)
    if not sizes.servers:
        return
    yield readout_pages.serving(sizes.figures, sizes.requests, sizes.runs)
    yield screen_reruns.figure_rerun(data, sizes.runs)
    if browser_path() is not None:
        yield computing.first_figure_in_browser(data)


def report(results: Sequence[Result], sizes: Sizes) -> dict[str, object]:
    """Return everything as plain values for the file."""
    return {
        "machine": {
            "cores": os.cpu_count(),
            "python": platform.python_version(),
            **{name: version(name) for name in _PACKAGES},
        },
        "sizes": asdict(sizes),
        "results": [result.as_record() for result in results],
    }


def line(result: Result) -> str:
    """Return one row of the table."""
    ratio = "" if result.ratio is None else f"{result.ratio:.2f} x {result.against}"
    limit = "" if result.limit is None else f"at most {result.limit:.3g}"
    word = {True: "holds", False: "TOO SLOW", None: ""}[result.holds]
    return (
        f"{result.name:<28}{result.seconds:>10.4f} s  {ratio:<28}{limit:<14}{word:<10}{result.note}"
    )


def main(arguments: Sequence[str] | None = None) -> None:
    """Measure at full size, print and write."""
    parser = argparse.ArgumentParser(prog="python -m tests.benchmarks")
    parser.add_argument("--runs", type=int, default=Sizes.runs, help="runs in turn, 5 or more")
    sizes = Sizes(runs=max(5, parser.parse_args(arguments).runs))
    results = []
    for result in measure(sizes):
        results.append(result)
        print(line(result), flush=True)
    LATEST.write_text(json.dumps(report(results, sizes), indent=2) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
