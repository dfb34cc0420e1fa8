"""A consistent copy of everything in one archive, made while people work."""

from __future__ import annotations

import os
import sqlite3
import tempfile
import zipfile
from contextlib import closing
from pathlib import Path

from app.store.errors import StoreError, sentence_for
from app.store.file_bytes import create_private
from app.store.records import Records

DATABASE_NAME = "halfwidth.sqlite"
FILES_NAME = "files"


class Backups(Records):
    """Backups of the database and the uploaded bytes."""

    def write_backup(self, target: Path) -> None:
        """Write database and uploaded bytes into one ZIP archive, for its owner alone.

        Unpacked into an empty folder it is a data folder. The archive is written aside and moved
        into place, so an earlier one of the same name stays whole until then. Bytes missing from
        the data folder are missing from the backup too.

        Parameters
        ----------
        target : Path
            The archive, in a folder that exists.

        Raises
        ------
        StoreError
            When the disk is full or may not be written to.
        """
        target = Path(target).expanduser().resolve()
        try:
            with tempfile.TemporaryDirectory(prefix=".backup-", dir=target.parent) as folder:
                archive = self._write_archive(Path(folder))
                archive.replace(target)
        except OSError as error:
            raise StoreError(f"{sentence_for(error)} The backup is {target}.") from error

    def _write_archive(self, folder: Path) -> Path:
        copy = folder / DATABASE_NAME
        os.close(create_private(copy))
        with self._connections.writing():  # nobody adds or deletes until the bytes are held
            self._connections.copy_to(copy)
            held = self._bytes.hold(_fingerprints(copy))
        try:
            return _pack(copy, held)
        finally:
            self._bytes.release(held.values())


def _fingerprints(copy: Path) -> frozenset[str]:
    with closing(sqlite3.connect(copy)) as plain:
        return frozenset(row[0] for row in plain.execute("SELECT fingerprint FROM files"))


def _pack(copy: Path, held: dict[str, Path]) -> Path:
    archive = copy.with_suffix(".zip")
    with os.fdopen(create_private(archive), "wb") as stream:
        with zipfile.ZipFile(stream, "w", zipfile.ZIP_DEFLATED) as pack:
            pack.write(copy, DATABASE_NAME)
            for name, path in sorted(held.items()):
                pack.write(path, f"{FILES_NAME}/{name}")
        stream.flush()
        os.fsync(stream.fileno())
    return archive
