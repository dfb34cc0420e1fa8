"""Nothing leaves the machine: every request of every screen goes to the server's own address."""

from __future__ import annotations

import pytest

from tests.support import browser_pages as pages

METHODS = (
    "everybody was invited, some answered",
    "whole groups were drawn first",
    "quotas or an online panel",
    "not sure",
    "drawn by chance from a list",
)
FIGURES = (
    "q=Q1&s=average",
    "q=Q1&s=share&a=7",
    "q=Q5&s=total",
    "q=Q5&s=median&endless=1",
    "q=Q7&s=share&a=Q7_1&g=REGION&ga=Westholm",
    "q=Q4&s=share&a=Yes&by=SIZE&dk=1",
)


@pytest.fixture(scope="module")
def visited(server, browser):
    """Go through every screen in all its states and return what was heard."""
    page, listener = pages.opened_page(browser, server.address)
    faults = []

    def visit(path: str, *parts: str) -> None:
        pages.go(page, f"{server.address}{path}")
        pages.open_expander(page, *parts)
        faults.extend(f"{path}: {fault}" for fault in pages.policy_faults(page))

    visit("/")
    study = f"?study={pages.open_sample(page, server.address)}"
    visit(f"/file{study}", "Read it another way", "A new delivery for this study")
    page.get_by_test_id("stDataFrame").locator("canvas").first.wait_for()
    visit(f"/questions{study}&show=all&q=Q7")
    visit(f"/questions{study}", "Text, kind, codes and order")
    pages.settle_questions(page)
    visit(f"/plan{study}", "Paste from a spreadsheet")
    for method in METHODS:
        page.get_by_text(method, exact=True).click()
        pages.idle(page)
    for figure in FIGURES:
        visit(f"/figure{study}&{figure}", "How this number came about", "Method")
        pages.click(page, "Keep for the readout")
    pages.click(page, "Copy the sentence")
    visit(f"/readouts{study}")
    link = pages.publish(page)
    faults.extend(pages.policy_faults(page))
    visit("/file")
    visit("/figure?study=unknown")
    return page, listener, faults, link


def test_every_request_goes_to_the_own_address(visited):
    _, listener, _, _ = visited
    assert listener.asked > 200  # the listener heard the front end load
    assert listener.foreign == []


def test_the_browser_has_nothing_to_complain_about(visited):
    _, listener, faults, _ = visited
    assert listener.complaints == []
    assert faults == []


def test_the_readout_page_asks_for_itself_and_its_style_only(visited, server, browser):
    link = visited[3]
    page, listener = pages.opened_page(browser, server.address)
    page.goto(link)
    for details in page.locator("details summary").all():
        details.click()
    page.wait_for_load_state("networkidle")
    assert listener.foreign == []
    assert listener.complaints == []
    assert pages.policy_faults(page) == []
    assert listener.asked <= 4
    page.context.close()


def test_a_page_that_is_not_there_asks_for_nothing_foreign(server, browser):
    page, listener = pages.opened_page(browser, server.address)
    assert page.goto(f"{server.address}/readout/{'x' * 30}").status == 404
    assert page.goto(f"{server.address}/nowhere").status == 404
    assert listener.foreign == []
    page.context.close()


def test_a_foreign_request_would_be_heard(server, browser):
    """The listener itself: a page that does ask elsewhere is found out, and stopped."""
    page, _ = pages.opened_page(browser, server.address)
    pages.go(page, f"{server.address}/")
    page.evaluate("() => { new Image().src = 'http://127.0.0.1:9/elsewhere.png'; }")
    pages.until(lambda: pages.policy_faults(page), "the policy stops it")
    assert any("127.0.0.1:9" in fault for fault in pages.policy_faults(page))
    page.context.close()
