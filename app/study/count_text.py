"""A whole number as people type it: 1184, 1,184, 1.184, 1 184, 1'184."""

from __future__ import annotations

import re

_SPACES = "\u0020\u00a0\u202f\u2009"
_MOST_DIGITS = 11
_PLAIN = re.compile(r"[0-9]+")
_GROUPED = re.compile(r"[0-9]{1,3}(?:([.,'\u2019 ])[0-9]{3})(?:\1[0-9]{3})*")


def read_count(text: str, name: str) -> int | None:
    """Return the number typed, or None for an empty field.

    Parameters
    ----------
    text : str
        As typed.
    name : str
        Name of the field, for the message.

    Raises
    ------
    ValueError
        With one sentence that names the field, what stands there and what to do.
    """
    plain = text.strip().translate(dict.fromkeys(map(ord, _SPACES), " "))
    if not plain:
        return None
    if not (_PLAIN.fullmatch(plain) or _GROUPED.fullmatch(plain)):
        typed = text.strip()[:40]
        raise ValueError(
            f"{name}: \u201c{typed}\u201d is no whole number; type it like 1184 or 1,184."
        )
    digits = re.sub(r"\D", "", plain).lstrip("0")
    number = int(digits or "0") if len(digits) <= _MOST_DIGITS else 10**_MOST_DIGITS
    if not 1 <= number <= 10**10:
        raise ValueError(f"{name}: it must be at least 1 and at most ten billion.")
    return number
