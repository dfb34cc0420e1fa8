from __future__ import annotations

from pathlib import Path

import streamlit

from app.gate.security_headers import script_hashes


def test_a_known_digest():
    # SHA-256 of "abc": FIPS 180-2 (2002), appendix B.1, ba7816bf...15ad; here in base 64
    expected = "'sha256-ungWv48Bz+pBQUDeXa4iI7ADYaOWF3qctBD/YfIAFa0='"
    assert script_hashes("<p><script>abc</script><script src='x'></script>") == (expected,)


def test_every_inline_script_of_the_platform_page_is_covered_and_no_handler_is_inline():
    page = (Path(streamlit.__file__).parent / "static" / "index.html").read_text()
    inline = page.count("<script>")
    assert len(script_hashes(page)) == inline >= 1
    assert page.count("<script") == inline + page.count("<script type=")
    assert " onload=" not in page
    assert "javascript:" not in page
