"""The fan as a plotly figure: what people answered, and where the figure may lie, side by side."""

from __future__ import annotations

from dataclasses import dataclass, field
from html import escape
from typing import Any

import plotly.graph_objects as go

from app.charts.fan_geometry import FanGeometry, end_labels, fan_geometry, inside_band
from app.charts.fan_panels import (
    CURVE_REACH,
    bar_heights,
    bar_lengths,
    bar_texts,
    left_texts,
    left_titles,
    longest_left,
    right_titles,
    stroke_start,
    wrapped,
)
from app.charts.palette import Palette
from app.study.pictures import Fan

LEFT = (0.0, 0.38)
RIGHT = (0.56, 1.0)
FONT = "'Source Sans', 'Source Sans 3', sans-serif"
LINE_HEIGHT = 17
_HIDDEN = {
    "range": [0, 1],
    "fixedrange": True,
    "showgrid": False,
    "zeroline": False,
    "visible": False,
}
_TITLE_WIDTH = 27  # the bundled font is narrow
Strokes = list[tuple[float, float]]
FanFigure = go.Figure  # its name for shelves where plotly is not at home


@dataclass(slots=True)
class _Sheet:
    """Everything to draw, checked by plotly once at the end: checking piece by piece is slow."""

    traces: list[dict[str, Any]] = field(default_factory=list)
    shapes: list[dict[str, Any]] = field(default_factory=list)
    annotations: list[dict[str, Any]] = field(default_factory=list)
    layout: dict[str, Any] = field(default_factory=dict)

    def plot(self, **trace: object) -> None:
        """Add a trace."""
        self.traces.append(trace)

    def draw(self, **shape: object) -> None:
        """Add a shape."""
        self.shapes.append(shape)

    def annotate(self, **annotation: object) -> None:
        """Add a text."""
        self.annotations.append(annotation)

    def margin(self, side: str) -> int:
        """Return the pixels left at one side."""
        return int(self.layout["margin"][side])

    def figure(self) -> go.Figure:
        """Return the plotly figure."""
        layout = self.layout | {"shapes": self.shapes, "annotations": self.annotations}
        return go.Figure(data=self.traces, layout=layout)


def fan_figure(
    fan: Fan, palette: Palette, *, height: int = 420, show_endless: bool = False
) -> go.Figure:
    """Return the fan, ready for a theme of None.

    Parameters
    ----------
    fan : Fan
        The numbers.
    palette : Palette
        Theme.
    height : int
        Pixels, 360 to 420; the width follows the page, from 390 pixels.
    show_endless : bool
        True draws the interval from an endless universe as a dotted pair of lines.
    """
    geometry = fan_geometry(fan)
    sheet = _Sheet()
    _lay_out(sheet, fan, geometry, palette, height)
    _draw_band(sheet, geometry, palette)
    if fan.share:
        _draw_column(sheet, geometry, palette)
    else:
        _draw_bars(sheet, fan, geometry, palette)
    _draw_curve(sheet, fan, geometry, palette)
    if show_endless:
        _draw_endless(sheet, fan, geometry, palette)
    _draw_estimate(sheet, fan, geometry, palette)
    _write_ends(sheet, fan, geometry, palette, height)
    _write_titles(sheet, fan, geometry, palette)
    return sheet.figure()


def fan_config() -> dict[str, object]:
    """Return the plotly settings of a fan: a picture, not a tool."""
    return {"displayModeBar": False, "staticPlot": True, "responsive": True}


def _lay_out(sheet: _Sheet, fan: Fan, geometry: FanGeometry, palette: Palette, height: int) -> None:
    """Two panels of fixed ranges; every trace lives on heights from 0 to 1."""
    titles = _titles(fan, geometry)
    lines = max(len(title) for title in titles)
    sheet.layout.update(
        height=height,
        margin={
            "l": _left_margin(fan),
            "r": _right_margin(fan),
            "t": 16 + LINE_HEIGHT * lines,
            "b": 12,
            "autoexpand": False,
        },
        paper_bgcolor="rgba(0,0,0,0)",
        plot_bgcolor="rgba(0,0,0,0)",
        font={"family": FONT, "size": 13, "color": palette.soft},
        showlegend=False,
        hovermode=False,
        dragmode=False,
        xaxis={**_HIDDEN, "domain": LEFT},
        xaxis2={**_HIDDEN, "domain": RIGHT, "anchor": "y2"},
        yaxis=dict(_HIDDEN),
        yaxis2={**_HIDDEN, "anchor": "x2"},
    )
    for place, text in left_texts(fan, geometry):
        _write_left(sheet, place, text, palette)


