"""A frozen page opens with the style sheet served now, and is otherwise left alone."""

from __future__ import annotations

from datetime import UTC, datetime

from app.published import page_finder, with_current_style
from app.sharing.readout_style import READOUT_STYLE
from app.sharing.style_sheets import STYLE_PREFIX

OLD = f'<link rel="stylesheet" href="{STYLE_PREFIX}0123abcd.css">'


def test_the_style_sheet_of_today_takes_the_place_of_an_older_one():
    page = f"<head>{OLD}</head><p>{STYLE_PREFIX}0123abcd.css</p>"
    now = with_current_style(page)
    assert f'href="{READOUT_STYLE.path}"' in now
    assert now.replace(READOUT_STYLE.path, f"{STYLE_PREFIX}0123abcd.css") == page


def test_only_the_first_link_is_touched():
    page = OLD + OLD
    assert with_current_style(page).endswith(OLD)


def test_a_page_that_carries_its_style_stays_as_it_is():
    assert with_current_style("<style>p{}</style>") == "<style>p{}</style>"
    assert with_current_style("") == ""


class StoreDouble:
    """Answers for one link and remembers when it was asked."""

    def __init__(self, status, html):
        self.status, self.html, self.asked = status, html, []

    def find_by_token_hash(self, token_hash, now):
        self.asked.append((token_hash, now))
        return self.status, self.html


def test_the_store_is_asked_once_with_the_moment():
    from app.study.study import LinkStatus

    store = StoreDouble(LinkStatus.LIVE, OLD)
    answer = page_finder(store)("hash")
    assert answer.status == "live"
    assert READOUT_STYLE.path in answer.html
    ((token_hash, now),) = store.asked
    assert token_hash == "hash"
    assert now.tzinfo is UTC and now <= datetime.now(UTC)
