"""``tabulate`` against the bare sums it cannot do without, and against a pandas group-by loop."""

from __future__ import annotations

from collections.abc import Callable
from statistics import median

import numpy as np
import pandas as pd

from estimators import SampleDesign, tabulate
from tests.benchmarks.timing import seconds_of

ANSWERS, GROUPS, GROUPINGS = 5, 4, 10
PANDAS_PAIRS = 4  # pairs timed with pandas; the time of all follows in proportion


def measure(rows: int = 1_000_000, pairs: int = 200, repeats: int = 5) -> dict[str, float]:
    """Time weighted tables of a file of invented answers.

    Parameters
    ----------
    rows : int
        People.
    pairs : int
        Pairs of a question and a grouping, a multiple of ten; tables of everyone come on top.
    repeats : int
        Runs of each way, in turn.

    Returns
    -------
    dict
        Sizes, medians in seconds (``tabulate``, ``bare_sums``, ``pandas``), the ratio of
        ``tabulate`` to the bare sums and that of pandas to ``tabulate``.
    """
    draw = np.random.default_rng(11)
    questions = max(1, pairs // GROUPINGS)
    answers = {f"q{k}": draw.integers(-1, ANSWERS, rows) for k in range(questions)}
    groupings = {f"g{k}": draw.integers(0, GROUPS, rows) for k in range(GROUPINGS)}
    weights = draw.gamma(2.0, 0.5, rows)
    design = SampleDesign.weighted(weights)
    few = min(PANDAS_PAIRS, questions)
    frame = pd.DataFrame({"weights": weights, "squares": weights**2} | answers | groupings)
    ways: dict[str, Callable[[], object]] = {
        "tabulate": lambda: tabulate(answers, groupings, design),
        "bare_sums": lambda: _bare_sums(questions * GROUPINGS, answers["q0"], groupings, weights),
        "pandas": lambda: _pandas_sums(frame, few),
    }
    ways["tabulate"]()
    runs = [{name: seconds_of(way) for name, way in ways.items()} for _ in range(repeats)]
    found = {name: median(run[name] for run in runs) for name in ways}
    found["pandas"] *= questions * GROUPINGS / few
    return {
        "rows": rows,
        "pairs": questions * GROUPINGS,
        "repeats": repeats,
        **found,
        "times_bare_sums": found["tabulate"] / found["bare_sums"],
        "faster_than_pandas": found["pandas"] / found["tabulate"],
    }


def _bare_sums(
    pairs: int, answers: np.ndarray, groupings: dict[str, np.ndarray], weights: np.ndarray
) -> None:
    """Counts, weights and squared weights by cell, three calls a pair; the cells given for free."""
    cells = groupings["g0"] * (ANSWERS + 1) + answers + 1
    squares, size = weights**2, GROUPS * (ANSWERS + 1)
    for _ in range(pairs):
        np.bincount(cells, minlength=size)
        np.bincount(cells, weights, size)
        np.bincount(cells, squares, size)


def _pandas_sums(frame: pd.DataFrame, pairs: int) -> None:
    """Return the same sums as someone would write them with a data frame."""
    for pair in range(pairs):
        grouped = frame.groupby([f"g{pair % GROUPINGS}", f"q{pair}"])
        grouped["weights"].agg(["size", "sum"])
        grouped["squares"].sum()
