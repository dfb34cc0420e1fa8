"""Studies: open one, start one, rename, copy or delete one."""

import streamlit as st

from app.study.sample_studies import garden_centres
from app.widgets import layout
from app.widgets.cached_work import database
from app.widgets.deliveries import open_sample
from app.widgets.plain_text import as_html
from app.widgets.study_list import show_study

layout.dress()
st.title("Studies", anchor=False)
layout.show_later_message()
summaries = database().studies()

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
    show_study(database(), summary)
