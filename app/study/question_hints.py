"""What the text of a question says about its answers: ends of a scale, meanings of codes."""

from __future__ import annotations

import re

_ENDS = re.compile(
    r"(?<!\d)(-?\d{1,2})\s*(?:=[^,;()]*[,;]\s*(?:to\s+)?|to|bis|à|a|-|–|—)\s*(\d{1,2})\b"
)
_COUNTED = re.compile(
    r"\b(how many|how much|how often|how old|number of|count of|amount|age|years?|days|hours|"
    r"minutes|anzahl|wie viele?|wie oft|alter|combien|cuánt[oa]s?|quant[ie]|hoeveel|antal)\b",
    re.IGNORECASE,
)
_CHOSEN_FROM = re.compile(
    r"\b(which|what|where|who|region|area|gender|sex|country|segment|type|group|class|"
    r"welche[rs]?|wo|land|geschlecht|quel(le)?s?|où|pays|cuál(es)?)\b",
    re.IGNORECASE,
)
_RATED = re.compile(
    r"\b(scale|satisf\w+|rate|rating|likely|likelihood|agree\w*|important|importance|recommend|"
    r"how (good|well|useful|easy|fair)|zufrieden\w*|skala|wichtig\w*|échelle|note)\b",
    re.IGNORECASE,
)
_MEANING = re.compile(r"(?<![\d.,])(-?\d+)\s*[=:]\s*([^,;()=]+)")


def asks_for_number(text: str) -> bool:
    """Whether a question asks how many or how much, and not for a rating."""
    return bool(_COUNTED.search(text)) and not asks_for_rating(text)


def asks_for_rating(text: str) -> bool:
    """Whether a question asks for a point on a scale."""
    return bool(_RATED.search(text)) or told_ends(text) is not None


def asks_which(text: str) -> bool:
    """Whether a question asks for one of several things, and not for a rating."""
    return bool(_CHOSEN_FROM.search(text)) and not asks_for_rating(text)


def told_ends(text: str) -> tuple[int, int] | None:
    """Return the ends of a scale named in a text: "(0 to 10)", "1 = not at all, 5 = very"."""
    for found in _ENDS.finditer(text):
        low, high = int(found.group(1)), int(found.group(2))
        if low in (-5, -4, -3, -2, 0, 1) and 4 <= high - low <= 10:
            return low, high
    return None


def told_meanings(text: str) -> dict[str, str]:
    """Return what a text says its codes mean: "1 = yes, 2 = no"."""
    return {code: words.strip() for code, words in _MEANING.findall(text)}
