"""The link of a readout: what it answers, and how its page behaves in a stranger's hands."""

from __future__ import annotations

import re
import urllib.error
import urllib.request
import zlib

import pytest

from tests.support import browser_pages as pages

HEADLINE = "Half of them stock peat-free compost"
FIGURES = ("q=Q4&s=share&a=Yes", "q=Q1&s=average", "q=Q5&s=total", "q=Q7&s=share&a=Q7_3")


@pytest.fixture(scope="module")
def published(server, browser):
    """A manager's page with four kept figures and the link of their readout."""
    page, _ = pages.opened_page(browser, server.address)
    study = pages.open_sample(page, server.address)
    pages.go(page, f"{server.address}/questions?study={study}")
    pages.settle_questions(page)
    for figure in FIGURES:
        pages.go(page, f"{server.address}/figure?study={study}&{figure}")
        pages.keep(page)
    pages.journey(page, "Readout")
    headline = page.get_by_label("1. Headline")
    headline.fill(HEADLINE)
    headline.blur()
    pages.idle(page)
    yield page, study, pages.publish(page)
    page.context.close()


def status(link: str) -> int:
    try:
        with urllib.request.urlopen(link, timeout=10) as answer:
            return answer.status
    except urllib.error.HTTPError as refusal:
        return refusal.code


def test_the_link_opens_and_another_one_does_not(published):
    link = published[2]
    assert status(link) == 200
    token = link.rsplit("/", 1)[1]
    assert status(link[: -len(token)] + token[::-1]) == 404


def test_the_link_is_shown_only_once(published):
    page, _, link = published
    page.reload()
    pages.idle(page)
    assert page.locator(".st-key-new_link_card").count() == 0
    assert link.rsplit("/", 1)[1] not in page.content()


def test_wrong_tries_are_slowed_and_the_right_link_still_opens(published):
    link = published[2]
    start = link.rsplit("/", 1)[0]
    answers = [status(f"{start}/{number:043d}") for number in range(14)]
    assert answers[0] == 404
    assert answers[-1] == 429
    assert set(answers) == {404, 429}
    assert status(link) == 200


def test_the_page_is_complete_without_script(published, server, browser):
    link = published[2]
    page, listener = pages.opened_page(browser, server.address, java_script_enabled=False)
    assert page.goto(link).status == 200
    with_script, _ = pages.opened_page(browser, server.address)
    with_script.goto(link)
    assert page.locator("main").inner_text() == with_script.locator("main").inner_text()
    assert page.get_by_role("heading", name=HEADLINE).is_visible()
    page.get_by_text("How sure are we?").first.click()
    assert page.locator("details svg").first.is_visible()
    assert listener.foreign == []
    page.context.close()
    with_script.context.close()


@pytest.mark.parametrize("window", [pages.WIDE, pages.PHONE], ids=["wide", "phone"])
def test_the_page_never_scrolls_sideways(published, server, browser, window):
    page, _ = pages.opened_page(browser, server.address, viewport=window)
    page.goto(published[2])
    for summary in page.locator("details summary").all():
        summary.click()
    assert not pages.scrolls_sideways(page)
    page.context.close()


SCREENS = ("file", "questions", "questions?show=all&q=Q7", "plan", "figure", "readouts")


@pytest.mark.parametrize("screen", ["", *SCREENS])
def test_no_screen_scrolls_sideways_on_a_phone(published, server, browser, screen):
    study = published[1]
    page, _ = pages.opened_page(browser, server.address, viewport=pages.PHONE)
    mark = "&" if "?" in screen else "?"
    pages.go(page, f"{server.address}/{screen}{mark}study={study}")
    assert not pages.scrolls_sideways(page)
    page.context.close()


def test_figures_of_every_kind_fit_a_phone(published, server, browser):
    page, _ = pages.opened_page(browser, server.address, viewport=pages.PHONE)
    for figure in FIGURES:
        pages.go(page, f"{server.address}/figure?study={published[1]}&{figure}")
        page.wait_for_selector(".st-key-fan .main-svg")
        assert not pages.scrolls_sideways(page), figure
    page.context.close()


def test_the_print_has_every_headline(published, server, browser):
    page, _ = pages.opened_page(browser, server.address)
    page.goto(published[2])
    page.emulate_media(media="print")
    headlines = page.locator("section h2").all()
    assert any(heading.inner_text().endswith(HEADLINE) for heading in headlines)
    assert all(heading.is_visible() for heading in headlines)
    assert page.locator("nav.contents").is_hidden()
    printed = page.pdf(format="A4", tagged=True, outline=True)
    assert HEADLINE in outline_of(printed)
    page.context.close()


def outline_of(printed: bytes) -> str:
    """Return the titles of a PDF's outline, which the browser makes from the headings."""
    found = [
        _title(raw)
        for raw in re.findall(rb"/Title\s*(\((?:\\.|[^\\)])*\)|<[0-9A-Fa-f]+>)", printed)
    ]
    for packed in re.findall(rb"stream\r?\n(.*?)endstream", printed, re.DOTALL):
        try:
            text = zlib.decompress(packed)
        except zlib.error:
            continue
        found += [
            _title(raw)
            for raw in re.findall(rb"/Title\s*(\((?:\\.|[^\\)])*\)|<[0-9A-Fa-f]+>)", text)
        ]
    return " | ".join(found)


def _title(raw: bytes) -> str:
    if raw.startswith(b"<"):
        return bytes.fromhex(raw[1:-1].decode()).decode("utf-16", "replace")
    return raw[1:-1].decode("latin-1")


def test_a_new_link_takes_the_old_one_away_and_revoking_ends_it(published):
    page, _, link = published
    pages.click(page, "New link", exact=True)
    newer = pages.text_of(page, ".st-key-new_link_card code")
    assert newer != link
    assert status(newer) == 200
    assert status(link) == 410
    pages.click(page, "Revoke", exact=True)
    assert status(newer) == 410
    assert page.get_by_text("is withdrawn: nobody can open it").first.is_visible()
    assert page.get_by_role("button", name="Revoke", exact=True).count() == 0
