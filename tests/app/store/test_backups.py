"""A backup, unpacked into an empty folder, is a data folder."""

from __future__ import annotations

import threading
import zipfile

import pytest

from app.store import DamagedFileError, StoreError, open_database


def add(database, study, data: bytes):
    return database.add_file(study.id, data, file_name="a.csv", reading="{}", rows=1, columns=1)


@pytest.fixture
def restored(tmp_path):
    opened = []

    def restore(archive):
        with zipfile.ZipFile(archive) as pack:
            pack.extractall(tmp_path / "restored")
        opened.append(open_database(tmp_path / "restored"))
        return opened[-1]

    yield restore
    for database in opened:
        database.close()


def test_a_restored_backup_holds_everything(database, study, tmp_path, restored) -> None:
    file = add(database, study, b"region,q4\n" * 1000)
    archive = tmp_path / "backup.zip"
    database.write_backup(archive)
    database.delete_study(study.id)
    copy = restored(archive)
    assert [summary.study.name for summary in copy.studies()] == ["Garden centres"]
    assert copy.current_file(study.id) == file
    assert copy.file_bytes(file.fingerprint) == b"region,q4\n" * 1000
    assert (tmp_path / "restored").stat().st_mode & 0o777 == 0o700


def test_the_archive_is_for_its_owner_alone_and_nothing_else_is_left(
    database, study, tmp_path
) -> None:
    add(database, study, b"1")
    database.write_backup(tmp_path / "backup.zip")
    assert (tmp_path / "backup.zip").stat().st_mode & 0o777 == 0o600
    assert sorted(path.name for path in tmp_path.iterdir()) == ["backup.zip", "data"]
    assert len(list((tmp_path / "data" / "files").iterdir())) == 1


def test_a_second_backup_takes_the_place_of_the_first(database, tmp_path, restored) -> None:
    archive = tmp_path / "backup.zip"
    database.create_study("Earlier")
    database.write_backup(archive)
    database.create_study("Later")
    database.write_backup(archive)
    assert {summary.study.name for summary in restored(archive).studies()} == {
        "Earlier",
        "Later",
    }


def test_a_backup_made_while_others_write_is_whole(database, study, tmp_path, restored) -> None:
    stop = threading.Event()

    def write() -> None:
        number = 0
        while not stop.is_set():
            add(database, study, str(number).encode())
            passing = database.create_study(f"Passing {number}")
            add(database, passing, b"passing %d" % number)
            database.delete_study(passing.id)
            number += 1

    writer = threading.Thread(target=write)
    writer.start()
    try:
        database.write_backup(tmp_path / "backup.zip")
    finally:
        stop.set()
        writer.join()
    copy = restored(tmp_path / "backup.zip")
    assert copy.study(study.id).name == "Garden centres"
    for summary in copy.studies():
        for file in copy.files(summary.study.id):
            assert len(copy.file_bytes(file.fingerprint)) == file.size


def test_missing_bytes_do_not_stop_a_backup(database, study, tmp_path, restored) -> None:
    lost, there = add(database, study, b"lost"), add(database, study, b"there")
    database.file_path(lost.fingerprint).unlink()
    database.write_backup(tmp_path / "backup.zip")
    copy = restored(tmp_path / "backup.zip")
    assert copy.file_bytes(there.fingerprint) == b"there"
    with pytest.raises(DamagedFileError, match="missing"):
        copy.file_bytes(lost.fingerprint)


def test_a_folder_that_is_not_there_is_named(database, tmp_path) -> None:
    with pytest.raises(StoreError, match="nowhere"):
        database.write_backup(tmp_path / "nowhere" / "backup.zip")
