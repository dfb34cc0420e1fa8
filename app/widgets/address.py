"""The address is the state: what a screen shows stands in its query string.

Reload, Back and a bookmark then work by themselves. Widgets take their value from the address on
every run and write it back when changed; links on the same screen are buttons that write it.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import streamlit as st


def read(name: str, default: str = "") -> str:
    """Return one value of the address."""
    return str(st.query_params.get(name, default))


def write(**values: str) -> None:
    """Write values into the address; an empty one takes the name out."""
    left = {k: v for k, v in st.query_params.to_dict().items() if k not in values}
    st.query_params.from_dict({**left, **{k: v for k, v in values.items() if v}})


def select(
    label: str,
    name: str,
    options: Sequence[str],
    default: str,
    *,
    words: Callable[[str], str] = str,
    hidden: bool = False,
    also: Callable[[str], dict[str, str]] | None = None,
) -> str:
    """Show a list to choose from, bound to the address.

    Parameters
    ----------
    label : str
        What is chosen.
    name : str
        Name in the address.
    options : sequence of str
        Values as they stand in the address.
    default : str
        Chosen when the address is silent or names something else.
    words : callable
        Value to words.
    hidden : bool
        True keeps the label for those who listen only.
    also : callable, optional
        Further values to write with a choice.
    """
    key = f"address_{name}"
    chosen = read(name, default)
    st.session_state[key] = chosen if chosen in options else default

    def changed() -> None:
        value = st.session_state[key]
        write(**{name: "" if value == default else value, **(also(value) if also else {})})

    return str(
        st.selectbox(
            label,
            options,
            key=key,
            format_func=words,
            on_change=changed,
            label_visibility="collapsed" if hidden else "visible",
        )
    )


def link(label: str, key: str, **values: str) -> None:
    """Show a link to another state of the same screen; the label is markup, escape it first."""
    st.button(label, key=key, type="tertiary", on_click=write, kwargs=values)
