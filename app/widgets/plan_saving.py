"""Every field of the sampling plan is kept the moment it is left."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import streamlit as st

from app.store import Database, StoredPlan, StoreError
from app.study.sampling_plan import SamplingPlan, StratumCount
from app.widgets import layout
from app.widgets.refusals import forget, refuse


class PlanKeeper:
    """Keeps changes of one plan; what the store says stands above what the screen says.

    Parameters
    ----------
    database : Database
        The store.
    study_id : str
        The study.
    stored : StoredPlan
        The plan as this run of the screen shows it.
    mark : str
        Decimal mark of the study, for the numbers in its fields.
    """

    def __init__(
        self, database: Database, study_id: str, stored: StoredPlan, mark: str = "."
    ) -> None:
        self.mark = mark
        self._database = database
        self._study_id = study_id
        self._stored = stored

    @property
    def plan(self) -> SamplingPlan:
        """The plan as stored."""
        return self._stored.plan

    def save(self, **changes: Any) -> bool:  # noqa: ANN401 - fields of the plan
        """Keep some fields, or leave the reason for the next run; return whether they are kept."""
        try:
            self._keep(**changes)
        except StoreError as error:
            layout.later(error.sentence)
            return False
        return True

    def confirm(self) -> None:
        """Say that a person has confirmed the plan."""
        self.save(provisional=False)

    def choose(self, key: str, field: str) -> None:
        """Keep what was chosen in a list or box."""
        self.save(**{field: st.session_state[key]})

    def take(self, key: str, field: str, read: Callable[[str], object]) -> None:
        """Keep what was typed; what cannot be read leaves the plan as it was."""
        self._take(key, lambda typed: {field: read(typed)})

    def take_stratum(
        self, key: str, label: str, read: Callable[[str], int | None], in_file: bool
    ) -> None:
        """Keep the count of one stratum; one without a count and without answers goes."""

        def changes(typed: str) -> dict[str, object]:
            sizes = {s.label: s.population_size for s in self.plan.strata}
            sizes[label] = read(typed)
            if sizes[label] is None and not in_file:
                del sizes[label]
            return {"strata": tuple(StratumCount(k, v) for k, v in sizes.items())}

        self._take(key, changes)

    def _take(self, key: str, changes: Callable[[str], dict[str, object]]) -> None:
        typed = str(st.session_state[key])
        try:
            self._keep(**changes(typed))
        except ValueError as error:
            refuse(key, typed, str(error))
        except StoreError as error:
            refuse(key, typed, error.sentence, stale=True)
        else:
            forget(key)

    def _keep(self, **changes: Any) -> None:  # noqa: ANN401 - fields of the plan
        """Keep some fields; two changes of one run build on each other."""
        plan = replace(self.plan, **changes)
        if plan != self.plan:
            self._stored = self._database.save_plan(self._study_id, plan, self._stored.version)
