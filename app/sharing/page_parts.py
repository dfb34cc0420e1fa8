"""Small pieces of the readout page; every text from outside is escaped here."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from html import escape

from app.charts.fan_svg import fan_svg
from app.charts.rail_geometry import HELD_BACK, HIDDEN
from app.charts.rail_svg import rail_svg
from app.charts.repeated_surveys import made_up_runs, runs_sentence, runs_svg
from app.study.frozen import FrozenFigure, FrozenRow
from app.study.pictures import Fan, Rail

_LEGEND = Rail(
    axis_low=0.0,
    axis_high=1.0,
    value=0.62,
    low=0.5,
    high=0.74,
    solid=True,
    state="shown",
    text="An example: solid, then hatched with a line in it, then empty.",
)


def element(tag: str, text: str, *, name: str = "") -> str:
    """Return an element that holds nothing but text; nothing for an empty text.

    Parameters
    ----------
    tag : str
        "p", "li" ...
    text : str
        Not yet escaped.
    name : str
        Class.
    """
    if not text:
        return ""
    opening = f'<{tag} class="{name}">' if name else f"<{tag}>"
    return f"{opening}{escape(text)}</{tag}>"


def items(texts: Iterable[str], *, name: str = "") -> str:
    """Return an unordered list of texts; nothing for no texts.

    Parameters
    ----------
    texts : iterable of str
        Not yet escaped.
    name : str
        Class of the list.
    """
    inside = "".join(element("li", text) for text in texts)
    opening = f'<ul class="{name}">' if name else "<ul>"
    return f"{opening}{inside}</ul>" if inside else ""


def how_to_read() -> str:
    """Return the legend of the rails, once at the top of the page."""
    return (
        '<section class="how-to-read" aria-labelledby="how-to-read">'
        '<h2 id="how-to-read">How to read</h2>'
        f'<div class="legend">{rail_svg(_LEGEND)}</div>'
        "<dl><dt>solid</dt><dd>at least this</dd><dt>hatch</dt><dd>may be</dd>"
        "<dt>line</dt><dd>our estimate</dd></dl>"
        '<p class="between">\u201cBetween\u201d tells where a count of everybody would very likely '
        "have ended.</p></section>"
    )


def rows_table(figure: FrozenFigure, labelled_by: str) -> str:
    """Return the table of a figure: a row for everyone and for each group, a rail in each.

    Roles are spelled out because the narrow page lays rows out as blocks, and browsers then
    forget what they are.

    Parameters
    ----------
    figure : FrozenFigure
        The section.
    labelled_by : str
        Id of the headline.
    """
    numbers = note_numbers(figure.rows)
    body = "".join(_row(row, numbers) for row in figure.rows)
    return (
        f'<table class="rows" role="table" aria-labelledby="{escape(labelled_by)}">'
        f"{element('caption', figure.base_line)}"
        f'<thead role="rowgroup"><tr role="row">{_heads(figure)}</tr></thead>'
        f'<tbody role="rowgroup">{body}</tbody></table>{_notes(numbers)}'
    )


def note_numbers(rows: tuple[FrozenRow, ...]) -> dict[str, int]:
    """Return the number of each note that stands at the foot of the table, in order.

    Parameters
    ----------
    rows : tuple of FrozenRow
        Rows of one table; rows without a value carry their words in place of it.
    """
    texts = dict.fromkeys(row.note for row in rows if row.note and _has_value(row))
    return {text: number for number, text in enumerate(texts, start=1)}


def how_sure(figure: FrozenFigure) -> str:
    """Return the fan behind a line to open; nothing for a figure that is held back.

    Parameters
    ----------
    figure : FrozenFigure
        The section; its first row decides, even if a fan was frozen with it.
    """
    fan = figure.fan
    if fan is None or not (figure.rows and _has_value(figure.rows[0])):
        return ""
    notes = "<br>".join(escape(note) for note in fan.notes)
    caption = f"<figcaption>{notes}</figcaption>" if notes else ""
    return (
        "<details><summary>How sure are we?</summary>"
        f'<figure class="fan">{fan_svg(fan)}{caption}</figure>{_runs(fan)}</details>'
    )


def as_asked(question: str) -> str:
    """Return the question behind a line to open.

    Parameters
    ----------
    question : str
        As asked; "" for none.
    """
    if not question:
        return ""
    return (
        "<details><summary>The question as asked</summary>"
        f"{element('blockquote', question, name='asked')}</details>"
    )


def _runs(fan: Fan) -> str:
    """Draw a hundred made-up runs of the plan where that is honest."""
    runs = made_up_runs(fan)
    if not runs:
        return ""
    caption = element("figcaption", runs_sentence(runs, fan.value_text))
    return f'<figure class="fan runs">{runs_svg(runs, fan.value)}{caption}</figure>'


def _has_value(row: FrozenRow) -> bool:
    return row.verdict not in ("hold back", "hidden") and bool(row.value)


def _heads(figure: FrozenFigure) -> str:
    """Write the heads of the columns; the rail's head names its two ends."""
    plain = (("who", "who"), ("value", figure.column_head), ("between", "between"))
    heads = "".join(
        f'<th class="{name}" role="columnheader" scope="col">{escape(text)}</th>'
        for name, text in (*plain, ("answers", "answers"))
    )
    ends = "".join(
        f"<span>{escape(text)}</span>" for text in (figure.axis_low_text, figure.axis_high_text)
    )
    return (
        f'{heads}<th class="rail" role="columnheader" scope="col">'
        f'<span class="unseen">as a picture</span><div class="ends">{ends}</div></th>'
    )


def _row(row: FrozenRow, numbers: dict[str, int]) -> str:
    """Write one row; a row that is held back has words where the numbers would be."""
    if _has_value(row):
        middle = _numbers(row, numbers)
        name = ' class="firm"' if row.verdict == "publish" else ""
    else:
        middle, name = _words(row), ' class="without"'
    return (
        f'<tr role="row"{name}>'
        f'<th class="who" role="rowheader" scope="row">{escape(row.who)}</th>{middle}'
        f'<td class="answers" role="cell">{escape(row.answers)}</td>'
        f'<td class="rail" role="cell">{rail_svg(_rail(row))}</td></tr>'
    )


def _rail(row: FrozenRow) -> Rail:
    """Give the row's rail, emptied where the row has no value to show."""
    if _has_value(row) or row.rail.state == HIDDEN:
        return row.rail
    return replace(row.rail, state=HELD_BACK)


def _numbers(row: FrozenRow, numbers: dict[str, int]) -> str:
    number = numbers.get(row.note)
    mark = f"<sup>{number}</sup>" if number else ""
    return (
        f'<td class="value" role="cell">{escape(row.value)}{mark}</td>'
        f'<td class="between" role="cell">{escape(row.between)}</td>'
    )


def _words(row: FrozenRow) -> str:
    words = escape(row.note or row.verdict)
    return f'<td class="held" role="cell" colspan="2" aria-colspan="2">{words}</td>'


def _notes(numbers: dict[str, int]) -> str:
    """Write the notes at the foot of a table."""
    inside = "".join(f"<li><sup>{n}</sup>{escape(text)}</li>" for text, n in numbers.items())
    return f'<ul class="notes">{inside}</ul>' if inside else ""
