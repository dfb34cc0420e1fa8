"""Sampling plan: its effect first, contradictions next, then four plain questions."""

import streamlit as st

from app.study.plan_effect import plan_effect
from app.study.sampling_plan import SamplingMethod
from app.widgets import layout
from app.widgets.cached_work import database
from app.widgets.plan_effect_strip import show_effect, show_problems
from app.widgets.plan_form import (
    show_groups,
    show_method,
    show_separate_draws,
    show_universe,
    show_weights,
)
from app.widgets.plan_saving import PlanKeeper

layout.dress()
opened = layout.open_study()
layout.journey("plan", opened)
st.title("Sampling plan", anchor=False)
layout.show_later_message()
layout.file_first(opened)
data = opened.data()
stored = opened.plan
keeper = PlanKeeper(database(), opened.study.id, stored, opened.study.decimal_mark)
show_effect(data, plan_effect(stored.plan, data.built, data.answers))
show_problems(data.built.problems)
if stored.plan.provisional:
    with st.container(horizontal=True, vertical_alignment="center", key="plan_confirm"):
        st.html(
            '<p class="hw-standing"><b>Provisional:</b> nobody has said yet how people got in. '
            "Answer what you can, then confirm.</p>",
            width="content",
        )
        st.button(
            "Confirm the plan",
            type="primary",
            key="confirm_plan",
            on_click=keeper.confirm,
        )
elif stored.plan.method is SamplingMethod.NOT_SURE:
    layout.say("Confirmed as \u201cnot sure\u201d: figures carry a caution and stay in the house.")
else:
    layout.say("Confirmed. Every change below is kept as you leave its field.")

left, right = st.columns(2, gap="large")
with left:
    show_universe(keeper)
    show_method(keeper)
    show_groups(keeper, opened.questions, data.answers)
with right:
    show_separate_draws(keeper, opened.questions, data.answers)
    show_weights(keeper, opened.questions, data.answers)
st.page_link("screens/figure.py", label="On to a figure", query_params={"study": opened.study.id})
