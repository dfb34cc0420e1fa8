"""The width limit of the house, changed in a small form."""

from __future__ import annotations

import re
from dataclasses import replace

import streamlit as st

from app.store import Database, StoreError
from app.study.count_text import read_count
from app.study.number_format import write_count, write_plain
from app.study.study import HouseLimit, Study
from app.widgets import layout

_NUMBER = re.compile(r"(\d{1,6}(?:[.,]\d{1,6})?)\s*%?")
_BASE = "Fewest answers"
_FIELDS = {  # name, what is typed, largest, stored as a part of one
    "share_points": ("Shares: \u00b1 points", 50, 1),
    "scale_part": ("Averages on a scale: \u00b1 % of the scale", 50, 100),
    "number_part": ("Other figures: \u00b1 % of their value", 100, 100),
    "note_part": ("With a note from: % of the limit", 100, 100),
}


def show_limit_form(database: Database, study: Study) -> None:
    """Show the limit of the house; nothing is kept until every field is understood."""
    name = f"{study.id}_{study.version}"
    draft = f"limit_draft_{study.id}"
    *typed, sentence = st.session_state.get(draft, [*_as_stored(study), ""])
    labels = [*(label for label, _, _ in _FIELDS.values()), _BASE]
    st.markdown("**House limit: figures wider than this are held back**")
    with st.form(f"limit_{name}", border=False):
        for column, field, label, value in zip(
            st.columns(len(labels), vertical_alignment="bottom"),
            _keys(name),
            labels,
            typed,
            strict=True,
        ):
            st.session_state.setdefault(field, value)
            with column:
                st.text_input(label, key=field, max_chars=20)
        st.form_submit_button("Change the limit", on_click=_save, args=(database, study, name))
    if sentence:
        layout.problem(sentence)
        st.button(
            "Take the stored limit", key="drop_limit", on_click=_drop, args=(draft, _keys(name))
        )


def edited_limit(limit: HouseLimit, typed: dict[str, str]) -> HouseLimit:
    """Return the limit as typed.

    Parameters
    ----------
    limit : HouseLimit
        As stored.
    typed : dict of str to str
        Field of the limit to what stands in its field; percentages without or with their sign.

    Raises
    ------
    ValueError
        With one sentence that names the field, what stands there and what to do.
    """
    numbers = {
        field: _number(typed[field], label, most) / part
        for field, (label, most, part) in _FIELDS.items()
    }
    base = read_count(typed["smallest_base"], _BASE)
    if base is None:
        raise ValueError(f"{_BASE}: type a whole number such as 30.")
    return replace(limit, **numbers, smallest_base=base)


def _number(text: str, label: str, most: int) -> float:
    found = _NUMBER.fullmatch(text.strip())
    if found is None:
        raise ValueError(
            f"{label}: \u201c{text.strip()[:40]}\u201d is no number; type it like 10 or 7.5."
        )
    number = float(found[1].replace(",", "."))
    if not 0 < number <= most:
        raise ValueError(f"{label}: it must be above 0 and at most {most}.")
    return number


def _as_stored(study: Study) -> tuple[str, ...]:
    limit, mark = study.limit, study.decimal_mark
    parts = (getattr(limit, field) * part for field, (_, _, part) in _FIELDS.items())
    return (
        *(write_plain(round(part, 6), mark) for part in parts),
        write_count(limit.smallest_base, mark),
    )


def _keys(name: str) -> tuple[str, ...]:
    return tuple(f"limit_{field}_{name}" for field in (*_FIELDS, "smallest_base"))


def _save(database: Database, study: Study, name: str) -> None:
    typed = [str(st.session_state[key]) for key in _keys(name)]
    draft = f"limit_draft_{study.id}"
    fields = dict(zip((*_FIELDS, "smallest_base"), typed, strict=True))
    try:
        limit = edited_limit(study.limit, fields)
        if limit != study.limit:
            database.save_study(replace(study, limit=limit))
    except (ValueError, StoreError) as error:
        st.session_state[draft] = [*typed, str(error)]
    else:
        st.session_state.pop(draft, None)


def _drop(draft: str, keys: tuple[str, ...]) -> None:
    for key in (draft, *keys):
        st.session_state.pop(key, None)
