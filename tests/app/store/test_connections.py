"""Transactions: one writer, all or nothing, plain errors."""

from __future__ import annotations

import sqlite3
import threading
from dataclasses import replace

import pytest
from sqlalchemy import event, text

from app.store import StaleVersionError, StoreError, open_database
from app.store import connections as module


def with_pragma(database, pragma: str) -> None:
    """Give every new connection of the database this setting."""
    engine = database._connections._engine
    event.listen(engine, "connect", lambda raw, _record: raw.execute(f"PRAGMA {pragma}"))
    engine.dispose()


def setting(database, pragma: str):
    with database._connections.reading() as connection:
        return connection.scalar(text(f"PRAGMA {pragma}"))


def test_settings_of_every_connection(database) -> None:
    assert setting(database, "journal_mode") == "wal"
    assert setting(database, "foreign_keys") == 1
    assert setting(database, "synchronous") == 2
    assert setting(database, "busy_timeout") == 15_000


def test_an_error_inside_a_write_undoes_all_of_it(database) -> None:
    with pytest.raises(RuntimeError), database._connections.writing() as connection:
        connection.execute(text("CREATE TABLE half (a)"))
        raise RuntimeError
    with database._connections.reading() as connection:
        assert connection.scalar(text("SELECT count(*) FROM sqlite_master WHERE name='half'")) == 0


def test_a_reader_sees_one_state_while_others_write(database) -> None:
    count = text("SELECT count(*) FROM studies")
    with database._connections.reading() as connection:
        before = connection.scalar(count)
        database.create_study("Another")
        assert connection.scalar(count) == before
    with database._connections.reading() as connection:
        assert connection.scalar(count) == before + 1


def test_a_full_disk_is_one_sentence_and_changes_nothing(database, study) -> None:
    pages = setting(database, "page_count")
    with_pragma(database, f"max_page_count = {pages + 2}")
    with pytest.raises(StoreError, match="disk that holds the studies is full"):
        database.publish(
            study.id,
            lambda _number: ("{}", "x" * 100_000),
            title="",
            methods_version=1,
            token_hash="a",
            expires_at=None,
        )
    assert database.readouts(study.id) == ()
    assert database.study(study.id) == study


def test_a_disk_that_may_not_be_written_is_one_sentence(database, study) -> None:
    with_pragma(database, "query_only = ON")
    with pytest.raises(StoreError, match="cannot be written to"):
        database.create_study("Another")
    assert database.study(study.id) == study


def test_a_writer_that_never_ends_elsewhere_is_one_sentence(
    data_folder, clock, monkeypatch
) -> None:
    monkeypatch.setattr(module, "BUSY_SECONDS", 0.05)
    database = open_database(data_folder, clock=clock)
    other = sqlite3.connect(data_folder / "halfwidth.sqlite", isolation_level=None)
    other.execute("BEGIN IMMEDIATE")
    with pytest.raises(StoreError, match="busy with another change"):
        database.create_study("Waits in vain")
    other.execute("ROLLBACK")
    other.close()
    assert database.create_study("Gets through").name == "Gets through"
    database.close()


def test_text_that_is_no_text_is_one_sentence(database) -> None:
    with pytest.raises(StoreError, match="characters that cannot be kept"):
        database.create_study("half a pair \ud83c")


def test_many_threads_write_and_none_is_lost(database, study) -> None:
    failures = []

    def work(thread: int) -> None:
        try:
            for turn in range(10):
                data = f"{thread},{turn}".encode()
                database.add_file(
                    study.id, data, file_name="f.csv", reading="{}", rows=1, columns=2
                )
                database.studies()
        except Exception as error:
            failures.append(error)

    threads = [threading.Thread(target=work, args=(number,)) for number in range(6)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert failures == []
    kept = database.files(study.id)
    assert len(kept) == 60
    assert sum(file.current for file in kept) == 1


def test_of_two_windows_with_the_same_version_exactly_one_gets_through(database, study) -> None:
    outcomes = []
    start = threading.Barrier(4)

    def work(number: int) -> None:
        start.wait()
        try:
            outcomes.append(database.save_study(replace(study, name=f"name {number}")).name)
        except StaleVersionError:
            outcomes.append("refused")

    threads = [threading.Thread(target=work, args=(number,)) for number in range(4)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert outcomes.count("refused") == 3
    assert database.study(study.id).name in outcomes


def test_two_programs_on_one_folder_take_turns(data_folder, clock) -> None:
    first, second = open_database(data_folder, clock=clock), open_database(data_folder, clock=clock)
    study = first.create_study("Shared")

    def publish(database, mark: str) -> None:
        for turn in range(8):
            database.publish(
                study.id,
                lambda number: (str(number), mark),
                title="",
                methods_version=1,
                token_hash=f"{mark}{turn}",
                expires_at=None,
            )

    threads = [
        threading.Thread(target=publish, args=(database, mark))
        for database, mark in ((first, "a"), (second, "b"))
    ]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    readouts = first.readouts(study.id)
    assert [readout.number for readout in readouts] == list(range(16, 0, -1))
    assert all(readout.frozen == str(readout.number) for readout in readouts)
    first.close()
    second.close()
