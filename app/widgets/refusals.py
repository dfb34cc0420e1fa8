"""What was typed and could not be kept stays in its field, with the reason under it."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import streamlit as st

from app.widgets import address, layout


def refuse(key: str, typed: str, sentence: str, *, stale: bool = False) -> None:
    """Remember what was typed and why it was not kept.

    Parameters
    ----------
    key : str
        Of the field.
    typed : str
        What stands in it.
    sentence : str
        Why it was not kept and what to do.
    stale : bool
        True when the text is right but somebody else wrote first: it can be kept all the same.
    """
    st.session_state[_name(key)] = [typed, sentence, stale]


def forget(key: str) -> None:
    """Forget what was refused: the field shows what is stored."""
    st.session_state.pop(_name(key), None)


def is_refused(key: str) -> bool:
    """Whether something that was not kept stands in a field."""
    return _name(key) in st.session_state


def fill(key: str, stored: str) -> None:
    """Put the stored value into a field, or what was typed and refused."""
    refused = st.session_state.get(_name(key))
    st.session_state[key] = refused[0] if refused else stored


def show_refusal(key: str, again: Callable[..., None], arguments: Sequence[object]) -> None:
    """Say why what stands in a field was not kept, and offer the ways on.

    Parameters
    ----------
    key : str
        Of the field.
    again, arguments
        Keeps what stands in the field; the callback of the field itself.
    """
    _, sentence, stale = st.session_state.get(_name(key), ["", "", False])
    if not sentence:
        return
    layout.problem(sentence)
    if stale:
        with st.container(horizontal=True):
            st.button("Save mine", key=f"again_{key}", on_click=again, args=tuple(arguments))
            st.button("Take what is stored", key=f"drop_{key}", on_click=forget, args=(key,))


def _name(key: str) -> str:
    """Return where it is remembered: fields of two studies carry the same key."""
    return f"refused_{address.read('study')}_{key}"
