"""Bytes written aside, moved into place, read back, swept."""

from __future__ import annotations

import errno
import os
import time
from pathlib import Path

import pytest

from app.store import DamagedFileError, StoreError
from app.store.file_bytes import FileBytes, fingerprint_of


@pytest.fixture
def file_bytes(tmp_path):
    return FileBytes(tmp_path / "files")


def keep(file_bytes, data: bytes) -> str:
    fingerprint = fingerprint_of(data)
    with file_bytes.set_aside(data) as aside:
        file_bytes.move_into_place(aside, fingerprint)
    return fingerprint


def names(file_bytes) -> list[str]:
    return sorted(path.name for path in file_bytes.path("x").parent.iterdir())


def test_fingerprint_is_sha_256() -> None:
    # FIPS 180-2 (2002), appendix B.1: the one-block message "abc".
    known = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert fingerprint_of(b"abc") == known


def test_bytes_come_back_as_they_were(file_bytes) -> None:
    data = bytes(range(256)) * 40
    assert file_bytes.read(keep(file_bytes, data)) == data
    assert file_bytes.read(keep(file_bytes, b"")) == b""


def test_only_the_owner_has_rights(file_bytes) -> None:
    path = file_bytes.path(keep(file_bytes, b"a"))
    assert path.stat().st_mode & 0o777 == 0o600
    assert path.parent.stat().st_mode & 0o777 == 0o700


def test_bytes_set_aside_and_not_moved_are_gone(file_bytes) -> None:
    with pytest.raises(RuntimeError), file_bytes.set_aside(b"a"):
        assert len(names(file_bytes)) == 1
        raise RuntimeError
    assert names(file_bytes) == []


def test_moving_mends_damaged_bytes(file_bytes) -> None:
    fingerprint = keep(file_bytes, b"abc")
    file_bytes.path(fingerprint).write_bytes(b"abd")
    with pytest.raises(DamagedFileError, match="altered"):
        file_bytes.read(fingerprint)
    keep(file_bytes, b"abc")
    assert file_bytes.read(fingerprint) == b"abc"


def test_missing_bytes_are_named(file_bytes) -> None:
    with pytest.raises(DamagedFileError, match="missing"):
        file_bytes.read("0" * 64)


def test_a_full_disk_is_one_sentence_and_leaves_nothing(file_bytes, monkeypatch) -> None:
    def full(_handle):
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(StoreError, match="disk that holds the studies is full"):
        keep(file_bytes, b"a")
    monkeypatch.undo()
    assert names(file_bytes) == []


def test_discard_removes_what_is_named_and_minds_nothing_missing(file_bytes) -> None:
    first, second = keep(file_bytes, b"1"), keep(file_bytes, b"2")
    file_bytes.discard([first, "0" * 64])
    assert names(file_bytes) == [second]


def test_sweep_keeps_what_is_needed_what_is_foreign_and_what_is_being_written(file_bytes) -> None:
    needed, orphan = keep(file_bytes, b"1"), keep(file_bytes, b"2")
    folder = file_bytes.path(needed).parent
    (folder / "notes.txt").write_text("not ours")
    (folder / "incoming-young").write_bytes(b"3")
    (folder / "incoming-old").write_bytes(b"4")
    two_hours_ago = time.time() - 7200
    os.utime(folder / "incoming-old", (two_hours_ago, two_hours_ago))
    file_bytes.sweep([needed])
    assert names(file_bytes) == sorted([needed, "notes.txt", "incoming-young"])
    assert not file_bytes.path(orphan).exists()


@pytest.mark.parametrize("links", [True, False])
def test_held_bytes_outlive_their_removal_and_sweeps(file_bytes, monkeypatch, links) -> None:
    def refuse(*_):
        raise PermissionError

    if not links:
        monkeypatch.setattr(Path, "hardlink_to", refuse)
    fingerprint = keep(file_bytes, b"abc")
    old = time.time() - 7200
    os.utime(file_bytes.path(fingerprint), (old, old))
    held = file_bytes.hold([fingerprint, "0" * 64])
    file_bytes.discard([fingerprint])
    file_bytes.sweep([])
    assert set(held) == {fingerprint}
    assert held[fingerprint].read_bytes() == b"abc"
    assert held[fingerprint].stat().st_mode & 0o777 == 0o600
    file_bytes.release(held.values())
    assert names(file_bytes) == []
