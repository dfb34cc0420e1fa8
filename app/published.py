"""What a readout link opens, from the store."""

from __future__ import annotations

from datetime import UTC, datetime

from app.sharing.readout_answers import ReadoutAnswer
from app.sharing.readout_routes import FindPage
from app.store import Database


def page_finder(database: Database) -> FindPage:
    """Return the function that answers for a link.

    Parameters
    ----------
    database : Database
        Asked from worker threads, once per opening.
    """

    def find_page(token_hash: str) -> ReadoutAnswer:
        status, html = database.find_by_token_hash(token_hash, datetime.now(UTC))
        return ReadoutAnswer(status.value, html)

    return find_page
