"""Fieldwork file: drop it, see how it was read and what was repaired, go on to a first figure."""

import streamlit as st

from app.intake import FieldworkFileError
from app.store import StoreError
from app.study.number_format import write_count
from app.widgets import address, file_reading, layout
from app.widgets.cached_work import database, read_file, remember
from app.widgets.deliveries import deliver
from app.widgets.file_list import show_files
from app.widgets.first_figure import show_first_figure
from app.widgets.plain_text import as_html


def show_drop(study_id: str, label: str) -> None:
    """Take a file; a refused one leaves everything as it was."""
    round_number = int(st.session_state.get("upload_round", 0))
    upload = st.file_uploader(label, key=f"upload_{round_number}", accept_multiple_files=False)
    if upload is None:
        return
    try:
        delivery = deliver(database(), study_id, upload.getvalue(), upload.name)
    except (FieldworkFileError, StoreError) as error:
        layout.problem(str(error))
        return
    remember(delivery.file, delivery.read)
    st.session_state["upload_round"] = round_number + 1
    if delivery.changes:
        layout.later(" ".join(delivery.changes))
    address.write(study=delivery.study_id)
    st.rerun()


layout.dress()
if not address.read("study"):
    with st.container(horizontal=True, key="journey"):
        st.page_link("screens/studies.py", label="Studies")
    st.title("New study", anchor=False)
    layout.say("Drop the file your fieldwork house sent: text with columns, such as .csv or .txt.")
    show_drop("", "Fieldwork file")
    st.stop()

opened = layout.open_study()
layout.journey("file", opened)
st.title("Fieldwork file", anchor=False)
layout.show_later_message()
if opened.file is None:
    show_drop(opened.study.id, "Fieldwork file")
    st.stop()

file, mark = opened.file, opened.study.decimal_mark
deliveries = database().files(opened.study.id)
try:
    read = read_file(file)
except (FieldworkFileError, StoreError) as error:
    layout.problem(str(error))
    show_drop(opened.study.id, "Fieldwork file")
    show_files(database(), deliveries, mark)
    st.stop()
st.html(
    f'<p class="hr-sentence"><b>{write_count(file.rows, mark)}</b> answers in '
    f"<b>{write_count(file.columns, mark)}</b> columns, from {as_html(file.file_name)}</p>"
    f'<p class="hr-soft hr-small">received {file.received_at:%d %B %Y, %H:%M} UTC \u00b7 '
    f"SHA-256 {file.fingerprint[:16]}\u2026</p>"
)
show_first_figure(opened)
left, right = st.columns(2, gap="large")
with left:
    st.subheader("How it was read")
    file_reading.show_decisions(file)
    with st.expander("Read it another way"):
        file_reading.show_another_reading(database(), file, read)
with right:
    st.subheader("Repairs and remarks")
    file_reading.show_remarks(read)
st.subheader("First rows")
file_reading.show_first_rows(read.answers)
if len(deliveries) > 1:
    with st.expander(f"All deliveries ({len(deliveries)})"):
        show_files(database(), deliveries, opened.study.decimal_mark)
with st.expander("A new delivery for this study"):
    layout.say("Questions, plan and kept figures stay, matched by column name.")
    show_drop(opened.study.id, "Newer fieldwork file")
