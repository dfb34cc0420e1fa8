"""The readout page: plain HTML from frozen values, complete without script, printable."""

from __future__ import annotations

from collections.abc import Sequence
from html import escape

from app.charts.rail_svg import pattern_defs
from app.sharing.page_parts import as_asked, element, how_sure, how_to_read, items, rows_table
from app.sharing.readout_style import STYLE_TEXT
from app.study.frozen import FrozenFigure, FrozenReadout


def render_page(
    frozen: FrozenReadout,
    *,
    style_href: str | None,
    notice: str = "",
    changes: Sequence[str] = (),
    on_screen: int = 0,
) -> str:
    """Write a frozen readout as a whole HTML document.

    Parameters
    ----------
    frozen : FrozenReadout
        Everything the page shows.
    style_href : str or None
        Address of the style sheet; None puts the style sheet into the document, for a file that
        travels by e-mail.
    notice : str
        One sentence above everything: a newer freeze exists, what was corrected and when.
    changes : sequence of str
        What a correction changed, one sentence each, under the notice.
    on_screen : int
        Number of the figure under discussion in a meeting, from 1; 0 for none.

    Returns
    -------
    str
        HTML without script and without style attributes.
    """
    sections = "".join(
        _figure(figure, number, now=number == on_screen)
        for number, figure in enumerate(frozen.figures, start=1)
    )
    body = (
        f'<a class="skip" href="#readout">Skip to the readout</a>{pattern_defs()}'
        f'<div class="frame">{_contents(frozen)}<main id="readout" tabindex="-1">'
        f"{_notice(notice, changes)}{_head(frozen)}{_opening(frozen)}{sections}{_after(frozen)}"
        "</main></div>"
    )
    return _document(f"{frozen.title} \u00b7 {frozen.study}", body, style_href)


def _document(title: str, body: str, style_href: str | None) -> str:
    """Put a body into a document."""
    style = (
        f"<style>{STYLE_TEXT}</style>"
        if style_href is None
        else f'<link rel="stylesheet" href="{escape(style_href)}">'
    )
    return (
        '<!doctype html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n'
        '<meta name="viewport" content="width=device-width, initial-scale=1">\n'
        '<meta name="robots" content="noindex, nofollow">\n'
        '<meta name="referrer" content="no-referrer">\n'
        '<meta name="color-scheme" content="light dark">\n'
        f'<title>{escape(title)}</title>\n<link rel="icon" href="data:,">\n{style}\n'
        f"</head>\n<body>\n{body}\n</body>\n</html>\n"
    )


def _notice(notice: str, changes: Sequence[str]) -> str:
    if not notice and not changes:
        return ""
    return f'<div class="notice">{element("p", notice)}{items(changes)}</div>'


def _head(frozen: FrozenReadout) -> str:
    """Write the name of the readout and where it stands in time."""
    stand = f"Readout {frozen.number}, frozen {frozen.frozen_at}"
    return (
        f'<header class="head">{element("p", frozen.study)}{element("h1", frozen.title)}'
        f"{element('p', stand)}{element('p', frozen.base_line)}</header>"
    )


def _opening(frozen: FrozenReadout) -> str:
    """Write the few sentences that matter, and how to read the pictures."""
    short = "".join(element("p", sentence) for sentence in frozen.in_short)
    if not short:
        return f'<div class="opening">{how_to_read()}</div>'
    return (
        '<div class="opening with-short"><section class="in-short" aria-labelledby="in-short">'
        f'<h2 id="in-short">In short</h2>{short}</section>{how_to_read()}</div>'
    )


def _contents(frozen: FrozenReadout) -> str:
    """Write the list of contents, shown where the window is wide enough."""
    links = "".join(
        f'<li><a href="#figure-{number}"><span class="number">{number}</span> '
        f"{escape(figure.headline)}</a></li>"
        for number, figure in enumerate(frozen.figures, start=1)
    )
    held = '<li><a href="#held-back">What was held back</a></li>' if frozen.held_back else ""
    return (
        '<nav class="contents" aria-labelledby="contents"><p id="contents">On this page</p>'
        f'<ol>{links}<li><a href="#how-done">How this was done</a></li>{held}</ol></nav>'
    )


def _figure(figure: FrozenFigure, number: int, *, now: bool) -> str:
    """Write one section: headline, sentence, table, and what is opened on demand."""
    name = "figure on-screen" if now else "figure"
    headline = f"figure-{number}"
    said = '<p class="now">now on screen</p>' if now else ""
    return (
        f'<section class="{name}" aria-labelledby="{headline}">{said}'
        f'<h2 id="{headline}"><span class="number">{number}</span> {escape(figure.headline)}</h2>'
        f"{element('p', figure.sentence, name='sentence')}"
        f"{element('p', figure.comment, name='comment')}"
        f"{rows_table(figure, headline)}{items(figure.cautions, name='cautions')}"
        f"{how_sure(figure)}{as_asked(figure.question)}</section>"
    )


def _after(frozen: FrozenReadout) -> str:
    """Write how the figures came about and what is not shown."""
    notes = "".join(
        f"{element('dt', head)}{element('dd', text)}" for head, text in frozen.method_note
    )
    held = (
        '<section class="after" aria-labelledby="held-back"><h2 id="held-back">'
        f"What was held back, and why</h2>{items(frozen.held_back)}</section>"
        if frozen.held_back
        else ""
    )
    return (
        '<section class="after" aria-labelledby="how-done"><h2 id="how-done">How this was done'
        f"</h2><dl>{notes}</dl></section>{held}"
        f'<footer class="version">Methods version {frozen.methods_version}</footer>'
    )
