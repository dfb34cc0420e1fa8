"""Text of people and files is shown as typed, whatever markup it looks like."""

from __future__ import annotations

import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.widgets.plain_text import as_html, as_typed, shortened

JOINER = "\u2060"


@pytest.mark.parametrize(
    ("typed", "shown"),
    [
        ("**bold** _it_ `code`", r"\*\*bold\*\* \_it\_ \`code\`"),
        ("[x](y)", r"\[x\]\(y\)"),
        (":red[warning]", r"\:red\[warning\]"),
        ("$x^2$ a|b", r"\$x^2\$ a\|b"),
        ("1. one\n2. two", r"1\. one 2\. two"),
        ("# head <b>", r"\# head \<b\>"),
    ],
)
def test_markup_is_escaped(typed, shown):
    assert as_typed(typed) == shown


@pytest.mark.parametrize(
    "address",
    [
        "https://a.example",
        "see HTTP://A.EXAMPLE",
        "www.a.example",
        "x_www.a.example",
        "b@a.example",
    ],
)
def test_addresses_are_no_links(address):
    """Readers of markup link plain addresses by pattern, after taking the escapes away."""
    plain = as_typed(address).replace("\\", "")
    assert not re.search(r"(?i)(https?://|www\.)", plain)
    assert not re.search(r"[\w.+-]@[\w-]+\.", plain)
    assert plain.replace(JOINER, "") == address


@given(st.text(max_size=60))
def test_taking_escapes_and_joiners_away_gives_the_words_back(text):
    words = " ".join(text.replace(JOINER, "").split())
    without = re.sub(r"\\(.)", r"\1", as_typed(words)).replace(JOINER, "")
    assert without == words


@given(st.text(max_size=60))
def test_nothing_special_is_left_unescaped(text):
    rest = re.sub(r"\\.", "", as_typed(text))
    assert not set(rest) & set("\\`*_{}[]()#+-.!|~:$<>&\"'/")


def test_html_is_escaped():
    assert as_html("<b a=\"x\" b='y'>&") == "&lt;b a=&quot;x&quot; b=&#x27;y&#x27;&gt;&amp;"


def test_long_text_is_cut_at_a_word():
    assert shortened("How satisfied are you, all in all?", 24) == "How satisfied are you\u2026"
    assert shortened("  short   text ") == "short text"
    assert shortened("x" * 70) == "x" * 59 + "\u2026"


@given(st.text(), st.integers(2, 80))
def test_shortened_text_fits(text, most):
    assert len(shortened(text, most)) <= most