def _left_margin(fan: Fan) -> int:
    return max(24, 12 + 7 * longest_left(fan))


def _right_margin(fan: Fan) -> int:
    return max(64, 14 + 9 * len(fan.value_text), 14 + 7 * len(fan.low_text + "\u2212"))


def _write_left(sheet: _Sheet, height: float, text: str, palette: Palette) -> None:
    """Write a tick or a bar's label at the left of the left panel."""
    sheet.annotate(
        xref="paper",
        yref="paper",
        x=0,
        y=height,
        xshift=-5,
        xanchor="right",
        yanchor="middle",
        align="right",
        showarrow=False,
        text="<br>".join(escape(line) for line in wrapped(text)),
        font={"size": 12, "color": palette.soft},
    )


def _draw_band(sheet: _Sheet, geometry: FanGeometry, palette: Palette) -> None:
    """Draw the band at its true thickness, opening like a fan, and enlarged."""
    low, high = geometry.left_band
    foot, top = geometry.right_band
    start, neck, mouth, end = LEFT[0], LEFT[1], RIGHT[0], RIGHT[1]
    corners = [(start, low), (neck, low), (mouth, foot), (end, foot)]
    corners += [(end, top), (mouth, top), (neck, high), (start, high)]
    _add_path(sheet, corners, closed=True, fillcolor=palette.band_on_page, line={"width": 0})
    for edge in (corners[1:4], corners[4:7]):
        _add_path(sheet, edge, line={"color": palette.figure, "width": 0.75})


def _add_path(sheet: _Sheet, corners: Strokes, *, closed: bool = False, **look: object) -> None:
    """Add a path in paper coordinates, behind everything else."""
    path = "M " + " L ".join(f"{x:.5f},{y:.5f}" for x, y in corners) + (" Z" if closed else "")
    sheet.draw(type="path", path=path, xref="paper", yref="paper", layer="below", **look)


def _draw_column(sheet: _Sheet, geometry: FanGeometry, palette: Palette) -> None:
    """Draw a share as one column: solid to the low end, hatch to the high end, blank above."""
    low, high = geometry.left_band
    _add_box(sheet, 0, 1, {"color": palette.hair, "width": 1}, palette.page)
    if low > 0:
        _add_box(sheet, 0, low, {"width": 0}, palette.people)
    if high > low:
        edge = {"color": palette.figure, "width": 1}
        _add_area(sheet, [(0, low), (1, low), (1, high), (0, high)], edge, palette, axis="")


def _add_box(sheet: _Sheet, foot: float, top: float, line: dict[str, object], fill: str) -> None:
    """Add a full-width rectangle to the left panel."""
    corners = [(0.0, foot), (1.0, foot), (1.0, top), (0.0, top), (0.0, foot)]
    _add_line(sheet, corners, line, axis="", fill="toself", fillcolor=fill)


def _add_area(
    sheet: _Sheet, corners: Strokes, edge: dict[str, object], palette: Palette, *, axis: str
) -> None:
    """Add a hatched area to one of the panels."""
    hatch = {"shape": "/", "size": 6, "solidity": 0.35}
    colours = {"fgcolor": palette.figure, "bgcolor": palette.page}
    _add_line(
        sheet,
        [*corners, corners[0]],
        edge,
        axis=axis,
        fill="toself",
        fillcolor=palette.page,
        fillpattern=hatch | colours,
    )


def _draw_bars(sheet: _Sheet, fan: Fan, geometry: FanGeometry, palette: Palette) -> None:
    """Draw answers as level bars with their numbers at the end."""
    heights = bar_heights(fan, geometry)
    sheet.plot(
        type="bar",
        orientation="h",
        x=bar_lengths(fan),
        y=[(foot + top) / 2 for foot, top in heights],
        width=[top - foot for foot, top in heights],
        marker={"color": palette.people, "line": {"width": 0}},
        text=[escape(text) for text in bar_texts(fan, geometry)],
        textposition="outside",
        textfont={"size": 12, "color": palette.soft},
        cliponaxis=False,
        hoverinfo="skip",
    )


