"""The four marks of a verdict, drawn in one size, always beside a word."""

from __future__ import annotations

from dataclasses import dataclass
from html import escape

SIZE = 12
PLOT_FONT = "'DejaVu Sans', 'Segoe UI Symbol', 'Apple Symbols', 'Noto Sans Symbols 2', sans-serif"


@dataclass(frozen=True, slots=True)
class VerdictGlyph:
    """A verdict's mark.

    Parameters
    ----------
    verdict : str
        As the study says it.
    word : str
        As it stands beside the mark.
    name : str
        End of the class name.
    mark : str
        One character, for plots and plain text.
    """

    verdict: str
    word: str
    name: str
    mark: str


GLYPHS = {
    glyph.verdict: glyph
    for glyph in (
        VerdictGlyph("publish", "publish", "publish", "\u25a0"),
        VerdictGlyph("publish with a note", "with a note", "note", "\u25e7"),
        VerdictGlyph("hold back", "hold back", "hold-back", "\u25a1"),
        VerdictGlyph("hidden", "hidden", "hidden", "\u22a0"),
    )
}
_INSIDE = {
    "publish": '<rect class="hr-glyph-fill" x="1" y="1" width="10" height="10"/>',
    "note": '<rect class="hr-glyph-fill" x="1" y="1" width="5" height="10"/>',
    "hold-back": "",
    "hidden": '<path class="hr-glyph-edge" d="M1 1 11 11M11 1 1 11"/>',
}


def glyph_svg(verdict: str) -> str:
    """Return the mark alone as inline SVG of 12 pixels, silent: the word stands beside it.

    Parameters
    ----------
    verdict : str
        "publish", "publish with a note", "hold back" or "hidden".
    """
    name = GLYPHS[verdict].name
    return (
        f'<svg class="hr-glyph" width="{SIZE}" height="{SIZE}" viewBox="0 0 12 12" '
        'aria-hidden="true" focusable="false">'
        f'{_INSIDE[name]}<rect class="hr-glyph-edge" x="1" y="1" width="10" height="10"/></svg>'
    )


def glyph_html(verdict: str) -> str:
    """Return the mark alone as an HTML element drawn by the style sheet, for the workspace.

    Parameters
    ----------
    verdict : str
        "publish", "publish with a note", "hold back" or "hidden".
    """
    name = GLYPHS[verdict].name
    return f'<span class="hr-mark hr-mark-{name}" aria-hidden="true"></span>'


def verdict_html(verdict: str, *, word: str | None = None, svg: bool = False) -> str:
    """Return mark and word.

    Parameters
    ----------
    verdict : str
        "publish", "publish with a note", "hold back" or "hidden".
    word : str, optional
        Words in place of the usual ones.
    svg : bool
        True for pages that take inline SVG.
    """
    glyph = glyph_svg(verdict) if svg else glyph_html(verdict)
    text = GLYPHS[verdict].word if word is None else word
    return f'<span class="hr-verdict">{glyph} {escape(text)}</span>'
