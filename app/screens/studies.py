"""Studies: open one, start one, copy one, delete one."""

import streamlit as st

from app.store import StoreError, StudySummary
from app.study.number_format import write_count
from app.study.sample_studies import garden_centres
from app.widgets import layout
from app.widgets.cached_work import database
from app.widgets.deliveries import open_sample
from app.widgets.plain_text import as_html, as_typed


def copy_study(summary: StudySummary) -> None:
    copy = database().duplicate_study(summary.study.id, f"{summary.study.name} (copy)")
    layout.later(f"{copy.name} is there, without the readouts and links of the original.")


def delete_study(summary: StudySummary) -> None:
    gone = database().delete_study(summary.study.id)
    links = {0: "It had no open links.", 1: "One link was withdrawn."}
    told = links.get(gone.links_withdrawn, f"{gone.links_withdrawn} links were withdrawn.")
    layout.later(f"{summary.study.name} is deleted. {told}")
    st.session_state.pop("asked_to_delete", None)


layout.dress()
st.title("Studies", anchor=False)
layout.show_later_message()
try:
    summaries = database().studies()
except StoreError as error:
    layout.store_problem(error)
    st.stop()

with st.container(horizontal=True, key="studies_start"):
    if st.button("New study from a fieldwork file", type="primary", key="new_study"):
        st.switch_page("screens/file.py")
    if st.button("Open the sample study", key="open_sample"):
        study_id = open_sample(database(), garden_centres())
        st.switch_page("screens/figure.py", query_params={"study": study_id})

if not summaries:
    st.html(
        '<p class="hr-sentence">There is no study yet. Drop the file your fieldwork house sent, '
        "or open the sample study to see a finished one.</p>"
        f'<p class="hr-soft">{as_html(garden_centres().about)}</p>'
    )
for summary in summaries:
    study = summary.study
    with st.container(border=True, key=f"study_{study.id}"):
        left, right = st.columns([3, 2], vertical_alignment="center")
        with left:
            screen = "figure" if summary.files else "file"
            st.page_link(
                f"screens/{screen}.py",
                label=f"**{as_typed(study.name)}**",
                query_params={"study": study.id},
            )
            words = (
                f"{write_count(summary.rows)} answers in {summary.file_name}"
                if summary.files
                else "no fieldwork file yet"
            )
            kept = f"{summary.kept} kept, {summary.live_links} open links"
            changed = f"changed {study.changed_at:%d %B %Y, %H:%M} UTC"
            layout.say(f"{words} \u00b7 {kept} \u00b7 {changed}")
        with right, st.container(horizontal=True, horizontal_alignment="right"):
            if st.session_state.get("asked_to_delete") == study.id:
                layout.say("Delete it with its file, figures and links?", "hr-problem")
                st.button(
                    "Yes, delete", key=f"really_{study.id}", on_click=delete_study, args=(summary,)
                )
                st.button(
                    "No, keep it",
                    key=f"not_{study.id}",
                    on_click=st.session_state.pop,
                    args=("asked_to_delete",),
                )
            else:
                st.button("Duplicate", key=f"copy_{study.id}", on_click=copy_study, args=(summary,))
                st.button(
                    "Delete",
                    key=f"delete_{study.id}",
                    on_click=st.session_state.__setitem__,
                    args=("asked_to_delete", study.id),
                )
