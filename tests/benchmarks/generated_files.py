"""Files to measure with: invented answers of any number of people to any number of questions."""

from __future__ import annotations

import csv
from io import StringIO

import numpy as np

MOODS = ("very good", "good", "so so", "bad", "very bad")
REGIONS = ("Northmark", "Lowmere", "Eastreach", "Westholm")


def fieldwork_file(rows: int, columns: int, *, seed: int = 7) -> bytes:
    """Return a comma-separated file: an id, a region, then scales, choices, marks and amounts.

    Parameters
    ----------
    rows, columns : int
        People and columns; at least 3 columns.
    seed : int
        Same seed, same bytes.

    Returns
    -------
    bytes
        UTF-8 with one row of column heads.
    """
    draw = np.random.default_rng(seed)
    kinds = (_scale, _choice, _mark, _mark, _mark, _amount)
    answers = [kinds[place % len(kinds)](draw, rows) for place in range(columns - 2)]
    ids = [f"{number:06d}" for number in range(rows)]
    table = [ids, draw.choice(REGIONS, rows).tolist(), *answers]
    out = StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(["id", "region", *(f"Q{place}" for place in range(1, columns - 1))])
    writer.writerows(zip(*table, strict=True))
    return out.getvalue().encode()


def _scale(draw: np.random.Generator, rows: int) -> list[str]:
    answers = np.clip(np.round(draw.normal(6.5, 2, rows)), 0, 10).astype(int)
    return _some_empty(draw, [str(answer) for answer in answers.tolist()])


def _choice(draw: np.random.Generator, rows: int) -> list[str]:
    return _some_empty(draw, draw.choice(MOODS, rows).tolist())


def _mark(draw: np.random.Generator, rows: int) -> list[str]:
    return ["1" if mark else "0" for mark in (draw.random(rows) < 0.3).tolist()]


def _amount(draw: np.random.Generator, rows: int) -> list[str]:
    return _some_empty(draw, [f"{amount:.2f}" for amount in draw.lognormal(4, 1, rows).tolist()])


def _some_empty(draw: np.random.Generator, cells: list[str]) -> list[str]:
    empty = draw.random(len(cells)) < 0.02
    return ["" if gone else cell for cell, gone in zip(cells, empty.tolist(), strict=True)]
