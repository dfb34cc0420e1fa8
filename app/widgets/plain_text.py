"""Text from files and people, shown as typed: the platform reads most labels as markup."""

from __future__ import annotations

import re
from html import escape as escape_html

_SPECIAL = re.compile(r"([\\`*_{}\[\]()#+\-.!|~:$<>&\"'/])")
_ADDRESS = re.compile(r"(?i)(https?|ftp|mailto|xmpp|www|@)(?=[:.\w])")
_WORD_JOINER = "\u2060"


def as_typed(text: str) -> str:
    """Return text that a label shows exactly as typed, without links, images or emphasis."""
    return _SPECIAL.sub(r"\\\1", _ADDRESS.sub(rf"\1{_WORD_JOINER}", " ".join(text.split())))


def as_html(text: str) -> str:
    """Return text safe inside HTML."""
    return escape_html(text, quote=True)


def shortened(text: str, most: int = 60) -> str:
    """Return text of at most so many characters, cut at a word."""
    text = " ".join(text.split())
    if len(text) <= most:
        return text
    return text[: most - 1].rsplit(" ", 1)[0].rstrip(" ,.;:") + "\u2026"
