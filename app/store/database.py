"""The database of one data folder: the door to everything that is kept."""

from __future__ import annotations

import os
from pathlib import Path

from app.store.backups import DATABASE_NAME, FILES_NAME, Backups
from app.store.connections import Clock, Connections, utc_now
from app.store.errors import StoreError, sentence_for
from app.store.file_bytes import FileBytes
from app.store.file_records import FileRecords
from app.store.kept_figure_records import KeptFigureRecords
from app.store.question_records import QuestionRecords
from app.store.readout_records import ReadoutRecords
from app.store.sampling_plan_records import SamplingPlanRecords
from app.store.schema_upgrades import upgrade
from app.store.study_records import StudyRecords


class Database(
    StudyRecords,
    FileRecords,
    QuestionRecords,
    SamplingPlanRecords,
    KeptFigureRecords,
    ReadoutRecords,
    Backups,
):
    """All records of one data folder; any thread may call any method."""

    def close(self) -> None:
        """Close the database; it must not be used afterwards."""
        self._connections.close()


def open_database(data_folder: Path, *, clock: Clock = utc_now) -> Database:
    """Open the data folder, make it when it is new, and bring it to the present schema.

    Parameters
    ----------
    data_folder : Path
        Holds the SQLite file and the uploaded bytes; for its owner alone.
    clock : callable
        Returns the present, UTC with time zone.

    Returns
    -------
    Database
        To be closed at the end.

    Raises
    ------
    NewerDatabaseError
        When the folder was written by a newer release.
    StoreError
        When the folder or the database cannot be written, in one sentence.
    """
    folder = Path(data_folder).expanduser().resolve()
    path = folder / DATABASE_NAME
    try:
        known = path.exists()
        _make_private(folder)
        _make_file(path)
    except OSError as error:
        raise StoreError(f"{sentence_for(error)} The folder is {folder}.") from error
    connections = Connections(path, clock)
    try:
        upgrade(connections)
        database = Database(connections, FileBytes(folder / FILES_NAME))
        if known:  # a new database knows of no bytes, which is no reason to remove them
            database.sweep_file_bytes()
    except BaseException:
        connections.close()
        raise
    return database


def _make_private(folder: Path) -> None:
    if not folder.exists():
        folder.mkdir(mode=0o700, parents=True)
    ours = (folder / DATABASE_NAME).exists()
    if ours or not any(folder.iterdir()):
        folder.chmod(0o700)  # a folder with other things in it keeps the rights it has


def _make_file(path: Path) -> None:
    """Make the SQLite file for its owner alone; SQLite gives its log files the same rights."""
    os.close(os.open(path, os.O_RDWR | os.O_CREAT, 0o600))
    path.chmod(0o600)
