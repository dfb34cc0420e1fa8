"""Studies: the list, one of them, and what happens when one is copied or deleted."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from typing import Any

from sqlalchemy import (
    ColumnElement,
    Connection,
    Row,
    ScalarSelect,
    Table,
    delete,
    func,
    insert,
    or_,
    select,
    update,
)

from app.store.errors import StoreError, UnknownStudyError
from app.store.records import Records, check_study, check_version, find_row, new_id
from app.store.schema import (
    files,
    kept_figures,
    links,
    questions,
    readouts,
    sampling_plans,
    studies,
)
from app.study.records import from_json, to_json
from app.study.study import HouseLimit, Study


@dataclass(frozen=True, slots=True)
class StudySummary:
    """A study as the list shows it.

    Parameters
    ----------
    study : Study
        The study itself.
    files : int
        Uploaded files.
    rows : int
        Rows of the file figures are made from; 0 without a file.
    kept : int
        Kept figures.
    live_links : int
        Links that open a readout now.
    file_name : str
        Name of the file figures are made from; "" without a file.
    """

    study: Study
    files: int
    rows: int
    kept: int
    live_links: int
    file_name: str


@dataclass(frozen=True, slots=True)
class DeletedStudy:
    """What deleting a study did: how many links that opened a readout no longer do."""

    links_withdrawn: int


class StudyRecords(Records):
    """Studies in the database."""

    def studies(self) -> tuple[StudySummary, ...]:
        """Return every study, the one changed last first."""
        query = _summaries(self._connections.now()).order_by(
            studies.c.touched_at.desc(), studies.c.name
        )
        with self._connections.reading() as connection:
            return tuple(_summary_from(row) for row in connection.execute(query))

    def study(self, study_id: str) -> Study:
        """Return one study.

        Raises
        ------
        UnknownStudyError
            When there is none with this id.
        """
        with self._connections.reading() as connection:
            return _study_from(find_row(connection, studies, study_id, UnknownStudyError))

    def create_study(self, name: str) -> Study:
        """Keep a new, empty study.

        Raises
        ------
        StoreError
            When the name is empty.
        """
        now = self._connections.now()
        study = Study(new_id(), _checked_name(name), now, now, version=1)
        with self._connections.writing() as connection:
            connection.execute(insert(studies).values(_row_of(study)))
        return study

    def save_study(self, study: Study) -> Study:
        """Keep the study's name, decimal mark and width limit.

        Parameters
        ----------
        study : Study
            As it should be; its version is the one the change is based on.

        Returns
        -------
        Study
            With its new version.

        Raises
        ------
        UnknownStudyError, StaleVersionError, StoreError
            Deleted; changed in another window; empty name.
        """
        now = self._connections.now()
        changes = {
            "name": _checked_name(study.name),
            "decimal_mark": study.decimal_mark,
            "house_limit": to_json(study.limit),
            "version": study.version + 1,
            "changed_at": now,
            "touched_at": now,
        }
        with self._connections.writing() as connection:
            row = find_row(connection, studies, study.id, UnknownStudyError)
            check_version(row, study.version, now)
            connection.execute(update(studies).where(studies.c.id == study.id).values(changes))
            return _study_from(find_row(connection, studies, study.id, UnknownStudyError))

    def duplicate_study(self, study_id: str, name: str) -> Study:
        """Copy files, questions, sampling plan and kept figures; not readouts and their links.

        Parameters
        ----------
        study_id : str
            The study to copy.
        name : str
            Name of the copy.

        Raises
        ------
        UnknownStudyError, StoreError
            Nothing to copy; empty name.
        """
        now = self._connections.now()
        with self._connections.writing() as connection:
            source = _study_from(find_row(connection, studies, study_id, UnknownStudyError))
            copy = Study(
                new_id(), _checked_name(name), now, now, 1, source.decimal_mark, source.limit
            )
            connection.execute(insert(studies).values(_row_of(copy)))
            for table in (files, questions, sampling_plans, kept_figures):
                _copy_rows(connection, table, study_id, copy)
        return copy

    def delete_study(self, study_id: str) -> DeletedStudy:
        """Delete a study with all it holds; its links say from now on that they are withdrawn.

        Uploaded bytes go when no other study uses them.

        Raises
        ------
        UnknownStudyError
            When there is none with this id.
        """
        now = self._connections.now()
        with self._connections.writing() as connection:
            check_study(connection, study_id)
            withdrawn = connection.scalar(select(_live_links(study_id, now)))
            fingerprints = _fingerprints(connection, files.c.study_id == study_id)
            _revoke_links(connection, study_id, now)
            connection.execute(delete(studies).where(studies.c.id == study_id))
        self._discard_unused(fingerprints)
        return DeletedStudy(withdrawn or 0)

    def sweep_file_bytes(self) -> None:
        """Remove bytes of uploads and deletions that were cut short."""
        with self._connections.writing() as connection:
            self._bytes.sweep(_fingerprints(connection))

    def _discard_unused(self, fingerprints: frozenset[str]) -> None:
        with self._connections.writing() as connection:
            self._bytes.discard(fingerprints - _fingerprints(connection))


def _checked_name(name: str) -> str:
    tidy = " ".join(name.split())
    if not tidy:
        raise StoreError("The study has no name: type one that your colleagues will recognise.")
    return tidy


def _row_of(study: Study) -> dict[str, Any]:
    return {
        "id": study.id,
        "name": study.name,
        "decimal_mark": study.decimal_mark,
        "house_limit": to_json(study.limit),
        "created_at": study.created_at,
        "touched_at": study.changed_at,
        "version": study.version,
        "changed_at": study.changed_at,
    }


def _study_from(row: Row[Any]) -> Study:
    return Study(
        id=row.id,
        name=row.name,
        created_at=row.created_at,
        changed_at=row.touched_at,
        version=row.version,
        decimal_mark=row.decimal_mark,
        limit=from_json(HouseLimit, row.house_limit),
    )


def _summaries(now: datetime) -> Any:  # noqa: ANN401 - a select of many columns
    of_study = files.c.study_id == studies.c.id
    current = of_study & files.c.current
    return select(
        studies,
        _count(files, of_study).label("files_count"),
        select(files.c.rows).where(current).scalar_subquery().label("current_rows"),
        select(files.c.file_name).where(current).scalar_subquery().label("current_name"),
        _count(kept_figures, kept_figures.c.study_id == studies.c.id).label("kept_count"),
        _live_links(studies.c.id, now).label("live_links"),
    )


def _count(table: Table, condition: Any) -> ScalarSelect[int]:  # noqa: ANN401
    return select(func.count()).select_from(table).where(condition).scalar_subquery()


def _live_links(study_id: Any, now: datetime) -> ScalarSelect[int]:  # noqa: ANN401 - text or column
    return (
        select(func.count())
        .select_from(links.join(readouts))
        .where(
            readouts.c.study_id == study_id,
            links.c.revoked_at.is_(None),
            or_(links.c.expires_at.is_(None), links.c.expires_at > now),
        )
        .scalar_subquery()
    )


def _summary_from(row: Row[Any]) -> StudySummary:
    return StudySummary(
        study=_study_from(row),
        files=row.files_count,
        rows=row.current_rows or 0,
        kept=row.kept_count,
        live_links=row.live_links,
        file_name=row.current_name or "",
    )


def _copy_rows(connection: Connection, table: Table, study_id: str, copy: Study) -> None:
    replaced = {"study_id": copy.id, "version": 1, "changed_at": copy.created_at}
    source = connection.execute(select(table).where(table.c.study_id == study_id))
    rows = [{**row, **replaced} for row in source.mappings()]
    if "id" in table.c:
        rows = [{**row, "id": new_id()} for row in rows]
    if rows:
        connection.execute(insert(table), rows)


def _revoke_links(connection: Connection, study_id: str, now: datetime) -> None:
    of_study = select(readouts.c.id).where(readouts.c.study_id == study_id)
    open_links = links.c.readout_id.in_(of_study) & links.c.revoked_at.is_(None)
    connection.execute(update(links).where(open_links).values(revoked_at=now))


def _fingerprints(connection: Connection, *conditions: ColumnElement[bool]) -> frozenset[str]:
    return frozenset(connection.scalars(select(files.c.fingerprint).where(*conditions)))
