"""How a fieldwork file was read: decisions, first rows, remarks, and another way to read it."""

from __future__ import annotations

from dataclasses import replace

import pandas as pd
import streamlit as st

from app.intake import FieldworkFile, FieldworkFileError, Reading
from app.store import Database, StoreError
from app.study.number_format import write_count
from app.study.study import StudyFile
from app.widgets import layout
from app.widgets.deliveries import read_again
from app.widgets.plain_text import as_html

FIRST_ROWS = 20
FIRST_COLUMNS = 60
MOST_REMARKS = 40
_MARKS = {".": "decimal point", ",": "decimal comma"}
_DELIMITERS = {",": "comma", ";": "semicolon", "\t": "tab", "|": "upright bar"}
_ENCODINGS = {
    "utf-8": "UTF-8",
    "utf-8-sig": "UTF-8 with a mark",
    "utf-16-le": "UTF-16, little end first",
    "utf-16-be": "UTF-16, big end first",
    "cp1252": "Windows-1252",
}


def show_decisions(file: StudyFile) -> None:
    """Show how the file was read when it arrived, one sentence a decision."""
    evidence = Reading.from_json(file.reading).evidence
    items = "".join(f"<li>{as_html(sentence)}</li>" for sentence in evidence)
    st.html(f'<ul class="hw-list">{items}</ul>')


def show_first_rows(answers: pd.DataFrame) -> None:
    """Show the first rows as read."""
    shown = answers.iloc[:FIRST_ROWS, :FIRST_COLUMNS]
    st.dataframe(shown, hide_index=True, height=280, alt="The first rows of the file as read")
    more = answers.shape[1] - shown.shape[1]
    if more > 0:
        layout.say(f"and {write_count(more)} more columns")


def show_remarks(read: FieldworkFile) -> None:
    """Show every repair with its rows."""
    if not read.remarks:
        layout.say("Nothing had to be repaired.")
        return
    items = "".join(
        f"<li>{as_html(remark.sentence)}</li>" for remark in read.remarks[:MOST_REMARKS]
    )
    st.html(f'<ul class="hw-list">{items}</ul>')
    if len(read.remarks) > MOST_REMARKS:
        layout.say(f"and {write_count(len(read.remarks) - MOST_REMARKS)} more remarks")


def show_another_reading(database: Database, file: StudyFile, read: FieldworkFile) -> None:
    """Offer every decision for change; the file itself stays as it came."""
    reading = read.reading
    with st.form("another_reading", border=False):
        first, second = st.columns(2)
        with first:
            encoding = _pick("Letters are written in", _ENCODINGS, reading.encoding)
            delimiter = _pick("Columns are parted by", _DELIMITERS, reading.delimiter)
        with second:
            mark = _pick("Numbers are written with a", _MARKS, reading.decimal_mark)
            heads = st.number_input(
                "Rows of column heads", 0, 3, reading.header_rows or 1, key="reading_heads"
            )
        if not st.form_submit_button("Read it this way"):
            return
    wanted = replace(
        reading,
        encoding=encoding,
        delimiter=delimiter,
        decimal_mark=mark,
        header_rows=int(heads or 0),
    )
    _read_this_way(database, file, wanted)


def _pick(label: str, words: dict[str, str], found: str | None) -> str:
    now = found or next(iter(words))
    options = list(words) if now in words else [now, *words]
    return str(
        st.selectbox(
            label,
            options,
            index=options.index(now),
            format_func=lambda value: words.get(value, value),
            key=f"reading_{label}",
        )
    )


def _read_this_way(database: Database, file: StudyFile, wanted: Reading) -> None:
    try:
        read_again(database, file, wanted)
    except (FieldworkFileError, StoreError) as error:
        layout.problem(str(error))
        return
    layout.later("The file was read again; questions and kept figures stay by column name.")
    st.rerun()
