"""A real browser on the screens: started, listened to, and driven without guessing at times."""

from __future__ import annotations

import re
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field

from playwright.sync_api import Browser, BrowserContext, ConsoleMessage, Page, sync_playwright

from tests.conftest import browser_path

ARGUMENTS = (
    "--no-sandbox",
    "--disable-gpu",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
)
PATIENCE = 15.0
WIDE = {"width": 1440, "height": 1000}
PHONE = {"width": 390, "height": 844}
_STEADY = 0.12  # seconds a page has to stay at rest

# Streamlit looks for its server beside a deep link first, then one folder up.
_KNOWN_PROBES = re.compile(r"/[^/]+/_stcore/(health|host-config)$")
# The grid asks once whether it may compile WebAssembly, and does without.
_WASM_PROBE = re.compile(r"wasm|WebAssembly", re.IGNORECASE)

_AT_REST = """() => {
  const app = document.querySelector('[data-testid=stApp]');
  return !!app && app.dataset.testScriptState === 'notRunning'
    && app.dataset.testConnectionState === 'CONNECTED'
    && !document.querySelector('[data-testid=stSkeleton]')
    && !document.querySelector('[data-stale=true]');
}"""

_READ_READOUT = """() => [...document.querySelectorAll('main section.figure')]
  .map(section => {
    const text = name => section.querySelector(name)?.textContent || '';
    const words = cell => [...cell.childNodes].filter(node => node.nodeName !== 'SUP')
      .map(node => node.textContent).join('');
    const cells = row => Object.fromEntries(
      [...row.children].map(cell => [cell.className.split(' ')[0], words(cell)]));
    return {
      headline: text('h2'), sentence: text('.sentence'), comment: text('.comment'),
      base: text('caption'), head: text('th.value'),
      rows: [...section.querySelectorAll('tbody tr')].map(cells),
    };
  })"""

_WATCH_POLICY = """
window.policyFaults = [];
document.addEventListener('securitypolicyviolation', event => window.policyFaults.push(
  `${event.effectiveDirective} ${event.blockedURI} ${event.sample}`));
"""


@contextmanager
def started_browser() -> Iterator[Browser]:
    """Start the browser of this machine and close it afterwards."""
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=browser_path(), args=[*ARGUMENTS])
        try:
            yield browser
        finally:
            browser.close()


@dataclass
class Listener:
    """Everything the pages of one context asked for, and every complaint of the browser.

    Parameters
    ----------
    address : str
        The server's own address; everything else is foreign.
    """

    address: str
    foreign: list[str] = field(default_factory=list)
    complaints: list[str] = field(default_factory=list)
    asked: int = 0

    def attach(self, context: BrowserContext) -> None:
        """Listen from the first request on."""
        context.add_init_script(_WATCH_POLICY)
        context.on("request", lambda request: self._take_address(request.url))
        context.on("page", self._attach_page)
        context.on("console", self._take_console)
        context.on("weberror", lambda error: self.complaints.append(f"script: {error.error}"))

    def _attach_page(self, page: Page) -> None:
        page.on("websocket", lambda socket: self._take_address(socket.url))

    def _take_address(self, url: str) -> None:
        self.asked += 1
        own = (self.address, self.address.replace("http", "ws", 1))
        is_own = any(url == start or url.startswith(f"{start}/") for start in own)
        if not (is_own or url.startswith(("data:", f"blob:{self.address}", "about:"))):
            self.foreign.append(url)

    def _take_console(self, message: ConsoleMessage) -> None:
        if message.type not in ("error", "warning"):
            return
        probe = _KNOWN_PROBES.search(message.location.get("url", ""))
        if probe and "404" in message.text:
            return
        if message.type == "warning" and "Content Security" not in message.text:
            return
        if not _WASM_PROBE.search(message.text):
            self.complaints.append(f"{message.text} at {message.location.get('url')}")


def policy_faults(page: Page) -> list[str]:
    """Return what the content security policy had to stop on this page, the probe apart."""
    faults = page.evaluate("() => window.policyFaults || []")
    return [fault for fault in faults if not _WASM_PROBE.search(fault)]


def opened_page(browser: Browser, address: str, **options: object) -> tuple[Page, Listener]:
    """Open an empty page in a context of its own: no cookies, nothing stored, listened to."""
    options.setdefault("viewport", WIDE)
    context = browser.new_context(**options)
    context.set_default_timeout(PATIENCE * 1000)
    listener = Listener(address)
    listener.attach(context)
    return context.new_page(), listener


def until(met: Callable[[], object], what: str, patience: float = PATIENCE) -> object:
    """Wait until something holds, and return it."""
    deadline = time.monotonic() + patience
    while time.monotonic() < deadline:
        found = met()
        if found:
            return found
        time.sleep(0.03)
    raise AssertionError(f"waited {patience:.0f} s in vain: {what}")


def idle(page: Page) -> None:
    """Wait until the screen is drawn and at rest, and stays so for a moment."""

    def rests() -> bool:
        if not page.evaluate(_AT_REST):
            return False
        time.sleep(_STEADY)
        return bool(page.evaluate(_AT_REST))

    until(rests, f"{page.url} at rest")


def go(page: Page, url: str) -> None:
    """Open an address of a screen and wait until it is at rest."""
    page.goto(url)
    idle(page)


