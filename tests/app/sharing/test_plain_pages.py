from __future__ import annotations

from app.sharing.plain_pages import page_not_found, plain_page, too_many_tries
from app.sharing.style_sheets import StyleSheet


def test_text_is_shown_as_text():
    page = plain_page("<b>bold</b>", 'a "quote" & <script>')
    assert "&lt;b&gt;bold&lt;/b&gt;" in page
    assert "<script" not in page
    assert "<b>" not in page


def test_the_wait_is_in_plain_english():
    assert "wait 1 second before" in too_many_tries(1)
    assert "wait 2 seconds before" in too_many_tries(2)


def test_an_address_that_leads_nowhere_offers_the_way_back():
    assert '<a href="/">' in page_not_found()


def test_the_path_of_a_style_sheet_changes_with_its_text():
    assert StyleSheet("a").path == StyleSheet("a").path != StyleSheet("b").path
