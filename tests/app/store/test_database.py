"""Opening a data folder; what is left when a program is killed at the worst moment."""

from __future__ import annotations

import os
import signal
import sqlite3
import subprocess
import sys
import time
from datetime import UTC, datetime
from pathlib import Path

import pytest

from app.store import NewerDatabaseError, StoreError, open_database
from app.study.study import LinkStatus

ROOT = Path(__file__).resolve().parents[3]


def rights(path: Path) -> int:
    return path.stat().st_mode & 0o777


def test_a_new_folder_is_for_its_owner_alone(data_folder, database) -> None:
    database.create_study("Garden centres")
    assert rights(data_folder) == 0o700
    assert {path.name: rights(path) for path in data_folder.iterdir()} == {
        "files": 0o700,
        "halfwidth.sqlite": 0o600,
        "halfwidth.sqlite-shm": 0o600,
        "halfwidth.sqlite-wal": 0o600,
    }


def test_rights_that_became_wider_are_narrowed(data_folder) -> None:
    open_database(data_folder).close()
    data_folder.chmod(0o755)
    (data_folder / "halfwidth.sqlite").chmod(0o644)
    open_database(data_folder).close()
    assert rights(data_folder) == 0o700
    assert rights(data_folder / "halfwidth.sqlite") == 0o600


def test_a_folder_with_other_things_in_it_keeps_its_rights_and_its_things(tmp_path) -> None:
    tmp_path.chmod(0o755)
    (tmp_path / "letter.txt").write_text("dear all")
    (tmp_path / "files").mkdir()
    (tmp_path / "files" / "photo.txt").write_text("x")
    for _ in range(2):
        before = rights(tmp_path)
        open_database(tmp_path).close()
        assert (tmp_path / "files" / "photo.txt").exists()
    assert before == 0o755


def test_what_was_kept_is_there_after_opening_again(data_folder, clock) -> None:
    database = open_database(data_folder, clock=clock)
    study = database.create_study("Garden centres")
    file = database.add_file(
        study.id, b"a\n1\n", file_name="a.csv", reading="{}", rows=1, columns=1
    )
    database.close()
    database = open_database(data_folder, clock=clock)
    assert database.study(study.id).name == "Garden centres"
    assert database.current_file(study.id) == file
    assert database.file_bytes(file.fingerprint) == b"a\n1\n"
    database.close()


def test_folder_names_of_every_sort(tmp_path) -> None:
    folder = tmp_path / "Müller & co?" / "100% #1"
    open_database(folder).close()
    assert (folder / "halfwidth.sqlite").stat().st_size > 0
    assert [path.name for path in tmp_path.iterdir()] == ["Müller & co?"]


def test_bytes_beside_a_new_database_are_left_alone(data_folder) -> None:
    (data_folder / "files").mkdir(parents=True)
    (data_folder / "files" / ("a" * 64)).write_bytes(b"of a lost database")
    open_database(data_folder).close()
    assert (data_folder / "files" / ("a" * 64)).exists()


def test_a_database_of_a_newer_release_is_refused_and_left_as_it_is(data_folder) -> None:
    open_database(data_folder).close()
    path = data_folder / "halfwidth.sqlite"
    with sqlite3.connect(path) as other:
        other.execute("UPDATE alembic_version SET version_num = '9999'")
    other.close()
    before = path.read_bytes()
    with pytest.raises(NewerDatabaseError, match="newer release") as caught:
        open_database(data_folder)
    assert caught.value.sentence.count(".") == 1
    assert path.read_bytes() == before


def test_a_file_that_is_no_database_is_refused(data_folder) -> None:
    data_folder.mkdir()
    (data_folder / "halfwidth.sqlite").write_text("region,q4\nnorth,7\n" * 100)
    with pytest.raises(StoreError, match="is not a database of this program"):
        open_database(data_folder)


def test_a_file_in_place_of_the_folder_is_refused(tmp_path) -> None:
    (tmp_path / "data").write_text("")
    with pytest.raises(StoreError, match="The folder is "):
        open_database(tmp_path / "data")


KILLED_UPLOAD = """
import os, signal, sys
from pathlib import Path
from sqlalchemy import event
from app.store import open_database
from app.store import file_bytes

def die(*_, **__):
    os.kill(os.getpid(), signal.SIGKILL)

database = open_database(Path(sys.argv[1]))
study = database.create_study("Garden centres")
moment = sys.argv[2]
if moment == "bytes not yet safe":
    os.fsync = die
elif moment == "bytes in place":
    file_bytes._make_lasting = die
elif moment == "row written":
    event.listen(database._connections._engine, "commit", die)
database.add_file(study.id, b"a" * 100_000, file_name="a.csv", reading="{}", rows=1, columns=1)
die()
"""

