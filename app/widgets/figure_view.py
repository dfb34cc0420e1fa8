"""One figure on the screen: number, sentence, verdict, fan, and how it came about."""

from __future__ import annotations

import streamlit as st

from app.charts.fan_figure import fan_config
from app.charts.verdict_glyphs import verdict_html
from app.study.figure_rows import FigureRow
from app.study.figure_steps import Step, method_name, method_words
from app.study.figure_work import ShownFigure
from app.study.figures import Figure
from app.study.number_format import NO_BREAK, write_count
from app.study.sentences import endless_words, value_words
from app.study.study_data import StudyData
from app.study.width_check import limit_words
from app.widgets import address
from app.widgets.cached_work import fan_picture
from app.widgets.figure_address import LEVELS, SHARE_METHODS
from app.widgets.plain_text import as_html

_METHOD_WORDS = {
    "wilson": "Wilson",
    "clopper_pearson": "Clopper-Pearson",
    "korn_graubard": "Korn-Graubard",
    "wald": "Wald",
}


def show_number(data: StudyData, shown: ShownFigure) -> None:
    """Show the number, its sentence and its verdict."""
    figure, text, verdict = shown.figure, shown.text, shown.figure.verdict
    value = value_words(figure, text.words, data.study.decimal_mark)
    word = f"{verdict.outcome.value} ({verdict.reason})"
    st.html(
        f'<p class="hr-soft hw-question">{as_html(figure.question.text)}</p>'
        f'<p class="hr-number" data-figure="value">{as_html(value)} '
        f"<small>{as_html(text.title)}, {as_html(text.who)}</small></p>"
        f'<p class="hr-sentence" data-figure="sentence">{as_html(text.sentence)}</p>'
        f'<p class="hw-verdict"><span class="hr-soft">Width check:</span> '
        f"{verdict_html(verdict.outcome.value, word=word)}</p>"
    )


def show_fan(shown: ShownFigure) -> None:
    """Show the fan with the lines under it."""
    figure, text, fan = shown.figure, shown.text, shown.fan
    dark = st.context.theme.type == "dark"
    st.plotly_chart(
        fan_picture(fan, dark=dark, show_endless=address.read("endless") == "1"),
        theme=None,
        width="stretch",
        config=fan_config(),
        key="fan",
        alt=fan.alternative,
    )
    line = " \u00b7 ".join(
        part for part in (text.base_line, text.counts_like, level_words(figure)) if part
    )
    notes = "".join(f'<p class="hr-soft hr-small">{as_html(note)}</p>' for note in fan.notes)
    cautions = "".join(
        f'<p class="hr-soft hr-small">{as_html(caution.sentence)}</p>'
        for caution in figure.estimate.cautions
    )
    st.html(f'<p class="hr-soft" data-figure="base">{as_html(line)}</p>{notes}{cautions}')


def level_words(figure: Figure) -> str:
    """Return the level: "95 % level"."""
    return f"{figure.request.confidence * 100:g}{NO_BREAK}% level"


def show_steps(steps: tuple[Step, ...]) -> None:
    """Show how a figure came about, step by step."""
    rows = "".join(
        f'<tr><th scope="row">{as_html(step.name)}</th>'
        f'<td class="hr-count">{as_html(step.count)}</td><td>{as_html(step.detail)}</td></tr>'
        for step in steps
    )
    st.html(
        '<table class="hr-rows"><caption class="hw-caption">From the file to the interval'
        '</caption><thead><tr><th scope="col">step</th><th scope="col" class="hr-count">count</th>'
        f'<th scope="col">what</th></tr></thead><tbody>{rows}</tbody></table>'
    )


def show_rows_table(rows: tuple[FigureRow, ...], decimal_mark: str) -> None:
    """Show the rows beside a figure as a table that can be read aloud and printed."""
    body = "".join(_table_row(row, decimal_mark) for row in rows)
    heads = ("value", "between", "answers", "counts like", "verdict")
    cells = "".join(f'<th scope="col" class="hr-count">{head}</th>' for head in heads)
    st.html(
        '<table class="hr-rows"><caption class="hw-caption">The same numbers as a table</caption>'
        f'<thead><tr><th scope="col">who or what</th>{cells}</tr></thead>'
        f"<tbody>{body}</tbody></table>"
    )


def _table_row(row: FigureRow, decimal_mark: str) -> str:
    if row.figure is None:
        reason = f'<td colspan="5">{as_html(row.reason)}</td>'
        return f'<tr><th scope="row">{as_html(row.label)}</th>{reason}</tr>'
    like = row.figure.estimate.equivalent_base
    cells = (
        row.value,
        row.between,
        row.answers,
        write_count(like, decimal_mark) if 0 < like < float("inf") else "all of them",
        row.figure.verdict.outcome.value,
    )
    inside = "".join(f'<td class="hr-count">{as_html(cell)}</td>' for cell in cells)
    return f'<tr><th scope="row">{as_html(row.label)}</th>{inside}</tr>'


def show_method(data: StudyData, figure: Figure, step: float | None = None) -> None:
    """Show level, method, endless universe and house limit."""
    mark = data.study.decimal_mark
    level, method = st.columns(2)
    with level:
        address.select(
            "Level",
            "level",
            [f"{x:g}" for x in LEVELS],
            "0.95",
            words=lambda value: f"{float(value) * 100:g} %",
        )
    with method:
        if figure.scale.share:
            address.select(
                "Interval of a share",
                "method",
                SHARE_METHODS,
                "wilson",
                words=_METHOD_WORDS.__getitem__,
            )
    st.session_state["address_endless"] = address.read("endless") == "1"
    st.checkbox(
        "Draw the interval from an endless universe",
        key="address_endless",
        on_change=_write_flag,
        args=("endless",),
    )
    if figure.scale.share and figure.counts.reasons:
        st.session_state["address_dk"] = figure.request.missing_counted
        st.checkbox(
            "Count don\u2019t know and refused in the base",
            key="address_dk",
            on_change=_write_flag,
            args=("dk",),
        )
    st.html(
        f'<p class="hr-soft">Method: {as_html(method_name(figure))}; '
        f"{as_html(method_words(data, figure))}. From an endless universe: "
        f"{as_html(endless_words(figure, mark, step=step).between)}.</p>"
        f'<p class="hr-soft">{as_html(_capital(limit_words(data.study.limit, mark)))}.</p>'
    )


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _write_flag(name: str) -> None:
    address.write(**{name: "1" if st.session_state[f"address_{name}"] else ""})
