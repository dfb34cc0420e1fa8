"""Fieldwork files of a study: their rows in the database and their bytes beside it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from datetime import datetime
from pathlib import Path
from typing import Any

from sqlalchemy import Connection, Row, insert, select, update

from app.store.errors import UnknownFileError
from app.store.file_bytes import fingerprint_of
from app.store.question_records import put_questions
from app.store.records import Records, check_study, check_version, find_row, new_id, touch_study
from app.store.schema import files
from app.study.questions import Question
from app.study.study import StudyFile


class FileRecords(Records):
    """Fieldwork files in the database."""

    def files(self, study_id: str) -> tuple[StudyFile, ...]:
        """Return the study's files, the one received last first.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        query = (
            select(files)
            .where(files.c.study_id == study_id)
            .order_by(files.c.received_at.desc(), files.c.id)
        )
        with self._connections.reading() as connection:
            check_study(connection, study_id)
            return tuple(_file_from(row) for row in connection.execute(query))

    def current_file(self, study_id: str) -> StudyFile | None:
        """Return the file the study's figures are made from; None before the first upload.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        return next((file for file in self.files(study_id) if file.current), None)

    def file_path(self, fingerprint: str) -> Path:
        """Return where the bytes with this SHA-256 are."""
        return self._bytes.path(fingerprint)

    def file_bytes(self, fingerprint: str) -> bytes:
        """Return the bytes with this SHA-256, checked against it.

        Raises
        ------
        DamagedFileError
            When they are gone or altered.
        """
        return self._bytes.read(fingerprint)

    def add_file(
        self,
        study_id: str,
        data: bytes,
        *,
        file_name: str,
        reading: str,
        rows: int,
        columns: int,
        questions: Iterable[Question] | None = None,
    ) -> StudyFile:
        """Keep an uploaded file; figures are made from it from now on.

        The same bytes again in the same study replace what was known about them.

        Parameters
        ----------
        study_id : str
            The study it belongs to.
        data : bytes
            As they came.
        file_name : str
            Its name where it came from.
        reading : str
            JSON of how it is read.
        rows, columns : int
            Size of the answers as read.
        questions : iterable of Question, optional
            What the study asks from now on, kept in the same transaction.

        Raises
        ------
        UnknownStudyError, StoreError
            The study is gone; the disk is full or may not be written to.
        """
        now = self._connections.now()
        file = StudyFile(
            id=new_id(),
            study_id=study_id,
            file_name=file_name,
            fingerprint=fingerprint_of(data),
            size=len(data),
            reading=reading,
            rows=rows,
            columns=columns,
            received_at=now,
            current=True,
            version=1,
        )
        with self._bytes.set_aside(data) as aside, self._connections.writing() as connection:
            touch_study(connection, study_id, now)
            self._bytes.move_into_place(aside, file.fingerprint)
            _leave_current(connection, study_id)
            _put_questions(connection, study_id, questions, now)
            return _put(connection, file)

    def save_reading(
        self,
        file: StudyFile,
        *,
        reading: str,
        rows: int,
        columns: int,
        questions: Iterable[Question] | None = None,
    ) -> StudyFile:
        """Keep another way of reading a file.

        Parameters
        ----------
        file : StudyFile
            The file; its version is the one the change is based on.
        reading : str
            JSON of how it is read.
        rows, columns : int
            Size of the answers as now read.
        questions : iterable of Question, optional
            What the study asks from now on, kept in the same transaction.

        Raises
        ------
        UnknownFileError, StaleVersionError
            Deleted; read in another way in another window.
        """
        now = self._connections.now()
        changes = {
            "reading": reading,
            "rows": rows,
            "columns": columns,
            "version": file.version + 1,
            "changed_at": now,
        }
        with self._connections.writing() as connection:
            check_version(find_row(connection, files, file.id, UnknownFileError), file.version, now)
            connection.execute(update(files).where(files.c.id == file.id).values(changes))
            touch_study(connection, file.study_id, now)
            _put_questions(connection, file.study_id, questions, now)
            return _file_from(find_row(connection, files, file.id, UnknownFileError))

    def make_current(
        self, file_id: str, *, questions: Iterable[Question] | None = None
    ) -> StudyFile:
        """Make figures from this file from now on.

        Parameters
        ----------
        file_id : str
            The file.
        questions : iterable of Question, optional
            What the study asks from now on, kept in the same transaction.

        Raises
        ------
        UnknownFileError
            When there is none with this id.
        """
        with self._connections.writing() as connection:
            row = find_row(connection, files, file_id, UnknownFileError)
            _leave_current(connection, row.study_id)
            connection.execute(update(files).where(files.c.id == file_id).values(current=True))
            now = self._connections.now()
            touch_study(connection, row.study_id, now)
            _put_questions(connection, row.study_id, questions, now)
            return replace(_file_from(row), current=True)


def _put_questions(
    connection: Connection, study_id: str, new: Iterable[Question] | None, now: datetime
) -> None:
    if new is not None:
        put_questions(connection, study_id, new, now)


def _leave_current(connection: Connection, study_id: str) -> None:
    current = (files.c.study_id == study_id) & files.c.current
    connection.execute(update(files).where(current).values(current=False))


def _put(connection: Connection, file: StudyFile) -> StudyFile:
    known = connection.execute(
        select(files).where(
            files.c.study_id == file.study_id, files.c.fingerprint == file.fingerprint
        )
    ).one_or_none()
    if known is None:
        connection.execute(insert(files).values(_row_of(file)))
        return file
    file = replace(file, id=known.id, version=known.version + 1)
    connection.execute(update(files).where(files.c.id == file.id).values(_row_of(file)))
    return file


def _row_of(file: StudyFile) -> dict[str, Any]:
    return {
        "id": file.id,
        "study_id": file.study_id,
        "file_name": file.file_name,
        "fingerprint": file.fingerprint,
        "size": file.size,
        "reading": file.reading,
        "rows": file.rows,
        "columns": file.columns,
        "received_at": file.received_at,
        "current": file.current,
        "version": file.version,
        "changed_at": file.received_at,
    }


def _file_from(row: Row[Any]) -> StudyFile:
    return StudyFile(
        id=row.id,
        study_id=row.study_id,
        file_name=row.file_name,
        fingerprint=row.fingerprint,
        size=row.size,
        reading=row.reading,
        rows=row.rows,
        columns=row.columns,
        received_at=row.received_at,
        current=row.current,
        version=row.version,
    )
