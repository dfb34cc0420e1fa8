"""Short pages without script: a link that does not open, an address that does not exist."""

from __future__ import annotations

from html import escape
from pathlib import Path

from app.sharing.style_sheets import StyleSheet

PLAIN_STYLE = StyleSheet(Path(__file__).with_name("plain_pages.css").read_text(encoding="utf-8"))

PAGE_POLICY = (
    "default-src 'none'; style-src 'self'; img-src 'self' data:; base-uri 'none'; "
    "form-action 'none'; frame-ancestors 'none'"
)


def plain_page(title: str, sentence: str, *, home: bool = False) -> str:
    """Write a page of one heading and one sentence.

    Parameters
    ----------
    title : str
        What is the matter; also the title of the window.
    sentence : str
        What to do next.
    home : bool, default False
        Whether to offer the way to the studies, which a client must not be sent to.

    Returns
    -------
    str
        Whole HTML document.
    """
    way_home = '<a href="/">Open your studies</a>' if home else ""
    return f"""<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="robots" content="noindex, nofollow">
<title>{escape(title)}</title>
<link rel="stylesheet" href="{PLAIN_STYLE.path}">
</head>
<body>
<main>
<h1>{escape(title)}</h1>
<p>{escape(sentence)}</p>
{way_home}
</main>
</body>
</html>
"""


def page_not_found() -> str:
    """Write the page for an address that leads nowhere."""
    return plain_page(
        "There is no such page", "The address may be mistyped, or from an older version.", home=True
    )


def page_failed() -> str:
    """Write the page for a fault of ours."""
    return plain_page(
        "This page could not be shown",
        "Something went wrong on our side and nothing was changed: try again, and tell the person "
        "who runs Halfwidth if it happens twice.",
    )


def link_unknown() -> str:
    """Write the page for a readout link nobody made."""
    return plain_page(
        "There is no readout at this link",
        "Check that the whole link was copied, or ask the person who sent it for a new one.",
    )


def link_expired() -> str:
    """Write the page for a readout link whose time is over."""
    return plain_page("This link has expired", "Ask the person who sent it for a new one.")


def link_withdrawn() -> str:
    """Write the page for a readout link that was revoked."""
    return plain_page(
        "This link was withdrawn",
        "The person who published the readout has closed it: ask them whether there is a new link.",
    )


def too_many_tries(seconds: int) -> str:
    """Write the page for somebody who tried too many wrong links.

    Parameters
    ----------
    seconds : int
        How long to wait.
    """
    unit = "second" if seconds == 1 else "seconds"
    return plain_page(
        "Too many wrong links were tried from here",
        f"A right link still opens at once; wait {seconds} {unit} before trying another.",
    )
