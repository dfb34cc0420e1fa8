"""Text from files and people is shown as typed: no markup, no picture, no request comes of it."""

from __future__ import annotations

import csv
from io import StringIO
from urllib.parse import quote

import pytest

from tests.support import browser_pages as pages

ELSEWHERE = "http://127.0.0.1:9"
SCALE = f"![s]({ELSEWHERE}/q.png) **score** :red[a]"
CHOICE = f"<img src={ELSEWHERE}/c.png> $x^2$ `c`"
GROUP = "[group](javascript:1) :material/home:"
RIGHT_TO_LEFT = "\u05e9\u05dc\u05d5\u05dd \u05e2\u05d5\u05dc\u05dd"
LABELS = (
    f"<b>bold</b> {ELSEWHERE}/l1",
    "[x](javascript:1) & more",
    "# head *it* _it_ ~~gone~~",
    RIGHT_TO_LEFT,
)
GROUPS = ("<script>window.hit = 1</script>", ":material/home: :smile:", "$y$ | a | b |")
STUDY = "**S** <i>x</i> $z$ [n](javascript:1)"
UNIT = f"<u>shops</u> ![p]({ELSEWHERE}/u.png)"
HEADLINE = f"**Half** <img src={ELSEWHERE}/h.png onerror=hit()>"
COMMENT = f"[read](javascript:1) <a href={ELSEWHERE}>here</a> $$e$$ {RIGHT_TO_LEFT}"
TITLE = "<script>window.hit = 2</script> *title*"


def make_file() -> bytes:
    out = StringIO()
    writer = csv.writer(out)
    writer.writerow(["id", SCALE, CHOICE, GROUP])
    for number in range(240):
        writer.writerow(
            [f"{number:04d}", number * 7 % 11, LABELS[number * 5 % 7 % 4], GROUPS[number % 3]]
        )
    return out.getvalue().encode()


class Screens:
    """A page on a study full of such text, and everything it was heard to ask for."""

    def __init__(self, server, browser) -> None:
        self.server = server
        self.page, self.listener = pages.opened_page(browser, server.address)
        pages.go(self.page, f"{server.address}/file")
        # The study is named after the file.
        chooser = self.page.locator("input[type=file]").first
        name = STUDY.replace("/", "\u2215") + ".csv"
        chooser.set_input_files([{"name": name, "mimeType": "text/csv", "buffer": make_file()}])
        self.page.wait_for_url("**/file?study=*")
        pages.idle(self.page)
        self.study = pages.study_in(self.page.url)

    def open(self, path: str) -> None:
        mark = "&" if "?" in path else "?"
        pages.go(self.page, f"{self.server.address}/{path}{mark}study={self.study}")

    def text(self) -> str:
        """All a person can read, fields included, without the marks that undo addresses."""
        fields = self.page.locator("input, textarea").evaluate_all("all => all.map(e => e.value)")
        words = [self.page.locator("body").inner_text(), *fields]
        return pages.plain(" ".join(words).replace("\u2060", ""))


@pytest.fixture(scope="module")
def screens(server, browser):
    found = Screens(server, browser)
    yield found
    found.page.context.close()


TRACES = f"""() => ({{
  pictures: document.querySelectorAll('img[src*="{ELSEWHERE}"], image').length,
  links: [...document.querySelectorAll('a')].map(a => a.getAttribute('href') || '').filter(
    h => h.startsWith('javascript') || h.includes('127.0.0.1:9') || h.startsWith('mailto')),
  formulas: document.querySelectorAll('.katex').length,
  scripts: window.hit || 0,
  emphasis: [...document.querySelectorAll('main b, main i, main u, main em, main del, main code')]
    .map(e => e.textContent).filter(t => ['bold', 'x', 'shops', 'it', 'gone', 'c'].includes(t)),
  icons: [...document.querySelectorAll('[data-testid=stIconMaterial]')]
    .filter(icon => icon.textContent === 'home').length,
}})"""
CLEAN = {
    "pictures": 0,
    "links": [],
    "formulas": 0,
    "scripts": 0,
    "emphasis": [],
    "icons": 0,
}


def check(screens: Screens, *texts: str) -> None:
    """The screen shows these texts letter by letter, and nothing came of any of them."""
    shown = screens.text()
    for text in texts:
        assert pages.plain(text) in shown, f"{text!r} is not on {screens.page.url}"
    assert screens.page.evaluate(TRACES) == CLEAN
    assert pages.policy_faults(screens.page) == []
    assert screens.listener.foreign == []


