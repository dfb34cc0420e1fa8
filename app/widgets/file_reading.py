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
MOST_HEADS = 3
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
    reading, name = read.reading, f"{file.id}_{file.version}"
    draft = f"reading_draft_{file.id}"
    found = (reading.encoding, reading.delimiter, reading.decimal_mark, reading.header_rows)
    encoding, delimiter, mark, heads, sentence = st.session_state.get(draft, [*found, ""])
    with st.form(f"another_reading_{name}", border=False):
        first, second = st.columns(2)
        with first:
            _pick("Letters are written in", _ENCODINGS, encoding, f"encoding_{name}")
            _pick("Columns are parted by", _DELIMITERS, delimiter, f"delimiter_{name}")
        with second:
            _pick("Numbers are written with a", _MARKS, mark, f"mark_{name}")
            heads = 1 if heads is None else int(heads)
            key = f"heads_{name}"
            st.session_state.setdefault(key, heads)
            st.number_input("Rows of column heads", 0, max(MOST_HEADS, heads), key=key)
        st.form_submit_button(
            "Read it this way", on_click=_read_this_way, args=(database, file, reading, name)
        )
    if sentence:
        layout.problem(sentence)


def _pick(label: str, words: dict[str, str], found: str | None, key: str) -> None:
    now = found or next(iter(words))
    st.session_state.setdefault(key, now)
    options = list(words) if now in words else [now, *words]
    st.selectbox(label, options, format_func=lambda value: words.get(value, value), key=key)


def _read_this_way(database: Database, file: StudyFile, reading: Reading, name: str) -> None:
    """Read the file as the form says; a refused way stays in the form, with the reason."""
    parts = ("encoding", "delimiter", "mark", "heads")
    typed = [st.session_state[f"{part}_{name}"] for part in parts]
    draft = f"reading_draft_{file.id}"
    try:
        read_again(database, file, another_reading(reading, *typed))
    except (FieldworkFileError, StoreError) as error:
        st.session_state[draft] = [*typed, str(error)]
        return
    st.session_state.pop(draft, None)
    layout.later("The file was read again; questions and kept figures stay by column name.")


def another_reading(
    reading: Reading, encoding: str, delimiter: str, mark: str, heads: int | None
) -> Reading:
    """Return a reading with these decisions; those that rested on others are found out again."""
    heads = int(heads or 0)
    same_cells = (encoding, delimiter) == (reading.encoding, reading.delimiter)
    same_heads = same_cells and heads == reading.header_rows
    return replace(
        reading,
        encoding=encoding,
        delimiter=delimiter,
        quote=reading.quote if same_cells else None,
        escape=reading.escape if same_cells else None,
        lines_above=reading.lines_above if same_cells else None,
        left_out=reading.left_out if same_cells else (),
        decimal_mark=mark,
        thousands_mark=reading.thousands_mark if mark == reading.decimal_mark else None,
        header_rows=heads,
        name_row=reading.name_row if same_heads else None,
    )
