"""The sampling plan of a study."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from typing import Any

from sqlalchemy import Connection, Row, insert, select, update

from app.store.errors import StaleVersionError, UnknownStudyError
from app.store.records import Records, find_row, touch_study
from app.store.schema import sampling_plans, studies
from app.study.records import from_json, to_json
from app.study.sampling_plan import SamplingPlan


@dataclass(frozen=True, slots=True)
class StoredPlan:
    """A sampling plan as it is kept.

    Parameters
    ----------
    plan : SamplingPlan
        What was told about the sample; the provisional one while nothing was told.
    version : int
        The version a change has to be based on; 0 while nothing was told.
    changed_at : datetime
        UTC.
    """

    plan: SamplingPlan
    version: int
    changed_at: datetime


class SamplingPlanRecords(Records):
    """Sampling plans in the database."""

    def plan(self, study_id: str) -> StoredPlan:
        """Return the study's sampling plan.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        with self._connections.reading() as connection:
            study = find_row(connection, studies, study_id, UnknownStudyError)
            row = _find(connection, study_id)
        if row is None:
            return StoredPlan(SamplingPlan(), 0, study.created_at)
        return StoredPlan(from_json(SamplingPlan, row.plan), row.version, row.changed_at)

    def save_plan(self, study_id: str, plan: SamplingPlan, version: int) -> StoredPlan:
        """Keep the study's sampling plan.

        Parameters
        ----------
        study_id : str
            The study.
        plan : SamplingPlan
            As it should be.
        version : int
            The version the change is based on.

        Returns
        -------
        StoredPlan
            With its new version.

        Raises
        ------
        UnknownStudyError, StaleVersionError
            The study is gone; changed in another window.
        """
        now = self._connections.now()
        saved = StoredPlan(plan, version + 1, now)
        values = {"plan": to_json(plan), "version": saved.version, "changed_at": now}
        with self._connections.writing() as connection:
            touch_study(connection, study_id, now)
            row = _find(connection, study_id)
            if version != (0 if row is None else row.version):
                raise StaleVersionError(now if row is None else row.changed_at, now)
            if row is None:
                connection.execute(insert(sampling_plans).values(study_id=study_id, **values))
            else:
                this = sampling_plans.c.study_id == study_id
                connection.execute(update(sampling_plans).where(this).values(values))
        return saved


def _find(connection: Connection, study_id: str) -> Row[Any] | None:
    query = select(sampling_plans).where(sampling_plans.c.study_id == study_id)
    return connection.execute(query).one_or_none()