def click(page: Page, name: str, *, role: str = "button", exact: bool = False) -> None:
    """Click what carries a name and wait until the screen is at rest."""
    page.get_by_role(role, name=name, exact=exact).first.click()
    idle(page)


def choose(page: Page, key: str, option: str) -> None:
    """Choose an option of the list whose widget carries a key."""
    field_of = page.locator(f".st-key-{key} input")
    field_of.click()
    field_of.fill(option)
    page.get_by_role("option", name=option, exact=True).click()
    idle(page)


def choose_answers(page: Page, *wanted: str) -> None:
    """Count these answers together on the Figure screen, and no others."""
    box = page.locator(".st-key-address_answers")
    there = box.locator("[data-tag]").evaluate_all("tags => tags.map(tag => tag.ariaLabel)")
    for answer in wanted:
        if answer not in there:
            box.locator("input").click()
            page.get_by_role("option", name=answer, exact=True).click()
            page.keyboard.press("Escape")
            idle(page)
    for answer in {*there} - {*wanted}:
        box.get_by_role("button", name=f"Remove {answer}", exact=True).first.click()
        idle(page)


def fill(page: Page, key: str, text: str) -> None:
    """Type into the field whose widget carries a key, and leave it."""
    entry = page.locator(f".st-key-{key} input, .st-key-{key} textarea").first
    entry.fill(text)
    entry.blur()
    idle(page)


def typed(page: Page, key: str) -> str:
    """Return what stands in a field."""
    return page.locator(f".st-key-{key} input, .st-key-{key} textarea").first.input_value()


def open_expander(page: Page, *names: str) -> None:
    """Open parts that are folded away; they may be open already."""
    for name in names:
        part = page.locator("details").filter(has=page.locator("summary", has_text=name)).first
        if part.get_attribute("open") is None:
            part.locator("summary").click()
    idle(page)


def text_of(page: Page, selector: str) -> str:
    """Return the text of the first match, with plain spaces."""
    return plain(page.locator(selector).first.inner_text())


def plain(text: str) -> str:
    """Return text with every run of spaces, no-break ones too, as one plain space."""
    return " ".join(text.split())


def table_rows(page: Page, caption: str) -> list[list[str]]:
    """Return the cells of a table, by its caption, head row left out."""
    table = page.locator("table").filter(has=page.locator("caption", has_text=caption)).first
    rows = table.locator("tbody tr").evaluate_all(
        "rows => rows.map(row => [...row.children].map(cell => cell.textContent))"
    )
    return [[plain(cell) for cell in row] for row in rows]


def scrolls_sideways(page: Page) -> bool:
    """Whether the page is wider than its window."""
    return bool(
        page.evaluate(
            """() => {
              const inner = document.querySelector('[data-testid=stMain]') || document.body;
              const all = [document.documentElement, inner];
              return all.some(e => e.scrollWidth > e.clientWidth + 1);
            }"""
        )
    )


def open_sample(page: Page, address: str) -> str:
    """Open the sample study from the first screen and return its id."""
    go(page, f"{address}/")
    page.get_by_role("button", name="Open the sample study").click()
    page.wait_for_url("**/figure?study=*")
    page.wait_for_selector("[data-figure=value]")
    idle(page)
    return study_in(page.url)


def study_in(url: str) -> str:
    """Return the study an address names."""
    found = re.search(r"[?&]study=([0-9a-zA-Z_-]+)", url)
    assert found, f"{url} names no study"
    return found[1]


def settle_questions(page: Page) -> int:
    """Accept every proposal on the Questions screen and return how many there were."""
    accept = page.locator(".st-key-accept button")
    accepted = 0
    while accept.count():
        accept.first.click()
        idle(page)
        accepted += 1
        assert accepted < 200, "the questions never come to an end"
    return accepted


def publish(page: Page, title: str = "") -> str:
    """Publish the kept figures from the Readout screen and return the link."""
    if title:
        fill(page, "readout_title", title)
    click(page, "Publish", exact=True)
    return text_of(page, ".st-key-new_link_card code")


def readout_figures(page: Page) -> list[dict[str, object]]:
    """Return what a readout page prints, figure by figure, with plain spaces."""
    return [_plain_all(figure) for figure in page.evaluate(_READ_READOUT)]


def _plain_all(thing: object) -> object:
    if isinstance(thing, str):
        return plain(thing)
    if isinstance(thing, list):
        return [_plain_all(part) for part in thing]
    if isinstance(thing, dict):
        return {name: _plain_all(part) for name, part in thing.items()}
    return thing


def upload(page: Page, data: bytes, file_name: str) -> None:
    """Drop a file on the Fieldwork file screen and wait for what it becomes."""
    chooser = page.locator("input[type=file]").first
    chooser.set_input_files([{"name": file_name, "mimeType": "text/csv", "buffer": data}])
    page.wait_for_url("**/file?study=*")
    page.wait_for_selector(".st-key-first_figure .hr-number")
    idle(page)


def journey(page: Page, name: str) -> None:
    """Go to another screen of the open study by its link."""
    page.locator(".st-key-journey").get_by_role("link", name=name).click()
    idle(page)


def keep(page: Page) -> None:
    """Keep the figure on the Figure screen and wait until it says so."""
    click(page, "Keep for the readout")
    page.get_by_text("of the readout.").first.wait_for()
