"""The effect of a sampling plan in one strip, and what contradicts it."""

from __future__ import annotations

import streamlit as st

from app.study.number_format import NO_BREAK, write_count, write_number
from app.study.plan_checks import PlanProblem
from app.study.plan_effect import PlanEffect
from app.study.sampling_plan import SamplingMethod
from app.study.study_data import StudyData
from app.widgets.plain_text import as_html

_ANCHORS = {
    "universe_size": "universe_size",
    "strata": "strata",
    "strata_column": "strata",
    "weights_column": "weights_column",
    "clusters_column": "clusters_column",
    "universe_clusters": "universe_clusters",
    "method": "method",
}


def show_effect(data: StudyData, effect: PlanEffect) -> None:
    """Show what a share of one half would carry, and how much of the universe answered."""
    mark = data.study.decimal_mark
    here = write_number(effect.points, 0.1, mark)
    endless = write_number(effect.endless_points, 0.1, mark)
    least = "at least " if data.plan.method is SamplingMethod.GROUPS else ""
    st.html(
        '<div class="hw-strip"><p class="hr-sentence">A share of 50'
        f"{NO_BREAK}% would carry {least}<b>±{here}{NO_BREAK}points</b> "
        f"(endless universe: ±{endless}).</p>{_asked(effect, mark)}</div>"
    )


def _asked(effect: PlanEffect, mark: str) -> str:
    answered = write_count(effect.asked, mark)
    if effect.universe is None:
        return f'<p class="hr-soft">{answered} answered; the universe is not known.</p>'
    part = min(1.0, effect.asked / effect.universe)
    return (
        f'<p class="hr-soft">{answered} of {write_count(effect.universe, mark)} answered: '
        f"{as_html(effect.fraction_words)}</p>"
        f'<span class="hw-part" aria-hidden="true"><span style="width:{100 * part:.1f}%"></span>'
        "</span>"
    )


def show_problems(problems: tuple[PlanProblem, ...]) -> None:
    """Show every contradiction, each with a link to the field that mends it."""
    for problem in problems:
        anchor = _ANCHORS.get(problem.field, "method")
        st.html(
            f'<p class="hr-problem hw-tight" role="alert"><b>!</b> {as_html(problem.sentence)} '
            f'<a href="#{anchor}">to the field</a></p>'
        )