def _draw_curve(sheet: _Sheet, fan: Fan, geometry: FanGeometry, palette: Palette) -> None:
    """Draw the curve, hatched inside the band where both arms agree."""
    curve = [(CURVE_REACH * length, height) for height, length in geometry.curve]
    if not curve:
        return
    if fan.hatched:
        piece = inside_band(geometry.curve, geometry.right_band)
        if len(piece) > 1:
            area = [(CURVE_REACH * length, height) for height, length in piece]
            area = [(0.0, piece[0][0]), *area, (0.0, piece[-1][0])]
            _add_area(sheet, area, {"width": 0}, palette, axis="2")
    _add_line(sheet, curve, {"color": palette.figure, "width": 1.5})
    _add_line(sheet, [(0, 0), (0, 1)], {"color": palette.hair, "width": 1})


def _add_line(
    sheet: _Sheet,
    points: Strokes,
    line: dict[str, object],
    *,
    axis: str = "2",
    **look: object,
) -> None:
    """Add a line to a panel: the right one, or the left one for the axis ""."""
    sheet.plot(
        type="scatter",
        x=[x for x, _ in points],
        y=[y for _, y in points],
        mode="lines",
        line=line,
        hoverinfo="skip",
        cliponaxis=False,
        xaxis=f"x{axis}",
        yaxis=f"y{axis}",
        **look,
    )


def _draw_endless(sheet: _Sheet, fan: Fan, geometry: FanGeometry, palette: Palette) -> None:
    """Draw the interval from an endless universe as a dotted pair of lines."""
    if fan.endless_low is None or fan.endless_high is None:
        return
    for end in (fan.endless_low, fan.endless_high):
        if geometry.right.holds(end):
            height = geometry.right.height_of(end)
            _add_line(
                sheet,
                [(0, height), (1, height)],
                {"color": palette.soft, "width": 1.5, "dash": "dot"},
            )
    sheet.annotate(
        xref="paper",
        yref="paper",
        x=1,
        y=min(geometry.right.height_of(fan.endless_high) + 0.01, 0.9),
        xanchor="right",
        yanchor="bottom",
        align="right",
        showarrow=False,
        text=escape(fan.endless_text).replace(": ", ":<br>"),
        font={"size": 12, "color": palette.soft},
    )


def _draw_estimate(sheet: _Sheet, fan: Fan, geometry: FanGeometry, palette: Palette) -> None:
    """Draw the estimate's stroke: beside bars, across a column, and over the right panel."""
    stroke = {"color": palette.ink, "width": 2}
    start = 0.0 if fan.share else LEFT[1] * stroke_start(fan, geometry)
    for ends, height in (
        ((start, LEFT[1]), geometry.left_value),
        (RIGHT, geometry.right_value),
    ):
        sheet.draw(
            type="line",
            xref="paper",
            yref="paper",
            x0=ends[0],
            x1=ends[1],
            y0=height,
            y1=height,
            line=stroke,
        )


def _write_ends(
    sheet: _Sheet, fan: Fan, geometry: FanGeometry, palette: Palette, height: int
) -> None:
    """Value, low and high at the right, spread where they would touch."""
    room = height - sheet.margin("t") - sheet.margin("b")
    for label in end_labels(fan, geometry, gap=20 / room):
        text = escape(label.text)
        sheet.annotate(
            xref="paper",
            yref="paper",
            x=1,
            y=label.height,
            xshift=7,
            xanchor="left",
            yanchor="middle",
            showarrow=False,
            text=f"<b>{text}</b>" if label.of_value else text,
            font={"size": 17 if label.of_value else 14, "color": palette.ink},
        )


def _titles(fan: Fan, geometry: FanGeometry) -> tuple[list[str], list[str]]:
    """Lines above the two panels, bold title first."""
    left, right = left_titles(fan), right_titles(fan, geometry, _TITLE_WIDTH)
    return _title_lines(*left), _title_lines(*right)


def _title_lines(title: list[str], note: list[str]) -> list[str]:
    bold = [f"<b>{escape(line)}</b>" for line in title]
    return bold + [escape(line) for line in note]


def _write_titles(sheet: _Sheet, fan: Fan, geometry: FanGeometry, palette: Palette) -> None:
    """Write the two titles, side by side at every width, standing on the panels."""
    shift = -sheet.margin("l") if not fan.share else 0
    left, right = _titles(fan, geometry)
    for x, xshift, lines, colour in (
        (LEFT[0], shift, left, palette.people),
        (RIGHT[0], 0, right, palette.figure),
    ):
        sheet.annotate(
            xref="paper",
            yref="paper",
            x=x,
            y=1,
            xshift=xshift,
            yshift=8,
            xanchor="left",
            yanchor="bottom",
            align="left",
            showarrow=False,
            text="<br>".join(lines),
            font={"size": 13, "color": colour},
        )
