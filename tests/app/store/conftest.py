"""A database in a new folder, with a clock that tests set."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta

import pytest

from app.store import open_database


class Clock:
    """Goes on by a thousandth of a second at each look, so that later things are later."""

    def __init__(self) -> None:
        self.present = datetime(2026, 3, 12, 9, 52, tzinfo=UTC)

    def __call__(self) -> datetime:
        self.present += timedelta(milliseconds=1)
        return self.present

    def go_on(self, **span: float) -> None:
        self.present += timedelta(**span)


@pytest.fixture
def clock():
    return Clock()


@pytest.fixture
def data_folder(tmp_path):
    return tmp_path / "data"


@pytest.fixture
def database(data_folder, clock):
    database = open_database(data_folder, clock=clock)
    yield database
    database.close()


@pytest.fixture
def study(database):
    return database.create_study("Garden centres")
