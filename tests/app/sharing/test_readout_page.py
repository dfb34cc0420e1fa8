"""The readout page: complete, plain, safe, and silent about what is held back."""

from __future__ import annotations

import re
from dataclasses import fields, is_dataclass, replace
from html.parser import HTMLParser
from itertools import pairwise

import pytest

from app.sharing.readout_page import render_page
from app.sharing.readout_style import READOUT_STYLE, STYLE_HASH, STYLE_TEXT
from app.study.frozen import FrozenFigure, FrozenReadout, FrozenRow
from app.study.pictures import Fan, Rail
from tests.support.frozen_examples import example_readout, mean_fan, shown_rail

VOID = {"meta", "link", "br"}
HOSTILE = "<script>alert(1)</script>\"'&<b onclick=x>"


class Page(HTMLParser):
    """Elements with their attributes, and the text of each, navigation apart."""

    def __init__(self, html: str):
        super().__init__()
        self.stack: list[str] = []
        self.elements: list[tuple[str, dict[str, str | None]]] = []
        self.pieces: list[str] = []
        self.feed(html)
        self.close()

    def handle_starttag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))
        if tag not in VOID:
            self.stack.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag):
        assert self.stack.pop() == tag

    def handle_data(self, data):
        if not {"nav", "style", "head"} & set(self.stack):
            self.pieces.append(data)

    @property
    def text(self) -> str:
        return _even(" ".join(self.pieces))

    def named(self, tag: str) -> list[dict[str, str | None]]:
        return [attrs for name, attrs in self.elements if name == tag]


def _even(text: str) -> str:
    return re.sub(r"[ \n]+", " ", text).strip()


def _page(frozen: FrozenReadout | None = None, **more) -> Page:
    return Page(render_page(frozen or example_readout(), **{"style_href": "/s.css", **more}))


def _strings(value: object) -> list[str]:
    """Every text inside a frozen value that a reader must find."""
    if isinstance(value, str):
        return [value] if value else []
    if isinstance(value, tuple):
        return [text for part in value for text in _strings(part)]
    silent = {
        FrozenRow: {"verdict"},
        Rail: {"state"},
        Fan: {"endless_text", "left_note", "right_note"},
    }
    if is_dataclass(value):
        names = [f.name for f in fields(value) if f.name not in silent.get(type(value), set())]
        return [text for name in names for text in _strings(getattr(value, name))]
    return []


def test_every_printed_text_is_on_the_page():
    text = _page().text
    for wanted in _strings(example_readout()):
        assert _even(wanted) in text, wanted


def test_sentences_are_printed_once():
    frozen = example_readout()
    text = _page(frozen).text
    once = [frozen.study, frozen.base_line, frozen.frozen_at, *frozen.in_short, *frozen.held_back]
    once += [item for pair in frozen.method_note for item in pair]
    for figure in frozen.figures:
        once += [figure.headline, figure.sentence, figure.question, figure.base_line]
        once += [text for text in (figure.comment, *figure.cautions) if text]
        once += [row.note for row in figure.rows if row.note]
        if figure.fan:
            once += [figure.fan.alternative, *figure.fan.notes]
    for wanted in once:
        if wanted.startswith("held back: too"):
            continue
        assert text.count(_even(wanted)) == 1, wanted
    assert text.count("held back: too few answers") == 1
    assert text.count("held back: too wide") == 1


def test_the_page_is_well_formed():
    assert _page().stack == []


@pytest.mark.parametrize("href", ["/readout-style/x.css", None])
def test_no_script_no_style_attribute_no_foreign_address(href):
    html = render_page(example_readout(), style_href=href)
    page = Page(html)
    assert not page.named("script")
    for tag, attrs in page.elements:
        assert "style" not in attrs, tag
        assert not [name for name in attrs if name.startswith("on")], tag
        for name in ("href", "src", "action"):
            address = attrs.get(name) or ""
            assert "//" not in address, address
    assert "http:" not in html.replace("http://www.w3.org/2000/svg", "")
    assert "https:" not in html


def test_style_comes_from_the_server_or_travels_inside():
    assert [link["href"] for link in _page().named("link")] == ["data:,", "/s.css"]
    inside = render_page(example_readout(), style_href=None)
    assert f"<style>{STYLE_TEXT}</style>" in inside
    assert [link["rel"] for link in Page(inside).named("link")] == ["icon"]


def test_the_style_sheet_has_the_address_of_its_hash_and_fetches_nothing():
    assert STYLE_HASH.startswith(READOUT_STYLE.path.rsplit("/", 1)[1].removesuffix(".css"))
    assert "@import" not in STYLE_TEXT
    assert "@font-face" not in STYLE_TEXT
    assert re.findall(r'url\((?!"data:)', STYLE_TEXT) == []
    assert "</" not in STYLE_TEXT
    assert STYLE_TEXT.count("{") == STYLE_TEXT.count("}")


def _hostile_readout() -> FrozenReadout:
    row = FrozenRow(
        HOSTILE, HOSTILE, HOSTILE, HOSTILE, HOSTILE, "publish", shown_rail(0.4, 0.3, 0.5)
    )
    held = FrozenRow(HOSTILE, "", "", HOSTILE, HOSTILE, "hold back", row.rail)
    fan = replace(mean_fan(), left_title=HOSTILE, alternative=HOSTILE, notes=(HOSTILE,))
    figure = FrozenFigure(*[HOSTILE] * 7, (row, held), fan, HOSTILE, (HOSTILE,))
    return FrozenReadout(
        HOSTILE,
        HOSTILE,
        1,
        HOSTILE,
        HOSTILE,
        (HOSTILE,),
        (figure,),
        (HOSTILE,),
        ((HOSTILE, HOSTILE),),
        1,
    )


