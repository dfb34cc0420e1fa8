"""Every field of the sampling plan is kept the moment it is left."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import streamlit as st

from app.store import Database, StoredPlan, StoreError
from app.study.sampling_plan import SamplingPlan, StratumCount
from app.widgets import layout


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
    """

    def __init__(self, database: Database, study_id: str, stored: StoredPlan) -> None:
        self._database = database
        self._study_id = study_id
        self._stored = stored

    @property
    def plan(self) -> SamplingPlan:
        """The plan as stored."""
        return self._stored.plan

    def save(self, **changes: Any) -> None:  # noqa: ANN401 - fields of the plan
        """Keep some fields."""
        self.save_plan(replace(self.plan, **changes))

    def save_plan(self, plan: SamplingPlan) -> None:
        """Keep a whole plan."""
        if plan == self.plan:
            return
        try:
            self._database.save_plan(self._study_id, plan, self._stored.version)
        except StoreError as error:
            layout.later(error.sentence)

    def take(self, key: str, field: str, read: Callable[[Any], Any] = lambda value: value) -> None:
        """Keep the value of a widget; a value that cannot be read leaves the plan as it was."""
        typed = st.session_state[key]
        try:
            value = read(typed)
        except ValueError as error:
            refuse(key, typed, str(error))
            return
        st.session_state.pop(f"refused_{key}", None)
        self.save(**{field: value})

    def take_stratum(self, key: str, label: str, read: Callable[[str], int | None]) -> None:
        """Keep the count of one stratum."""
        typed = st.session_state[key]
        try:
            size = read(typed)
        except ValueError as error:
            refuse(key, typed, str(error))
            return
        st.session_state.pop(f"refused_{key}", None)
        others = {s.label: s.population_size for s in self.plan.strata}
        others[label] = size
        self.save(strata=tuple(StratumCount(k, v) for k, v in others.items()))


def refuse(key: str, typed: str, sentence: str) -> None:
    """Remember what was typed and why it was not taken, so that nothing typed is lost."""
    st.session_state[f"refused_{key}"] = [str(typed), sentence]


def fill(key: str, stored: str) -> None:
    """Put the stored value into a field, or what was typed and refused."""
    refused = st.session_state.get(f"refused_{key}")
    st.session_state[key] = refused[0] if refused else stored


def show_refusal(key: str) -> None:
    """Say why what stands in a field was not taken."""
    refused = st.session_state.get(f"refused_{key}")
    if refused:
        layout.problem(refused[1])
