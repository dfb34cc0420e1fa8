"""Rails as pictures: inline SVG for pages, plain HTML for the workspace, an image for grids."""

from __future__ import annotations

import base64
from html import escape

from app.charts.palette import Palette
from app.charts.rail_geometry import HIDDEN, NOT_COUNTED, RailParts, rail_parts
from app.study.pictures import Rail

HATCH_ID = "hr-hatch-lines"
HEIGHT = 16
_INSET = 3  # the stroke stands out of the body above and below by this many pixels
_STROKE = '<line class="hr-halo" {x} y1="0" y2="{h}"/><line class="hr-stroke" {x} y1="0" y2="{h}"/>'


def pattern_defs() -> str:
    """Return the hatch as an invisible SVG; a page holds it once, before the first rail."""
    return (
        '<svg class="hr-defs" width="0" height="0" aria-hidden="true" focusable="false">'
        f"<defs>{_pattern()}</defs></svg>"
    )


def rail_svg(rail: Rail, *, width: str = "100%", height: int = HEIGHT) -> str:
    """Return a rail as inline SVG, coloured by the classes of the page's style sheet.

    Lengths are shares of the width, so the hatch keeps its grain at every width. The page must
    hold `pattern_defs` once.

    Parameters
    ----------
    rail : Rail
        What to draw; its text becomes the title.
    width : str
        Width attribute, "100%" or pixels.
    height : int
        Pixels.
    """
    return (
        f'<svg class="hr-rail-picture" role="img" width="{escape(width)}" height="{height}" '
        f'overflow="visible"><title>{escape(rail.text)}</title>{_drawn(rail, height)}</svg>'
    )


def rail_html(rail: Rail) -> str:
    """Return a rail as plain HTML elements, for places that take no SVG.

    Lengths stand in style attributes: use it in the workspace only, not on the client page.

    Parameters
    ----------
    rail : Rail
        What to draw; its text becomes the label.
    """
    parts = rail_parts(rail)
    inside = [
        _box("hr-box-zero", (parts.zero, parts.zero)) if parts.zero is not None else "",
        _box("hr-box-solid", parts.solid) if parts.solid else "",
        _box("hr-box-hatch", parts.hatch) if parts.hatch else "",
        _box("hr-box-stroke", (parts.stroke, parts.stroke)) if parts.stroke is not None else "",
    ]
    state = rail.state.replace(" ", "-")
    return (
        f'<div class="hr-box hr-box-{escape(state)}" role="img" aria-label="{escape(rail.text)}">'
        f"{''.join(inside)}</div>"
    )


def rail_image(rail: Rail, palette: Palette, *, width: int = 240, height: int = HEIGHT) -> str:
    """Return a rail as an image address ("data:image/svg+xml;base64,..."), colours inside.

    Parameters
    ----------
    rail : Rail
        What to draw.
    palette : Palette
        Theme, fixed in the image.
    width, height : int
        Pixels.
    """
    svg = (
        f'<svg xmlns="http://www.w3.org/2000/svg" width="{width}" height="{height}">'
        f"<style>{_image_style(palette)}</style><defs>{_pattern()}</defs>"
        f"<title>{escape(rail.text)}</title>{_drawn(rail, height)}</svg>"
    )
    return "data:image/svg+xml;base64," + base64.b64encode(svg.encode()).decode()


def percent(part: float) -> str:
    """Return a share of the width as SVG and style sheets want it, "42.5%"."""
    return f"{100 * part:.2f}".rstrip("0").rstrip(".") + "%"


def _drawn(rail: Rail, height: int) -> str:
    """All parts of a rail, back to front."""
    parts = rail_parts(rail)
    body = f'y="{_INSET}" height="{height - 2 * _INSET}"'
    drawn = [f'<rect class="hr-rail" x="0" width="100%" {body}/>']
    if rail.state == HIDDEN:
        drawn.append(_diagonals(height))
    if parts.zero is not None:
        x = percent(parts.zero)
        drawn.append(f'<line class="hr-zero" x1="{x}" x2="{x}" y1="0" y2="{height}"/>')
    drawn.extend(_interval(parts, body, dashed=rail.state == NOT_COUNTED))
    if parts.stroke is not None:
        x = percent(parts.stroke)
        drawn.append(_STROKE.format(x=f'x1="{x}" x2="{x}"', h=height))
    return "".join(drawn)


def _interval(parts: RailParts, body: str, *, dashed: bool) -> list[str]:
    """Solid and hatch."""
    drawn = []
    if parts.solid:
        drawn.append(f'<rect class="hr-solid" {_span(parts.solid)} {body}/>')
    if parts.hatch:
        edge = "hr-hatch hr-dashed" if dashed else "hr-hatch"
        drawn.append(f'<rect class="{edge}" fill="url(#{HATCH_ID})" {_span(parts.hatch)} {body}/>')
    return drawn


def _diagonals(height: int) -> str:
    """Two thin lines from corner to corner of the body."""
    top, foot = _INSET, height - _INSET
    return "".join(
        f'<line class="hr-crossed" x1="0" x2="100%" y1="{start}" y2="{end}"/>'
        for start, end in ((top, foot), (foot, top))
    )


def _span(ends: tuple[float, float]) -> str:
    return f'x="{percent(ends[0])}" width="{percent(ends[1] - ends[0])}"'


def _box(name: str, ends: tuple[float, float]) -> str:
    place = f"left:{percent(ends[0])};width:{percent(ends[1] - ends[0])}"
    return f'<span class="{name}" style="{place}"></span>'


def _pattern() -> str:
    return (
        f'<pattern id="{HATCH_ID}" patternUnits="userSpaceOnUse" width="4" height="4" '
        'patternTransform="rotate(45)">'
        '<line class="hr-hatch-line" x1="1" x2="1" y1="0" y2="4" stroke-width="1.6"/></pattern>'
    )


def _image_style(palette: Palette) -> str:
    """Colours of a rail that is an image of its own."""
    return (
        f".hr-rail{{fill:none;stroke:{palette.hair}}}.hr-solid{{fill:{palette.figure}}}"
        f".hr-hatch{{stroke:{palette.figure}}}.hr-hatch-line{{stroke:{palette.figure}}}"
        f".hr-dashed{{stroke-dasharray:3 2}}.hr-zero,.hr-crossed{{stroke:{palette.line}}}"
        f".hr-stroke{{stroke:{palette.ink};stroke-width:2}}"
        f".hr-halo{{stroke:{palette.page};stroke-width:4}}"
    )
