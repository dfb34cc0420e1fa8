"""Connections to the SQLite file: short transactions, one writer at a time, plain errors."""

from __future__ import annotations

import threading
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

from sqlalchemy import URL, Connection, Engine, create_engine, event
from sqlalchemy.exc import DBAPIError
from sqlalchemy.exc import TimeoutError as PoolTimeoutError

from app.store.errors import BUSY, FULL_DISK, READ_ONLY, UNREADABLE, StoreError

BUSY_SECONDS = 15.0
_SENTENCES = {
    "SQLITE_FULL": FULL_DISK,
    "SQLITE_READONLY": READ_ONLY,
    "SQLITE_PERM": READ_ONLY,
    "SQLITE_BUSY": BUSY,
    "SQLITE_LOCKED": BUSY,
    "SQLITE_IOERR": UNREADABLE,
    "SQLITE_CANTOPEN": UNREADABLE,
    "SQLITE_CORRUPT": (
        "The database of the studies is damaged: stop the program and put the latest backup in "
        "place of the data folder."
    ),
    "SQLITE_NOTADB": (
        "The file halfwidth.sqlite in the data folder is not a database of this program: "
        "move it away or choose another folder."
    ),
}

Clock = Callable[[], datetime]


def utc_now() -> datetime:
    """Return the present moment, UTC with time zone."""
    return datetime.now(UTC)


class Connections:
    """One engine, many threads.

    Parameters
    ----------
    path : Path
        The SQLite file; it exists already.
    clock : callable
        Returns the present, UTC with time zone.
    """

    def __init__(self, path: Path, clock: Clock = utc_now) -> None:
        self._engine = _make_engine(path)
        self._turn = threading.Lock()
        self.now = clock

    @contextmanager
    def reading(self) -> Iterator[Connection]:
        """Give a connection that sees one unchanging state of the database.

        Raises
        ------
        StoreError
            When the database cannot be read, in one sentence.
        """
        with _plain_errors(), self._engine.connect() as connection, connection.begin():
            yield connection

    @contextmanager
    def writing(self, *, foreign_keys: bool = True) -> Iterator[Connection]:
        """Give a connection that alone may write; all is kept at the end, or nothing.

        Parameters
        ----------
        foreign_keys : bool
            False switches the checks off, for upgrades that rebuild tables.

        Raises
        ------
        StoreError
            When the database cannot be written, in one sentence.
        """
        with _plain_errors(), self._turn, self._engine.connect() as plain:
            connection = plain.execution_options(begin_with="BEGIN IMMEDIATE")
            _set_foreign_keys(connection, foreign_keys)
            try:
                with connection.begin():
                    yield connection
            finally:
                _set_foreign_keys(connection, True)

    def copy_to(self, path: Path) -> None:
        """Write one state of the whole database into an empty file, while others go on.

        Raises
        ------
        StoreError
            When there is no room for it.
        """
        with _plain_errors(), self._engine.connect() as connection:
            outside = connection.execution_options(begin_with="")
            outside.exec_driver_sql("VACUUM INTO ?", (str(path),))

    def close(self) -> None:
        """Close every connection; the last one folds the log into the database file."""
        self._engine.dispose()


def _make_engine(path: Path) -> Engine:
    engine = create_engine(
        URL.create("sqlite", database=str(path)),
        pool_size=10,
        max_overflow=40,
        connect_args={"timeout": BUSY_SECONDS, "check_same_thread": False},
    )
    event.listen(engine, "connect", _set_up)
    event.listen(engine, "begin", _begin)
    return engine


def _set_up(raw: Any, _record: object) -> None:  # noqa: ANN401 - the driver's own connection
    raw.isolation_level = (
        None  # transactions begin where _begin says so, not where the driver guesses
    )
    raw.execute(f"PRAGMA busy_timeout = {int(BUSY_SECONDS * 1000)}")
    raw.execute("PRAGMA journal_mode = WAL")
    raw.execute("PRAGMA synchronous = FULL")  # a commit survives a power cut
    raw.execute("PRAGMA foreign_keys = ON")
    raw.execute("PRAGMA secure_delete = ON")  # what is deleted is overwritten


def _begin(connection: Connection) -> None:
    options = connection.get_execution_options()
    begin = options.get("begin_with", "BEGIN")
    if begin:
        connection.exec_driver_sql(begin)


def _set_foreign_keys(connection: Connection, on: bool) -> None:
    raw: Any = connection.connection.driver_connection
    raw.execute(f"PRAGMA foreign_keys = {'ON' if on else 'OFF'}")


@contextmanager
def _plain_errors() -> Iterator[None]:
    try:
        yield
    except DBAPIError as error:
        sentence = _sentence_for(error)
        if sentence is None:
            raise
        raise StoreError(sentence) from error
    except PoolTimeoutError as error:
        raise StoreError(BUSY) from error
    except UnicodeEncodeError as error:
        raise StoreError(
            "The text holds characters that cannot be kept: type it again without them."
        ) from error


def _sentence_for(error: DBAPIError) -> str | None:
    name = getattr(error.orig, "sqlite_errorname", "")
    return next((words for start, words in _SENTENCES.items() if name.startswith(start)), None)
