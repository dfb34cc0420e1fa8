"""The server is killed between any two steps and started again: nothing confirmed is lost."""

from __future__ import annotations

import urllib.error
import urllib.request

import pytest

from tests.support import browser_pages as pages
from tests.support.running_server import running_server


class Mortal:
    """A server that can be killed and started again in place, and one page that outlives it."""

    def __init__(self, data, browser) -> None:
        self.data = data
        self.port = 0
        self.browser = browser
        self._begin()
        self.page, self.listener = pages.opened_page(browser, self.server.address)

    def _begin(self) -> None:
        self._running = running_server(self.data, port=self.port)
        self.server = self._running.__enter__()
        self.port = self.server.port

    def kill(self) -> None:
        """Kill it, start it on the same folder and port, and reload the page."""
        self.server.kill()
        self._running.__exit__(None, None, None)
        self._begin()
        self.page.reload()
        pages.idle(self.page)

    def end(self) -> None:
        self.page.context.close()
        self._running.__exit__(None, None, None)

    def status(self, link: str) -> int:
        try:
            with urllib.request.urlopen(link, timeout=10) as answer:
                return answer.status
        except urllib.error.HTTPError as refusal:
            return refusal.code


@pytest.fixture(scope="module")
def mortal(tmp_path_factory, browser):
    found = Mortal(tmp_path_factory.mktemp("data"), browser)
    yield found
    found.end()


FILE = (
    "shop,mood,region,visits\n"
    + "\n".join(
        f"{number:04d},{number * 7 % 11},{'North' if number % 3 else 'South'},"
        f"{99 if number % 40 == 0 else number % 8}"
        for number in range(1, 241)
    )
).encode()


def test_a_walk_with_a_kill_after_every_step(mortal):
    """One story in order: a step is confirmed, the server dies, the step is still there."""
    page = mortal.page
    an_uploaded_file(mortal, page)
    an_accepted_question(mortal, page)
    every_field_of_the_plan(mortal, page)
    a_kept_figure(mortal, page)
    a_headline(mortal, page)
    link = a_published_link(mortal, page)
    a_withdrawn_link(mortal, page, link)
    assert mortal.listener.foreign == []


def an_uploaded_file(mortal, page) -> None:
    pages.go(page, f"{mortal.server.address}/file")
    pages.upload(page, FILE, "shops.csv")
    first = pages.text_of(page, ".st-key-first_figure .hr-number")
    mortal.kill()
    page.wait_for_selector(".st-key-first_figure .hr-number")
    assert pages.text_of(page, ".st-key-first_figure .hr-number") == first


def an_accepted_question(mortal, page) -> None:
    pages.journey(page, "Questions")
    before = page.get_by_text("need you").first.inner_text()
    page.locator(".st-key-accept button").first.click()
    pages.until(
        lambda: page.get_by_text("need you").first.inner_text() != before, "one question fewer"
    )
    pages.idle(page)
    after = page.get_by_text("need you").first.inner_text()
    mortal.kill()
    assert page.get_by_text("need you").first.inner_text() == after
    pages.settle_questions(page)


TYPED = {
    "plan_universe": "all shops of the chain",
    "plan_unit_one": "shop",
    "plan_unit_many": "shops",
    "plan_size": "900",
    "plan_as_of": "1 May 2026",
    "plan_source": "the register",
}


def every_field_of_the_plan(mortal, page) -> None:
    pages.journey(page, "Sampling plan")
    fields = list(TYPED.items())
    for some in (fields[:3], fields[3:]):
        for key, text in some:
            pages.fill(page, key, text)
        mortal.kill()
        assert {key: pages.typed(page, key) for key, _ in some} == dict(some)
    page.get_by_text("drawn by chance from a list", exact=True).click()
    pages.idle(page)
    pages.choose(page, "plan_strata_column", "region · region")
    sizes = ["500", "400"]
    for number, size in enumerate(sizes):
        pages.fill(page, f"stratum_{number}_region", size)
    mortal.kill()
    assert page.get_by_role("radio", name="drawn by chance from a list").is_checked()
    assert [pages.typed(page, f"stratum_{number}_region") for number in (0, 1)] == sizes
    pages.click(page, "Confirm the plan")
    mortal.kill()
    assert page.get_by_text("Confirmed.").first.is_visible()
    assert {key: pages.typed(page, key) for key in TYPED} == TYPED


def a_kept_figure(mortal, page) -> None:
    pages.journey(page, "Figure")
    pages.choose(page, "address_q", "mood · mood")
    number = pages.text_of(page, "[data-figure=value]")
    pages.keep(page)
    mortal.kill()
    assert pages.text_of(page, "[data-figure=value]") == number
    assert page.get_by_text("Kept as figure 1 of the readout.").is_visible()


def a_headline(mortal, page) -> None:
    pages.journey(page, "Readout")
    headline = page.get_by_label("1. Headline")
    headline.fill("Moods are middling")
    headline.blur()
    pages.idle(page)
    comment = page.get_by_label("Comment, plain text")
    comment.fill("Asked in May.")
    comment.blur()
    pages.idle(page)
    mortal.kill()
    assert page.get_by_label("1. Headline").input_value() == "Moods are middling"
    assert page.get_by_label("Comment, plain text").input_value() == "Asked in May."


def a_published_link(mortal, page) -> str:
    link = pages.publish(page)
    assert mortal.status(link) == 200
    mortal.kill()
    assert mortal.status(link) == 200
    stranger, _ = pages.opened_page(mortal.browser, mortal.server.address)
    stranger.goto(link)
    (figure,) = pages.readout_figures(stranger)
    assert figure["headline"] == "1 Moods are middling"
    assert figure["comment"] == "Asked in May."
    stranger.context.close()
    return link


def a_withdrawn_link(mortal, page, link: str) -> None:
    pages.click(page, "Revoke", exact=True)
    assert mortal.status(link) == 410
    mortal.kill()
    assert mortal.status(link) == 410
    assert page.get_by_text("link withdrawn").first.is_visible()


def test_without_a_reload_the_open_page_goes_on_by_itself(mortal):
    """Streamlit connects again by itself; the next click works on what is stored."""
    page = mortal.page
    pages.journey(page, "Questions")
    mortal.server.kill()
    mortal._running.__exit__(None, None, None)
    mortal._begin()
    pages.idle(page)
    pages.journey(page, "Sampling plan")
    assert {key: pages.typed(page, key) for key in TYPED} == TYPED