def test_hostile_text_stays_text():
    page = _page(_hostile_readout(), notice=HOSTILE, changes=(HOSTILE,))
    assert not page.named("script")
    assert not page.named("b")
    assert page.stack == []
    assert page.text.count("alert(1)") > 20


@pytest.mark.parametrize("state", ["held back", "hidden", "shown"])
def test_rows_held_back_carry_no_number_of_the_figure(state):
    """A value left behind in a row that is held back reaches neither text nor picture."""
    frozen = example_readout()
    secret = shown_rail(0.8123, 0.7123, 0.9123, text="West: held back", state=state)
    leaky = FrozenRow("West", "81.23", "71.23 to 91.23", "12", "held back", "hold back", secret)
    figure = replace(frozen.figures[3], rows=(leaky,), fan=None)
    html = render_page(replace(frozen, figures=(figure,)), style_href=None)
    assert re.search(r"(81|71|91)\.?23", html) is None
    assert "hr-fan" not in html.replace(STYLE_TEXT, "")


def test_the_fan_of_a_figure_held_back_is_not_drawn_even_if_it_was_frozen():
    frozen = example_readout()
    figure = replace(frozen.figures[3], fan=mean_fan())
    html = render_page(replace(frozen, figures=(figure,)), style_href="/s.css")
    assert "6.95" not in html.replace(frozen.in_short[0], "")
    assert "hr-fan" not in html


@pytest.mark.parametrize("row", [0, 1, 2])
def test_the_solid_of_a_rail_is_as_wide_as_the_low_end(row):
    rail = example_readout().figures[1].rows[row].rail
    rails = re.findall(
        r'<svg class="hr-rail-picture".*?</svg>',
        render_page(
            replace(example_readout(), figures=(example_readout().figures[1],)), style_href="/s.css"
        ),
    )[1:]
    width = re.search(r'class="hr-solid" x="0%" width="([\d.]+)%"', rails[row])[1]
    assert float(width) == pytest.approx(100 * rail.low)


def test_the_document_says_what_it_is():
    page = _page()
    assert page.named("html")[0]["lang"] == "en"
    metas = {m["name"]: m["content"] for m in page.named("meta") if "name" in m}
    assert "noindex" in metas["robots"]
    assert metas["viewport"].startswith("width=device-width")
    assert page.named("title")


def test_headings_descend_without_gaps_and_landmarks_are_there():
    page = _page()
    levels = [int(tag[1]) for tag, _ in page.elements if re.fullmatch(r"h[1-6]", tag)]
    assert levels[0] == levels.count(1) == 1
    assert all(b - a <= 1 for a, b in pairwise(levels))
    assert len(page.named("main")) == len(page.named("nav")) == 1
    assert page.named("a")[0]["href"] == "#readout"


def test_links_inside_the_page_lead_somewhere_and_ids_are_unique():
    page = _page()
    ids = [attrs["id"] for _, attrs in page.elements if "id" in attrs]
    assert len(ids) == len(set(ids))
    for link in page.named("a"):
        assert link["href"].removeprefix("#") in ids
    for _, attrs in page.elements:
        if "aria-labelledby" in attrs:
            assert attrs["aria-labelledby"] in ids


def test_tables_are_tables():
    frozen = example_readout()
    page = _page(frozen)
    assert len(page.named("table")) == len(page.named("caption")) == len(frozen.figures)
    rows = sum(len(figure.rows) for figure in frozen.figures)
    heads = page.named("th")
    assert sum(head["scope"] == "row" for head in heads) == rows
    assert sum(head["scope"] == "col" for head in heads) == 5 * len(frozen.figures)
    roles = {"table": "table", "tr": "row", "td": "cell", "thead": "rowgroup", "tbody": "rowgroup"}
    for tag, role in roles.items():
        assert all(attrs["role"] == role for attrs in page.named(tag))
    widths = [int(attrs.get("colspan") or 1) for attrs in page.named("td")]
    assert sum(widths) == 4 * rows


def test_a_note_is_numbered_in_the_row_and_written_at_the_foot():
    html = render_page(example_readout(), style_href="/s.css")
    assert "31<sup>1</sup>" in html
    assert "<li><sup>1</sup>read with care: wide</li>" in html


def test_a_note_shared_by_two_rows_is_written_once():
    figure = example_readout().figures[1]
    noted = replace(figure.rows[3], who="North, hills")
    frozen = replace(example_readout(), figures=(replace(figure, rows=(*figure.rows, noted)),))
    html = render_page(frozen, style_href="/s.css")
    assert html.count("read with care: wide") == 1
    assert html.count("31<sup>1</sup>") == 2


def test_a_correction_stands_above_everything():
    page = _page(notice="Corrected on 14 March.", changes=("Figure 2: 42 was 44.",))
    assert page.text.index("Corrected on 14 March.") < page.text.index("Readout 3, frozen")
    assert "Figure 2: 42 was 44." in page.text
    assert not [a for _, a in _page().elements if a.get("class") == "notice"]


def test_the_section_under_discussion_is_marked():
    assert _page(on_screen=2).text.count("now on screen") == 1
    assert "now on screen" not in _page().text


def test_an_empty_readout_is_still_a_page():
    empty = replace(example_readout(), figures=(), in_short=(), held_back=(), method_note=())
    page = _page(empty)
    assert page.stack == []
    assert "Garden centres, spring wave" in page.text


def test_the_pattern_of_the_hatch_is_defined_once():
    html = render_page(example_readout(), style_href="/s.css")
    assert html.count("<pattern") == 1
