"""The four questions of the sampling plan."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import pandas as pd
import streamlit as st

from app.study.count_text import read_count
from app.study.figure_rows import MOST_GROUPS
from app.study.number_format import write_count
from app.study.plan_checks import known_universe, stratum_rows, universe_from_strata
from app.study.questions import Question, QuestionKind
from app.study.sampling_plan import SamplingMethod, StratumCount
from app.widgets import layout
from app.widgets.plan_saving import PlanKeeper
from app.widgets.plan_strata import show_strata
from app.widgets.refusals import fill, show_refusal

NONE = "none"

_CONSEQUENCES = {
    SamplingMethod.CHANCE: "Every unit on a list had a known chance. The size of the universe "
    "makes the intervals narrower.",
    SamplingMethod.EVERYBODY: "A census was tried. The intervals assume that those who stayed "
    "silent resemble those who answered; both widths stand above.",
    SamplingMethod.GROUPS: "Shops, sailings, schools: people of one group resemble each other, so "
    "the intervals get wider.",
    SamplingMethod.QUOTA: "Nobody was drawn by chance. Intervals are a model, and every sentence "
    "says so.",
    SamplingMethod.NOT_SURE: "Counted as a simple draw from an endless universe. Every figure "
    "carries a caution and none can be published.",
}


def show_universe(keeper: PlanKeeper) -> None:
    """Ask whom the figures speak for, and how many that are."""
    plan = keeper.plan
    st.subheader("1 Whom should figures speak for?", anchor="universe_size")
    _text(keeper, "In words", "universe", plan.universe, "all garden centres in the four regions")
    one, many, size = st.columns(3)
    with one:
        _text(keeper, "One of them is a", "unit_one", plan.unit_one, "garden centre", needed=True)
    with many:
        _text(keeper, "Several are", "unit_many", plan.unit_many, "garden centres", needed=True)
    with size:
        _show_size(keeper)
    as_of, source = st.columns(2)
    with as_of:
        _text(keeper, "Counted as of", "as_of", plan.as_of, "1 January 2026")
    with source:
        _text(keeper, "Counted from", "source", plan.source, "the association's register")


def _show_size(keeper: PlanKeeper) -> None:
    plan = keeper.plan
    by_strata = universe_from_strata(plan)
    known = known_universe(plan)
    fill("plan_size", write_count(plan.universe_size, keeper.mark) if plan.universe_size else "")
    take = ("plan_size", "universe_size", partial(read_count, name="How many are there"))
    st.text_input(
        "How many are there?",
        key="plan_size",
        on_change=keeper.take,
        args=take,
        placeholder="empty: I don\u2019t know",
        max_chars=20,
    )
    show_refusal("plan_size", keeper.take, take)
    if by_strata is not None and by_strata != plan.universe_size:
        layout.say(f"The strata add up to {write_count(by_strata, keeper.mark)}; that counts.")
    if known is None:
        layout.say("Not known: the universe counts as endless, and totals are not possible.")


def _text(
    keeper: PlanKeeper, label: str, field: str, stored: str, example: str, *, needed: bool = False
) -> None:
    key = f"plan_{field}"
    fill(key, stored)

    def read(value: str) -> str:
        text = " ".join(str(value).split())
        if needed and not text:
            raise ValueError(f"{label}: type a word such as \u201c{example}\u201d.")
        return text

    st.text_input(
        label,
        key=key,
        on_change=keeper.take,
        args=(key, field, read),
        placeholder=f"such as {example}",
        max_chars=120,
    )
    show_refusal(key, keeper.take, (key, field, read))


def show_method(keeper: PlanKeeper) -> None:
    """Ask how people got in."""
    st.subheader("2 How did people get in?", anchor="method")
    st.session_state["plan_method"] = keeper.plan.method
    st.radio(
        "How did people get in?",
        list(SamplingMethod),
        key="plan_method",
        format_func=lambda method: method.value,
        on_change=keeper.choose,
        args=("plan_method", "method"),
        label_visibility="collapsed",
    )
    layout.say(_CONSEQUENCES[keeper.plan.method])
    if keeper.plan.method is SamplingMethod.CHANCE:
        st.session_state["plan_replacement"] = keeper.plan.replacement
        st.checkbox(
            "Each could be drawn twice",
            key="plan_replacement",
            on_change=keeper.choose,
            args=("plan_replacement", "replacement"),
        )


def show_groups(keeper: PlanKeeper, questions: tuple[Question, ...], answers: pd.DataFrame) -> None:
    """Ask which groups were drawn first; only where whole groups were drawn."""
    if keeper.plan.method is not SamplingMethod.GROUPS:
        return
    columns = [c for q in questions if len(q.columns) == 1 for c in q.columns if c in answers]
    left, right = st.columns(2)
    with left:
        st.subheader("Which groups were drawn first?", anchor="clusters_column")
        _choose(
            keeper, "Column that names the group", "clusters_column", columns, questions, answers
        )
    with right:
        st.subheader("How many groups are there in all?", anchor="universe_clusters")
        number = keeper.plan.universe_clusters
        fill("plan_clusters", write_count(number, keeper.mark) if number else "")
        take = (
            "plan_clusters",
            "universe_clusters",
            partial(read_count, name="Groups in the universe"),
        )
        st.text_input(
            "Groups in the universe",
            key="plan_clusters",
            on_change=keeper.take,
            args=take,
            placeholder="empty: I don\u2019t know",
            max_chars=20,
        )
        show_refusal("plan_clusters", keeper.take, take)


def show_separate_draws(
    keeper: PlanKeeper, questions: tuple[Question, ...], answers: pd.DataFrame
) -> None:
    """Ask whether the draw was made separately, and how large each stratum is."""
    st.subheader("3 Was the draw made separately?", anchor="strata")
    columns = [
        q.columns[0]
        for q in questions
        if q.kind in (QuestionKind.CHOICE, QuestionKind.SCALE)
        and q.columns[0] in answers
        and 2 <= len(q.answers) <= MOST_GROUPS
    ]
    stored = keeper.plan.strata_column
    _choose(keeper, "Separately by", "strata_column", columns, questions, answers)
    if stored and stored in answers:
        show_strata(keeper, stratum_rows(keeper.plan, answers))


def show_weights(
    keeper: PlanKeeper, questions: tuple[Question, ...], answers: pd.DataFrame
) -> None:
    """Ask for a column of weights."""
    st.subheader("4 Weights in the file?", anchor="weights_column")
    columns = [
        q.columns[0]
        for q in questions
        if q.kind in (QuestionKind.WEIGHT, QuestionKind.NUMBER) and q.columns[0] in answers
    ]
    _choose(keeper, "Weights", "weights_column", columns, questions, answers)


def _choose(
    keeper: PlanKeeper,
    label: str,
    field: str,
    columns: list[str],
    questions: tuple[Question, ...],
    answers: pd.DataFrame,
) -> None:
    stored = str(getattr(keeper.plan, field))
    options = [NONE, *columns] if stored in ("", *columns) else [NONE, stored, *columns]
    texts = {q.columns[0]: q.text for q in questions}
    key = f"plan_{field}"
    st.session_state[key] = stored or NONE
    st.selectbox(
        label,
        options,
        key=key,
        format_func=lambda c: "none" if c == NONE else f"{c} \u00b7 {texts.get(c, '')}",
        on_change=_take_column,
        args=(keeper, key, field, answers),
    )


def _take_column(keeper: PlanKeeper, key: str, field: str, answers: pd.DataFrame) -> None:
    column = "" if st.session_state[key] == NONE else st.session_state[key]
    changes: dict[str, object] = {field: column}
    if field == "strata_column":
        labels = stratum_rows(replace(keeper.plan, strata_column=column), answers)
        changes["strata"] = tuple(StratumCount(label, None) for label in labels)
    keeper.save(**changes)
