"""What all kept records share: their connections, ids, versions, and the study they belong to."""

from __future__ import annotations

import secrets
from datetime import datetime
from typing import Any

from sqlalchemy import Connection, Row, Table, select, update

from app.store.connections import Connections
from app.store.errors import StaleVersionError, UnknownRecordError, UnknownStudyError
from app.store.file_bytes import FileBytes
from app.store.schema import studies


class Records:
    """Base of the groups of records that make up the database.

    Parameters
    ----------
    connections : Connections
        To the SQLite file.
    file_bytes : FileBytes
        The folder of uploaded bytes.
    """

    def __init__(self, connections: Connections, file_bytes: FileBytes) -> None:
        self._connections = connections
        self._bytes = file_bytes


def new_id() -> str:
    """Return a random id, 16 hexadecimal digits."""
    return secrets.token_hex(8)


def find_row(
    connection: Connection, table: Table, record_id: str, unknown: type[UnknownRecordError]
) -> Row[Any]:
    """Return the row with this id, or raise the error for an unknown one."""
    row = connection.execute(select(table).where(table.c.id == record_id)).one_or_none()
    if row is None:
        raise unknown(record_id)
    return row


def check_study(connection: Connection, study_id: str) -> None:
    """Raise ``UnknownStudyError`` unless the study is there."""
    find_row(connection, studies, study_id, UnknownStudyError)


def touch_study(connection: Connection, study_id: str, now: datetime) -> None:
    """Note that something in the study changed.

    Raises
    ------
    UnknownStudyError
        When the study is not there.
    """
    touched = update(studies).where(studies.c.id == study_id).values(touched_at=now)
    if connection.execute(touched).rowcount == 0:
        raise UnknownStudyError(study_id)


def check_version(row: Row[Any], version: int, now: datetime) -> None:
    """Raise ``StaleVersionError`` unless the row still has this version."""
    if row.version != version:
        raise StaleVersionError(row.changed_at, now)
