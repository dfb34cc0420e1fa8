"""Universe counts by stratum: typed, or pasted from a spreadsheet with a preview."""

from __future__ import annotations

from functools import partial

import streamlit as st

from app.intake.pasted_counts import PastedCounts, read_pasted_counts
from app.study.count_text import read_count
from app.study.number_format import write_count
from app.study.sampling_plan import StratumCount
from app.widgets.plain_text import as_html, as_typed
from app.widgets.plan_saving import PlanKeeper
from app.widgets.refusals import fill, show_refusal


def show_strata(keeper: PlanKeeper, asked: dict[str, int]) -> None:
    """Show one row a stratum: its name, how many answered, how many there are, a rail."""
    sizes = {s.label: s.population_size for s in keeper.plan.strata}
    labels = list(dict.fromkeys([*sizes, *asked]))
    for number, label in enumerate(labels):
        _show_stratum(keeper, number, label, asked.get(label), sizes.get(label))
    with st.expander("Paste from a spreadsheet"):
        _show_paste(keeper, labels)


def _show_stratum(
    keeper: PlanKeeper, number: int, label: str, asked: int | None, size: int | None
) -> None:
    key = f"stratum_{number}_{keeper.plan.strata_column}"
    take = (key, label, partial(read_count, name=label), asked is not None)
    asked = asked or 0
    with st.container(key=f"stratum_row_{number}"):
        words, field, rail = st.columns([4, 3, 5], vertical_alignment="center", wrap=False)
        with words:
            st.html(
                f'<p class="hw-tight"><b>{as_html(label)}</b> '
                f'<span class="hr-soft">{write_count(asked, keeper.mark)} of</span></p>'
            )
        with field:
            fill(key, write_count(size, keeper.mark) if size else "")
            st.text_input(
                f"{as_typed(label)}: how many are there?",
                key=key,
                on_change=keeper.take_stratum,
                args=take,
                label_visibility="collapsed",
                placeholder="count",
                max_chars=20,
            )
        with rail:
            st.html(_part_bar(asked, size))
        show_refusal(key, keeper.take_stratum, take)


def _part_bar(asked: int, size: int | None) -> str:
    if not size:
        return '<span class="hr-problem">no count yet</span>'
    part = min(1.0, asked / size)
    return (
        f'<span class="hw-part" role="img" aria-label="{100 * part:.0f} % asked">'
        f'<span style="width:{100 * part:.1f}%"></span></span>'
    )


def _show_paste(keeper: PlanKeeper, labels: list[str]) -> None:
    text = st.text_area(
        "One stratum a line: its name, then its count",
        key="paste_strata",
        placeholder="\n".join(f"{label}\t..." for label in labels[:3]),
        height=140,
    )
    if not text.strip():
        return
    pasted = read_pasted_counts(text)
    unknown = [label for label, _ in pasted.counts if label not in labels]
    st.html(_preview(pasted, unknown, keeper.mark))
    if pasted.counts and not pasted.problems:
        st.button(
            "Use these counts",
            key="use_pasted",
            on_click=_use,
            args=(keeper, tuple(labels)),
        )


def _preview(pasted: PastedCounts, unknown: list[str], mark: str) -> str:
    rows = "".join(
        f'<tr><th scope="row">{as_html(label)}</th>'
        f'<td class="hr-count">{write_count(count, mark)}</td>'
        f"<td>{'no answers in the file' if label in unknown else ''}</td></tr>"
        for label, count in pasted.counts
    )
    lines = "".join(f'<p class="hr-problem">{as_html(s)}</p>' for s in pasted.problems)
    lines += "".join(f'<p class="hr-soft">{as_html(s)}</p>' for s in pasted.remarks)
    return (
        '<table class="hr-rows"><caption class="hw-caption">Understood as</caption>'
        f"<tbody>{rows}</tbody></table>{lines}"
    )


def _use(keeper: PlanKeeper, labels: tuple[str, ...]) -> None:
    """Keep the counts as they stand in the box now, which may be later than the preview."""
    pasted = read_pasted_counts(st.session_state["paste_strata"])
    if pasted.problems:
        return
    counts = dict(pasted.counts)
    old = {s.label: s.population_size for s in keeper.plan.strata}
    merged = {label: counts.pop(label, old.get(label)) for label in labels}
    merged.update(counts)
    if keeper.save(strata=tuple(StratumCount(k, v) for k, v in merged.items())):
        st.session_state["paste_strata"] = ""