def test_the_file_screen(screens):
    check(screens, SCALE)


def test_questions(screens):
    screens.open("questions?show=all")
    check(screens, SCALE, CHOICE, GROUP)
    for question, answers in ((CHOICE, LABELS), (GROUP, GROUPS)):
        screens.open(f"questions?show=all&q={quote(question)}")
        pages.open_expander(screens.page, "Text, kind, codes and order")
        check(screens, question, *answers)


def test_the_plan(screens):
    screens.open("plan")
    pages.fill(screens.page, "plan_unit_one", UNIT)
    pages.fill(screens.page, "plan_unit_many", UNIT)
    pages.fill(screens.page, "plan_universe", COMMENT)
    screens.page.get_by_text("drawn by chance from a list", exact=True).click()
    pages.idle(screens.page)
    pages.choose(screens.page, "plan_strata_column", f"{GROUP} · {GROUP}")
    check(screens, UNIT, COMMENT, *GROUPS)
    pages.open_expander(screens.page, "Paste from a spreadsheet")
    screens.page.get_by_label("One stratum a line").fill(f"{GROUPS[0]}\t500\n{LABELS[0]}\t4\n")
    screens.page.get_by_label("One stratum a line").blur()
    pages.idle(screens.page)
    check(screens, GROUPS[0], LABELS[0])
    for number in range(3):
        field = screens.page.locator(f"[class*=st-key-stratum_{number}_] input").first
        field.fill("<b>5</b>" if number == 2 else "500")
        field.blur()
        pages.idle(screens.page)
    check(screens, "“<b>5</b>” is no whole number")
    field.fill("500")
    field.blur()
    pages.idle(screens.page)
    pages.click(screens.page, "Confirm the plan")


def test_the_figure(screens):
    screens.open("figure")
    pages.choose(screens.page, "address_q", f"{CHOICE} · {CHOICE}")
    screens.page.wait_for_selector(".st-key-fan .main-svg")
    parts = ("How this number came about", "Numbers as a table", "Method")
    pages.open_expander(screens.page, *parts)
    check(screens, CHOICE, UNIT, *LABELS)
    pages.keep(screens.page)
    pages.click(screens.page, "Copy the sentence")
    check(screens, UNIT)
    screens.page.keyboard.press("Escape")
    pages.choose(screens.page, "address_q", f"{SCALE} · {SCALE}")
    screens.page.wait_for_selector(".st-key-fan .main-svg")
    check(screens, SCALE, UNIT, *GROUPS)
    pages.keep(screens.page)


def test_the_readout_screen_and_the_page_behind_its_link(screens, browser):
    screens.open("readouts")
    for label, text in (("1. Headline", HEADLINE), ("Comment, plain text", COMMENT)):
        field = screens.page.get_by_label(label).first
        field.fill(text)
        field.blur()
        pages.idle(screens.page)
    check(screens, HEADLINE, COMMENT, UNIT)
    link = pages.publish(screens.page, TITLE)
    check(screens, TITLE)
    stranger, listener = pages.opened_page(browser, screens.server.address)
    stranger.goto(link)
    for summary in stranger.locator("details summary").all():
        summary.click()
    shown = pages.plain(stranger.locator("body").inner_text())
    for text in (TITLE, HEADLINE, COMMENT, CHOICE, SCALE, UNIT, *GROUPS):
        assert pages.plain(text) in shown, text
    assert stranger.title().startswith(TITLE)
    assert stranger.evaluate(TRACES) == CLEAN
    assert pages.policy_faults(stranger) == []
    assert listener.foreign == []
    assert listener.complaints == []
    stranger.context.close()


def test_the_list_of_studies(screens):
    screens.open("")
    check(screens, STUDY.replace("/", "\u2215"))
    pages.click(screens.page, "Duplicate")
    check(screens, f"{STUDY} (copy) is there".replace("/", "\u2215"))
    pages.click(screens.page, "Rename")
    name = screens.page.get_by_label("Name of the study")
    name.fill(HEADLINE)
    name.blur()
    pages.idle(screens.page)
    pages.click(screens.page, "Done")
    check(screens, HEADLINE)
