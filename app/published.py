"""What a readout link opens, from the store."""

from __future__ import annotations

import re
from datetime import UTC, datetime

from app.sharing.readout_answers import ReadoutAnswer
from app.sharing.readout_routes import FindPage
from app.sharing.readout_style import READOUT_STYLE
from app.sharing.style_sheets import STYLE_PREFIX
from app.store import Database

_STYLE_LINK = re.compile(re.escape(f'href="{STYLE_PREFIX}') + r'[0-9a-f]+\.css"')


def page_finder(database: Database) -> FindPage:
    """Return the function that answers for a link.

    Parameters
    ----------
    database : Database
        Asked from worker threads, once per opening.
    """

    def find_page(token_hash: str) -> ReadoutAnswer:
        status, html = database.find_by_token_hash(token_hash, datetime.now(UTC))
        return ReadoutAnswer(status.value, with_current_style(html))

    return find_page


def with_current_style(html: str) -> str:
    """Return a frozen page that names the style sheet served now; nothing else is changed."""
    return _STYLE_LINK.sub(f'href="{READOUT_STYLE.path}"', html, count=1)
