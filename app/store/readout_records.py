"""Published readouts and the links that open them."""

from __future__ import annotations

from collections.abc import Callable
from datetime import datetime
from typing import Any

from sqlalchemy import Connection, Row, Select, func, insert, select, update

from app.store.errors import BUSY, StoreError, UnknownReadoutError
from app.store.records import Records, check_study, new_id, touch_study
from app.store.schema import links, readouts
from app.study.study import LinkStatus, Readout

_PUBLISH_TRIES = 5


class ReadoutRecords(Records):
    """Readouts and links in the database."""

    def readouts(self, study_id: str) -> tuple[Readout, ...]:
        """Return the study's readouts, the newest first.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        query = (
            _with_links().where(readouts.c.study_id == study_id).order_by(readouts.c.number.desc())
        )
        with self._connections.reading() as connection:
            check_study(connection, study_id)
            return tuple(_readout_from(row) for row in connection.execute(query))

    def readout(self, readout_id: str) -> Readout:
        """Return one readout.

        Raises
        ------
        UnknownReadoutError
            When there is none with this id.
        """
        with self._connections.reading() as connection:
            return _find(connection, readout_id)

    def publish(
        self,
        study_id: str,
        make: Callable[[int], tuple[str, str]],
        *,
        title: str,
        methods_version: int,
        token_hash: str,
        expires_at: datetime | None,
    ) -> Readout:
        """Keep a new readout with its number and its link, all or nothing.

        Parameters
        ----------
        study_id : str
            The study.
        make : callable
            Given the readout's number, returns its frozen values as JSON and its page as HTML. It
            runs outside any transaction, and again with the next number when somebody else
            published the study in the meantime.
        title : str
            As the page shows it.
        methods_version : int
            ``METHODS_VERSION`` of the estimators it was made with.
        token_hash : str
            Hash of the link's token.
        expires_at : datetime or None
            When the link stops to open it, UTC; None for never.

        Raises
        ------
        UnknownStudyError, StoreError
            The study is gone; others publish it over and over.
        """
        for _ in range(_PUBLISH_TRIES):
            number = self._next_number(study_id)
            frozen, html = make(number)
            now = self._connections.now()
            readout = Readout(
                id=new_id(),
                study_id=study_id,
                number=number,
                title=title,
                frozen=frozen,
                html=html,
                methods_version=methods_version,
                published_at=now,
                expires_at=expires_at,
                revoked_at=None,
                version=1,
            )
            if self._keep(readout, token_hash, now):
                return readout
        raise StoreError(BUSY)

    def revoke_readout(self, readout_id: str) -> Readout:
        """Withdraw the readout's link; one withdrawn already stays as it is.

        Raises
        ------
        UnknownReadoutError
            When there is none with this id.
        """
        now = self._connections.now()
        with self._connections.writing() as connection:
            readout = _find(connection, readout_id)
            if _revoke_links(connection, readout_id, now):
                _changed(connection, readout, now)
            return _find(connection, readout_id)

    def replace_link(
        self, readout_id: str, token_hash: str, expires_at: datetime | None
    ) -> Readout:
        """Give the readout a new link; the one before is withdrawn.

        Parameters
        ----------
        readout_id : str
            The readout.
        token_hash : str
            Hash of the new link's token.
        expires_at : datetime or None
            When the new link stops to open it, UTC; None for never.

        Raises
        ------
        UnknownReadoutError
            When there is none with this id.
        """
        now = self._connections.now()
        with self._connections.writing() as connection:
            readout = _find(connection, readout_id)
            _revoke_links(connection, readout_id, now)
            _add_link(connection, readout_id, token_hash, expires_at, now)
            _changed(connection, readout, now)
            return _find(connection, readout_id)

    def find_by_token_hash(self, token_hash: str, now: datetime) -> tuple[LinkStatus, str]:
        """Return what a link does at a moment, and the page it opens.

        Parameters
        ----------
        token_hash : str
            Hash of the token somebody came with.
        now : datetime
            The moment, with time zone.

        Returns
        -------
        status : LinkStatus
            A link that was withdrawn, replaced, or whose study was deleted is revoked.
        html : str
            The page of a live link, else "".
        """
        query = (
            select(links, readouts.c.html)
            .select_from(links.outerjoin(readouts))
            .where(links.c.token_hash == token_hash)
        )
        with self._connections.reading() as connection:
            row = connection.execute(query).one_or_none()
        status = _status_of(row, now)
        return status, row.html if row is not None and status is LinkStatus.LIVE else ""

    def _next_number(self, study_id: str) -> int:
        with self._connections.reading() as connection:
            check_study(connection, study_id)
            return _last_number(connection, study_id) + 1

    def _keep(self, readout: Readout, token_hash: str, now: datetime) -> bool:
        with self._connections.writing() as connection:
            touch_study(connection, readout.study_id, now)
            if _last_number(connection, readout.study_id) + 1 != readout.number:
                return False
            connection.execute(insert(readouts).values(_row_of(readout)))
            _add_link(connection, readout.id, token_hash, readout.expires_at, now)
            return True


def _last_number(connection: Connection, study_id: str) -> int:
    query = select(func.max(readouts.c.number)).where(readouts.c.study_id == study_id)
    return connection.scalar(query) or 0


def _status_of(link: Row[Any] | None, now: datetime) -> LinkStatus:
    if link is None:
        return LinkStatus.UNKNOWN
    if link.revoked_at is not None or link.readout_id is None:
        return LinkStatus.REVOKED
    if link.expires_at is not None and link.expires_at <= now:
        return LinkStatus.EXPIRED
    return LinkStatus.LIVE


def _add_link(
    connection: Connection,
    readout_id: str,
    token_hash: str,
    expires_at: datetime | None,
    now: datetime,
) -> None:
    connection.execute(
        insert(links).values(
            token_hash=token_hash, readout_id=readout_id, made_at=now, expires_at=expires_at
        )
    )


def _revoke_links(connection: Connection, readout_id: str, now: datetime) -> int:
    unrevoked = (links.c.readout_id == readout_id) & links.c.revoked_at.is_(None)
    return connection.execute(update(links).where(unrevoked).values(revoked_at=now)).rowcount


def _changed(connection: Connection, readout: Readout, now: datetime) -> None:
    this = readouts.c.id == readout.id
    values = {"version": readout.version + 1, "changed_at": now}
    connection.execute(update(readouts).where(this).values(values))
    touch_study(connection, readout.study_id, now)


def _with_links() -> Select[Any]:
    of_readout = links.alias()
    newest = (
        select(func.max(of_readout.c.id))
        .where(of_readout.c.readout_id == readouts.c.id)
        .correlate(readouts)
        .scalar_subquery()
    )
    return select(readouts, links.c.expires_at, links.c.revoked_at).select_from(
        readouts.outerjoin(links, links.c.id == newest)
    )


def _find(connection: Connection, readout_id: str) -> Readout:
    row = connection.execute(_with_links().where(readouts.c.id == readout_id)).one_or_none()
    if row is None:
        raise UnknownReadoutError(readout_id)
    return _readout_from(row)


def _row_of(readout: Readout) -> dict[str, Any]:
    return {
        "id": readout.id,
        "study_id": readout.study_id,
        "number": readout.number,
        "title": readout.title,
        "frozen": readout.frozen,
        "html": readout.html,
        "methods_version": readout.methods_version,
        "published_at": readout.published_at,
        "version": readout.version,
        "changed_at": readout.published_at,
    }


def _readout_from(row: Row[Any]) -> Readout:
    return Readout(
        id=row.id,
        study_id=row.study_id,
        number=row.number,
        title=row.title,
        frozen=row.frozen,
        html=row.html,
        methods_version=row.methods_version,
        published_at=row.published_at,
        expires_at=row.expires_at,
        revoked_at=row.revoked_at,
        version=row.version,
    )