KILLED_READOUT = """
import os, signal, sys
from datetime import datetime
from pathlib import Path
from sqlalchemy import event
from app.store import open_database
from app.store import readout_records

def die(*_, **__):
    os.kill(os.getpid(), signal.SIGKILL)

database = open_database(Path(sys.argv[1]))
study = database.create_study("Garden centres")
moment = sys.argv[2]
if moment == "readout without link":
    readout_records._add_link = die
elif moment == "link written":
    event.listen(database._connections._engine, "commit", die)
database.publish(study.id, lambda number: ("{}", "<p>" * 50_000), title="Spring",
                 methods_version=1, token_hash="a" * 64, expires_at=None)
die()
"""


def run_killed(script: str, *arguments: str) -> None:
    ended = subprocess.run(
        [sys.executable, "-c", script, *arguments], cwd=ROOT, capture_output=True, timeout=60
    )
    assert ended.returncode == -signal.SIGKILL, ended.stderr.decode()


def forget_youth(folder: Path) -> None:
    """Make leftovers of killed writers old enough to be swept."""
    for path in (folder / "files").iterdir():
        os.utime(path, (time.time() - 7200, time.time() - 7200))


@pytest.mark.parametrize(
    ("moment", "kept"),
    [("bytes not yet safe", 0), ("bytes in place", 0), ("row written", 0), ("after", 1)],
)
def test_an_upload_killed_in_the_middle_is_there_or_not_there(data_folder, moment, kept) -> None:
    run_killed(KILLED_UPLOAD, str(data_folder), moment)
    forget_youth(data_folder)
    database = open_database(data_folder)
    (summary,) = database.studies()
    files = database.files(summary.study.id)
    assert len(files) == kept
    assert [path.name for path in (data_folder / "files").iterdir()] == [
        file.fingerprint for file in files
    ]
    assert all(database.file_bytes(file.fingerprint) == b"a" * 100_000 for file in files)
    database.close()


@pytest.mark.parametrize(
    ("moment", "kept"), [("readout without link", 0), ("link written", 0), ("after", 1)]
)
def test_a_readout_killed_in_the_middle_is_there_or_not_there(data_folder, moment, kept) -> None:
    run_killed(KILLED_READOUT, str(data_folder), moment)
    database = open_database(data_folder)
    (summary,) = database.studies()
    assert len(database.readouts(summary.study.id)) == kept
    assert summary.live_links == kept
    status, html = database.find_by_token_hash("a" * 64, datetime.now(UTC))
    assert status is (LinkStatus.LIVE if kept else LinkStatus.UNKNOWN)
    assert len(html) == kept * 150_000
    database.close()


BUSY_PROGRAM = """
import sys
from itertools import count
from pathlib import Path
from app.store import open_database

database = open_database(Path(sys.argv[1]))
study = database.create_study("Garden centres")
print("started", flush=True)
for turn in count():
    database.add_file(study.id, str(turn).encode() * 5000, file_name="a.csv", reading="{}",
                      rows=1, columns=1)
    database.publish(study.id, lambda number: (str(number), "<p>"), title="Spring",
                     methods_version=1, token_hash=f"{turn}", expires_at=None)
"""


@pytest.mark.parametrize("seconds", [0.03, 0.11, 0.2])
def test_killed_at_any_moment_the_database_is_whole(data_folder, seconds) -> None:
    with subprocess.Popen(
        [sys.executable, "-c", BUSY_PROGRAM, str(data_folder)], cwd=ROOT, stdout=subprocess.PIPE
    ) as busy:
        assert busy.stdout.readline() == b"started\n"
        time.sleep(seconds)
        busy.kill()
    forget_youth(data_folder)
    database = open_database(data_folder)
    (summary,) = database.studies()
    files, readouts = database.files(summary.study.id), database.readouts(summary.study.id)
    assert len(files) - len(readouts) in (0, 1)
    assert [readout.number for readout in readouts] == list(range(len(readouts), 0, -1))
    assert summary.live_links == len(readouts)
    assert {file.fingerprint for file in files} == {
        path.name for path in (data_folder / "files").iterdir()
    }
    assert all(len(database.file_bytes(file.fingerprint)) == file.size for file in files)
    database.close()
    with sqlite3.connect(data_folder / "halfwidth.sqlite") as plain:
        assert plain.execute("PRAGMA integrity_check").fetchone() == ("ok",)
        assert plain.execute("PRAGMA foreign_key_check").fetchall() == []
    plain.close()
