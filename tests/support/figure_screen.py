"""What the Figure screen prints, read as one value."""

from __future__ import annotations

from dataclasses import dataclass

from playwright.sync_api import Page

from tests.support.browser_pages import open_expander, plain, table_rows, text_of

_RAILS = """() => [...document.querySelectorAll('[class*=st-key-rail_row_]')].map(row => ({
  label: row.querySelector('button').textContent,
  picture: row.querySelector('[role=img]')?.getAttribute('aria-label') || '',
  text: row.querySelector('.hw-row').textContent,
}))"""


@dataclass(frozen=True)
class FigureScreen:
    """One figure as printed; every text has plain spaces.

    Parameters
    ----------
    value, sentence, verdict, base : str
        The big number with its words, the sentence, the width check, the line under the fan.
    fan : tuple of str
        Texts of the picture.
    rows : dict
        Label to cells of the table beside: value, between, answers, counts like, verdict.
    rails : dict
        Label to the text read aloud for the rail.
    steps : dict
        Name to count, how the figure came about.
    method : str
        The lines under "Method".
    """

    value: str
    sentence: str
    verdict: str
    base: str
    fan: tuple[str, ...]
    rows: dict[str, list[str]]
    rails: dict[str, str]
    steps: dict[str, str]
    method: str


def read_figure(page: Page) -> FigureScreen:
    """Open what is folded away on the Figure screen and read all of it."""
    page.wait_for_selector("[data-figure=value]")
    page.wait_for_selector(".st-key-fan .main-svg")
    open_expander(page, "How this number came about", "Numbers as a table", "Method")
    rows = table_rows(page, "The same numbers as a table")
    steps = table_rows(page, "From the file to the interval")
    rails = page.evaluate(_RAILS)
    fan = page.locator(".st-key-fan .main-svg text").evaluate_all(
        "texts => texts.map(text => text.textContent)"
    )
    return FigureScreen(
        value=text_of(page, "[data-figure=value]"),
        sentence=text_of(page, "[data-figure=sentence]"),
        verdict=text_of(page, ".hw-verdict"),
        base=text_of(page, "[data-figure=base]"),
        fan=tuple(plain(text) for text in fan),
        rows={row[0]: row[1:] for row in rows},
        rails={plain(rail["label"]): plain(rail["picture"]) for rail in rails},
        steps={row[0]: row[1] for row in steps},
        method=plain(page.get_by_text("From an endless universe:").first.inner_text()),
    )
