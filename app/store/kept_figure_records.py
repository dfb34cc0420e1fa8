"""Kept figures of a study, in the order of the readout."""

from __future__ import annotations

from typing import Any

from sqlalchemy import Connection, Row, Select, delete, insert, select, update

from app.store.errors import AlreadyKeptError, UnknownFigureError
from app.store.records import Records, check_study, check_version, find_row, new_id, touch_study
from app.store.schema import kept_figures
from app.study.figure_requests import FigureRequest
from app.study.records import from_json, to_json
from app.study.study import KeptFigure


class KeptFigureRecords(Records):
    """Kept figures in the database."""

    def kept_figures(self, study_id: str) -> tuple[KeptFigure, ...]:
        """Return the study's kept figures in order.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        with self._connections.reading() as connection:
            check_study(connection, study_id)
            return _in_order(connection, study_id)

    def keep_figure(self, study_id: str, request: FigureRequest) -> KeptFigure:
        """Keep a figure at the end of the readout; one kept already is returned as it is.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        now = self._connections.now()
        with self._connections.writing() as connection:
            check_study(connection, study_id)
            present = _in_order(connection, study_id)
            for kept in present:
                if kept.request == request:
                    return kept
            touch_study(connection, study_id, now)
            kept = KeptFigure(new_id(), study_id, request, len(present), "", "", 1)
            connection.execute(insert(kept_figures).values({**_row_of(kept), "changed_at": now}))
        return kept

    def save_kept(self, kept: KeptFigure) -> KeptFigure:
        """Keep a figure's request, headline and comment; its place is ``move_kept``'s business.

        Parameters
        ----------
        kept : KeptFigure
            As it should be; its version is the one the change is based on.

        Returns
        -------
        KeptFigure
            With its new version.

        Raises
        ------
        UnknownFigureError, StaleVersionError, AlreadyKeptError
            Removed; changed in another window; the request is that of another kept figure.
        """
        now = self._connections.now()
        changes = {
            "request": to_json(kept.request),
            "headline": kept.headline,
            "comment": kept.comment,
            "version": kept.version + 1,
            "changed_at": now,
        }
        with self._connections.writing() as connection:
            row = find_row(connection, kept_figures, kept.id, UnknownFigureError)
            check_version(row, kept.version, now)
            _check_alone(kept, _in_order(connection, row.study_id))
            this = kept_figures.c.id == kept.id
            connection.execute(update(kept_figures).where(this).values(changes))
            touch_study(connection, row.study_id, now)
            return _kept_from(find_row(connection, kept_figures, kept.id, UnknownFigureError))

    def remove_kept(self, kept_id: str) -> None:
        """Take a figure out of the readout.

        Raises
        ------
        UnknownFigureError
            When there is none with this id.
        """
        with self._connections.writing() as connection:
            row = find_row(connection, kept_figures, kept_id, UnknownFigureError)
            connection.execute(delete(kept_figures).where(kept_figures.c.id == kept_id))
            _number(connection, [kept.id for kept in _in_order(connection, row.study_id)])
            touch_study(connection, row.study_id, self._connections.now())

    def move_kept(self, kept_id: str, position: int) -> tuple[KeptFigure, ...]:
        """Give a figure another place; versions stay, for what it says does not change.

        Parameters
        ----------
        kept_id : str
            The kept figure.
        position : int
            Its new place, from 0; beyond the end means the end.

        Returns
        -------
        tuple of KeptFigure
            All of the study, in their new order.

        Raises
        ------
        UnknownFigureError
            When there is none with this id.
        """
        with self._connections.writing() as connection:
            row = find_row(connection, kept_figures, kept_id, UnknownFigureError)
            order = [kept.id for kept in _in_order(connection, row.study_id)]
            order.remove(kept_id)
            order.insert(max(position, 0), kept_id)
            _number(connection, order)
            touch_study(connection, row.study_id, self._connections.now())
            return _in_order(connection, row.study_id)


def _of_study(study_id: str) -> Select[Any]:
    return (
        select(kept_figures)
        .where(kept_figures.c.study_id == study_id)
        .order_by(kept_figures.c.position, kept_figures.c.id)
    )


def _in_order(connection: Connection, study_id: str) -> tuple[KeptFigure, ...]:
    return tuple(_kept_from(row) for row in connection.execute(_of_study(study_id)))


def _number(connection: Connection, order: list[str]) -> None:
    for position, kept_id in enumerate(order):
        this = kept_figures.c.id == kept_id
        connection.execute(update(kept_figures).where(this).values(position=position))


def _check_alone(kept: KeptFigure, present: tuple[KeptFigure, ...]) -> None:
    if any(other.request == kept.request and other.id != kept.id for other in present):
        raise AlreadyKeptError(
            "This figure is in the readout already: change that one, or take it out first."
        )


def _row_of(kept: KeptFigure) -> dict[str, Any]:
    return {
        "id": kept.id,
        "study_id": kept.study_id,
        "request": to_json(kept.request),
        "position": kept.position,
        "headline": kept.headline,
        "comment": kept.comment,
        "version": kept.version,
    }


def _kept_from(row: Row[Any]) -> KeptFigure:
    return KeptFigure(
        id=row.id,
        study_id=row.study_id,
        request=from_json(FigureRequest, row.request),
        position=row.position,
        headline=row.headline,
        comment=row.comment,
        version=row.version,
    )
