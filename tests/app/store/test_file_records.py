"""Fieldwork files: what is known about them and which one figures are made from."""

from __future__ import annotations

import hashlib
from dataclasses import replace

import pytest

from app.store import DamagedFileError, StaleVersionError, UnknownFileError, UnknownStudyError


def add(database, study, data: bytes, **changes):
    facts = {"file_name": "wave 1.csv", "reading": '{"header":1}', "rows": 3, "columns": 2}
    return database.add_file(study.id, data, **(facts | changes))


def test_a_file_is_found_as_it_was_added(database, study, clock) -> None:
    data = "région;q4\nnord;7\n".encode("cp1252")
    file = add(database, study, data)
    assert database.files(study.id) == (file,)
    assert database.current_file(study.id) == file
    assert file.fingerprint == hashlib.sha256(data).hexdigest()
    assert file.size == len(data)
    assert file.received_at == clock.present
    assert (file.current, file.version, file.study_id) == (True, 1, study.id)
    assert database.file_bytes(file.fingerprint) == data
    assert database.file_path(file.fingerprint).read_bytes() == data


def test_a_study_without_a_file_has_no_current_one(database, study) -> None:
    assert database.files(study.id) == ()
    assert database.current_file(study.id) is None


def test_the_file_received_last_comes_first_and_is_current(database, study) -> None:
    first, second = add(database, study, b"1"), add(database, study, b"2")
    assert database.files(study.id) == (second, replace(first, current=False))
    assert database.current_file(study.id) == second


def test_an_earlier_file_is_made_current_again(database, study) -> None:
    first, second = add(database, study, b"1"), add(database, study, b"2")
    assert database.make_current(first.id) == first
    assert database.files(study.id) == (replace(second, current=False), first)
    assert database.make_current(first.id) == first


def test_the_same_bytes_again_take_the_place_of_the_first(database, study, clock) -> None:
    first = add(database, study, b"same")
    add(database, study, b"other")
    again = add(database, study, b"same", file_name="renamed.csv", reading="{}", rows=9)
    assert again.id == first.id
    assert again == replace(
        first,
        file_name="renamed.csv",
        reading="{}",
        rows=9,
        received_at=clock.present,
        version=2,
    )
    assert len(database.files(study.id)) == 2
    assert database.current_file(study.id) == again


def test_the_same_bytes_in_two_studies_are_kept_once(database, study, data_folder) -> None:
    other = database.create_study("Other")
    add(database, study, b"same")
    add(database, other, b"same", rows=8)
    assert len(list((data_folder / "files").iterdir())) == 1
    assert database.current_file(study.id).rows == 3
    assert database.current_file(other.id).rows == 8


def test_another_reading_is_kept(database, study) -> None:
    file = add(database, study, b"1")
    saved = database.save_reading(file, reading='{"header":2}', rows=2, columns=2)
    assert saved == replace(file, reading='{"header":2}', rows=2, version=2)
    assert database.current_file(study.id) == saved


def test_a_reading_based_on_an_older_one_is_refused(database, study, clock) -> None:
    file = add(database, study, b"1")
    database.save_reading(file, reading="{}", rows=2, columns=2)
    clock.go_on(hours=1)
    with pytest.raises(StaleVersionError, match="one hour ago"):
        database.save_reading(file, reading='{"late":1}', rows=1, columns=1)
    assert database.current_file(study.id).reading == "{}"


def test_choosing_the_current_file_does_not_outdate_a_reading_in_hand(database, study) -> None:
    first = add(database, study, b"1")
    add(database, study, b"2")
    database.make_current(first.id)
    assert database.save_reading(first, reading="{}", rows=2, columns=2).current


def test_unknown_files_are_named(database, study) -> None:
    file = add(database, study, b"1")
    with pytest.raises(UnknownFileError, match="no fieldwork file"):
        database.make_current("nowhere")
    database.delete_study(study.id)
    with pytest.raises(UnknownFileError, match=file.id):
        database.save_reading(file, reading="{}", rows=1, columns=1)
    with pytest.raises(DamagedFileError, match="missing"):
        database.file_bytes(file.fingerprint)


def test_a_file_for_a_deleted_study_leaves_no_bytes(database, study, data_folder) -> None:
    database.delete_study(study.id)
    with pytest.raises(UnknownStudyError):
        add(database, study, b"1")
    assert list((data_folder / "files").iterdir()) == []
