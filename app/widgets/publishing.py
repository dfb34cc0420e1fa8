"""Publishing: freeze the kept figures, make a link, show it once, withdraw it."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta

import streamlit as st

from app.sharing.frozen_readouts import Draft, freeze, moment_words
from app.sharing.link_tokens import hash_token, make_token
from app.sharing.readout_page import render_page
from app.sharing.readout_style import READOUT_STYLE
from app.store import Database, StoreError
from app.study.records import to_json
from app.study.study import KeptFigure, Readout
from app.study.study_data import StudyData
from app.widgets import layout
from app.widgets.cached_work import page_as_file
from app.widgets.plain_text import as_html
from estimators import METHODS_VERSION

DAYS = {"7": "7 days", "30": "30 days", "90": "90 days", "0": "no end"}


def show_publish(database: Database, data: StudyData, kept: tuple[KeptFigure, ...]) -> None:
    """Show title, expiry and the button that publishes."""
    st.text_input("Title of the readout", data.study.name, key="readout_title", max_chars=120)
    st.selectbox(
        "The link opens for", list(DAYS), index=1, format_func=DAYS.__getitem__, key="link_days"
    )
    st.button(
        "Publish",
        type="primary",
        key="publish",
        on_click=publish,
        args=(database, data, kept),
    )


def publish(database: Database, data: StudyData, shown: tuple[KeptFigure, ...]) -> None:
    """Freeze and keep the readout; the link is put aside to be shown once.

    Title and days are read from their fields: a click may come with a title typed just before.
    """
    try:
        title = " ".join(str(st.session_state["readout_title"]).split())
        kept = _as_shown(database, data, shown)
        days = int(st.session_state["link_days"])
        link = _freeze(database, data, kept, title or data.study.name, days)
    except (ValueError, StoreError) as error:
        layout.later(f"Nothing was published. {error}")
        return
    st.session_state["new_link"] = link


def _as_shown(
    database: Database, data: StudyData, shown: tuple[KeptFigure, ...]
) -> tuple[KeptFigure, ...]:
    """Return the kept figures with their words as stored now.

    Raises
    ------
    ValueError
        When another window changed what the figures are or rest on.
    """
    study_id = data.study.id
    kept = database.kept_figures(study_id)
    same = (
        [(k.id, k.request) for k in kept] == [(k.id, k.request) for k in shown]
        and database.plan(study_id).plan == data.plan
        and database.questions(study_id) == data.questions
        and database.study(study_id).version == data.study.version
    )
    if not same:
        raise ValueError(
            "The figures, the questions or the plan were changed in another window: look at them "
            "again, then publish."
        )
    return kept


def _freeze(
    database: Database, data: StudyData, kept: tuple[KeptFigure, ...], title: str, days: int
) -> list[str]:
    """Keep the readout and return its id and the token of its link."""
    now = datetime.now(UTC)
    token = make_token()

    def make(number: int) -> tuple[str, str]:
        frozen = freeze(data, kept, Draft(title, number, now))
        return to_json(frozen), render_page(frozen, style_href=READOUT_STYLE.path)

    readout = database.publish(
        data.study.id,
        make,
        title=title,
        methods_version=METHODS_VERSION,
        token_hash=hash_token(token),
        expires_at=now + timedelta(days=days) if days else None,
    )
    return [readout.id, token]


def show_new_link(readouts: tuple[Readout, ...]) -> None:
    """Show a new link once; the next action on the screen takes it away."""
    readout_id, token = st.session_state.pop("new_link", ["", ""])
    readout = next((r for r in readouts if r.id == readout_id), None)
    if readout is None:
        return
    with st.container(border=True, key="new_link_card"):
        st.html(
            f'<p class="hr-sentence">Readout {readout.number} is published. This is its link; it '
            "is shown only now, because only its fingerprint is kept.</p>"
        )
        st.code(f"{_origin()}/readout/{token}", language=None, wrap_lines=True)
        st.html(
            '<p class="hr-soft">This link opens only on this computer. To send the readout, take '
            "the file below.</p>"
        )


def _origin() -> str:
    address = str(st.context.url or "http://127.0.0.1:8501")
    scheme, _, rest = address.partition("://")
    return f"{scheme}://{rest.partition('/')[0]}"


def show_published(database: Database, readouts: tuple[Readout, ...]) -> None:
    """Show every published readout with what its link does now."""
    for readout in readouts:
        with st.container(border=True, key=f"readout_{readout.id}"):
            left, right = st.columns([3, 2], vertical_alignment="center")
            with left:
                st.html(
                    f'<p class="hw-tight"><b>Readout {readout.number}</b> '
                    f"{as_html(readout.title)}</p>"
                    f'<p class="hr-soft hw-tight">frozen {moment_words(readout.published_at)} '
                    f"\u00b7 {as_html(_link_words(readout))}</p>"
                )
            with right, st.container(horizontal=True, horizontal_alignment="right"):
                _show_actions(database, readout)


def _link_words(readout: Readout) -> str:
    now = datetime.now(UTC)
    if readout.revoked_at is not None:
        return f"link withdrawn {moment_words(readout.revoked_at)}"
    if readout.expires_at is None:
        return "link open without end"
    verb = "expired" if readout.expires_at <= now else "opens until"
    return f"link {verb} {moment_words(readout.expires_at)}"


def _show_actions(database: Database, readout: Readout) -> None:
    page = page_as_file(readout.frozen)
    st.download_button(
        "Page as a file",
        page.encode(),
        file_name=f"readout-{readout.number}-{readout.id[:8]}.html",
        mime="text/html",
        key=f"file_{readout.id}",
        on_click="ignore",
        help="For e-mail. A file cannot expire or be withdrawn.",
    )
    st.button(
        "New link",
        key=f"link_{readout.id}",
        on_click=_new_link,
        args=(database, readout),
        help="The link before it stops to open.",
    )
    if readout.revoked_at is None:
        st.button(
            "Revoke",
            key=f"revoke_{readout.id}",
            on_click=_revoke,
            args=(database, readout),
            help="Nobody can open it from now on; copies and files remain.",
        )


def _new_link(database: Database, readout: Readout) -> None:
    token = make_token()
    until = datetime.now(UTC) + timedelta(days=30)
    if layout.attempt(database.replace_link, readout.id, hash_token(token), until):
        st.session_state["new_link"] = [readout.id, token]


def _revoke(database: Database, readout: Readout) -> None:
    if layout.attempt(database.revoke_readout, readout.id):
        layout.later(
            f"The link of readout {readout.number} is withdrawn: nobody can open it from now on. "
            "Copies and files remain."
        )
