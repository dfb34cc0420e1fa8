"""A fresh file from its drop to a stranger's browser, and a second delivery that lacks a column."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from io import StringIO

import numpy as np
import pytest

from tests.support import browser_pages as pages
from tests.support.figure_screen import FigureScreen, read_figure
from tests.support.textbook_figures import (
    Worked,
    column_step,
    count_text,
    read_rows,
    stratified_mean,
    stratified_share,
    stratified_total,
    subgroup_mean,
    subgroup_share,
)

UNIVERSE = 2000
ROWS = 400
AREAS = ("Hillside", "Old Town", "Riverbank")


def make_file(*, without: str = "") -> bytes:
    """A simple sample of 400 households of 2,000: a scale, yes or no, an amount, an area."""
    draw = np.random.default_rng(417)
    areas = draw.choice(AREAS, ROWS, p=(0.2, 0.5, 0.3))
    scores = np.clip(np.round(draw.normal(6.4, 2.1, ROWS)), 0, 10).astype(int)
    members = np.where(draw.random(ROWS) < 0.31, "Yes", "No")
    spent = np.round(draw.lognormal(3.4, 0.7, ROWS), 2)
    columns = {
        "household": [f"{number:05d}" for number in draw.permutation(UNIVERSE)[:ROWS]],
        "area": areas,
        "satisfaction": scores,
        "member": members,
        "spend": [f"{amount:.2f}" if draw.random() > 0.05 else "" for amount in spent],
    }
    columns.pop(without, None)
    out = StringIO()
    writer = csv.writer(out)
    writer.writerow(columns)
    writer.writerows(zip(*columns.values(), strict=True))
    return out.getvalue().encode()


DATA = read_rows(make_file().decode())
AREA = np.array([row["area"] for row in DATA])
SCORE = np.array([float(row["satisfaction"]) for row in DATA])
MEMBER = np.array([row["member"] == "Yes" for row in DATA])
SPEND = np.array([float(row["spend"]) for row in DATA if row["spend"]])
EVERYONE = np.full(ROWS, "all")


def average_by_area(universe: int) -> dict[str, Worked]:
    found = {"all": stratified_mean([(SCORE, universe)])}
    for area in AREAS:
        found[area] = subgroup_mean(SCORE, area == AREA, EVERYONE, {"all": universe})
    return found


AVERAGE = average_by_area(UNIVERSE)
SHARE = {"all": stratified_share([(MEMBER.astype(float), UNIVERSE)], most=UNIVERSE)}
SHARE |= {area: subgroup_share(MEMBER, area == AREA, UNIVERSE) for area in AREAS}
TOTAL = stratified_total([(SPEND, UNIVERSE)])


@dataclass
class Walk:
    """What was seen on the way."""

    first: str
    standing: str
    refused: str
    strip: str
    average: FigureScreen
    share: FigureScreen
    total: FigureScreen
    readout: list[dict]
    missing: str
    waits: str
    after_second_delivery: list[dict]
    faults: list[str]


@pytest.fixture(scope="module")
def walk(server, browser):
    page, listener = pages.opened_page(browser, server.address)
    pages.go(page, f"{server.address}/")
    pages.click(page, "New study from a fieldwork file")
    pages.upload(page, make_file(), "household panel.csv")
    first = pages.text_of(page, ".st-key-first_figure")
    standing = pages.text_of(page, ".st-key-journey")
    pages.journey(page, "Questions")
    pages.settle_questions(page)
    pages.journey(page, "Sampling plan")
    refused, strip = answer_plan(page)
    pages.journey(page, "Figure")
    screens = [look_at(page, *figure) for figure in FIGURES]
    pages.journey(page, "Readout")
    link = pages.publish(page)
    before = stranger_reads(browser, server, link)
    pages.journey(page, "Fieldwork file")
    pages.open_expander(page, "A new delivery for this study")
    pages.upload(page, make_file(without="spend"), "household panel 2.csv")
    missing = pages.text_of(page, "[data-testid=stAlert]")
    pages.journey(page, "Readout")
    waits = pages.text_of(page, "[data-testid=stMain]")
    after = stranger_reads(browser, server, link)
    faults = [*listener.foreign, *listener.complaints]
    page.context.close()
    return Walk(first, standing, refused, strip, *screens, before, missing, waits, after, faults)


FIGURES = (
    ("satisfaction", "average"),
    ("member", "share", "Yes"),
    ("spend", "total in the universe"),
)


def answer_plan(page) -> tuple[str, str]:
    """Answer the questions of the plan, once with a slip of the hand."""
    pages.fill(page, "plan_size", "2 00o")
    refused = pages.text_of(page, "[data-testid=stMain]")
    pages.fill(page, "plan_size", "2 000")
    pages.fill(page, "plan_unit_one", "household")
    pages.fill(page, "plan_unit_many", "households")
    page.get_by_text("drawn by chance from a list", exact=True).click()
    pages.idle(page)
    pages.click(page, "Confirm the plan")
    return refused, pages.plain(page.get_by_text("A share of 50").first.inner_text())


def look_at(page, column: str, statistic: str, answer: str = "") -> FigureScreen:
    pages.choose(page, "address_q", f"{column} · {column}")
    pages.choose(page, "address_s", statistic)
    if answer:
        pages.choose_answers(page, answer)
        pages.choose(page, "address_by", "by area")
    seen = read_figure(page)
    pages.keep(page)
    return seen


def stranger_reads(browser, server, link: str) -> list[dict]:
    stranger, _ = pages.opened_page(browser, server.address)
    assert stranger.goto(link).status == 200
    found = pages.readout_figures(stranger)
    stranger.context.close()
    return found


def test_the_first_figure_comes_at_once_and_says_that_it_is_provisional(walk):
    endless = stratified_mean([(SCORE, UNIVERSE)], endless=True)
    printed = endless.printed()
    assert f"{printed.full} average, on a scale from 0 to 10" in walk.first
    assert printed.range in walk.first
    assert "Provisional" in walk.first
    assert "Sampling plan · provisional" in walk.standing


def test_a_slip_of_the_hand_is_named_and_nothing_is_lost(walk):
    assert "How many are there: “2 00o” is no whole number" in walk.refused


def test_the_plan_counts_the_universe_typed_with_a_space(walk):
    alternating = np.arange(ROWS) % 2.0
    share = stratified_share([(alternating, UNIVERSE)], most=UNIVERSE)
    assert f"±{100 * share.half_width:.1f} points" in walk.strip


def test_the_average_by_area(walk):
    check_screen(walk.average, AVERAGE, "average, on a scale from 0 to 10")


def test_the_share_by_area(walk):
    check_screen(walk.share, SHARE, "answered “Yes”")


def test_the_total(walk):
    steps = (TOTAL.step(), 10 * TOTAL.step())  # that of the column, whose areas are wider
    writings = [TOTAL.printed(step) for step in steps]
    assert any(walk.total.value.startswith(f"{w.full} total") for w in writings)
    assert any(w.range in walk.total.sentence for w in writings)
    assert walk.total.base.startswith(
        f"{len(SPEND)} answered of 2,000; {ROWS - len(SPEND)} gave no answer"
    )
    assert f"counts like {count_text(TOTAL.counts_like)} answers" in walk.total.base


def check_screen(screen: FigureScreen, table: dict[str, Worked], words: str) -> None:
    printed = table["all"].printed(column_step([*table.values()]))
    assert screen.value.startswith(f"{printed.full} {words}")
    assert printed.range in screen.sentence
    assert screen.base.startswith("400 answered of 2,000")
    check_rows(screen.rows, table)


def check_rows(rows: dict[str, list[str]], table: dict[str, Worked]) -> None:
    step = column_step(list(table.values()))
    assert sorted(rows) == sorted(table)
    for label, worked in table.items():
        cell = worked.printed(step)
        assert rows[label][:3] == [cell.value, cell.between, str(worked.base)], label
        if len(rows[label]) > 3:
            like = int(rows[label][3].replace(",", ""))
            assert abs(like - worked.counts_like) < 0.500001, label


@pytest.mark.parametrize(("place", "table"), [(0, AVERAGE), (1, SHARE)])
def test_the_readout_prints_the_same(walk, place, table):
    section = walk.readout[place]
    shown = {
        row["who"]: [row["value"], row["between"], row["answers"]]
        for row in section["rows"]
        if "value" in row
    }
    kept = {label: table[label] for label in shown}
    assert set(table) - set(shown) <= {"Hillside"}  # the smallest area may be too wide
    step = column_step(list(table.values()))
    assert table["all"].printed(step).range in section["sentence"]
    for label, worked in kept.items():
        cell = worked.printed(step)
        assert shown[label] == [cell.value, cell.between, str(worked.base)], label


def test_the_total_on_the_readout(walk):
    everyone = walk.readout[2]["rows"][0]
    assert everyone["answers"] == str(len(SPEND))
    steps = (TOTAL.step(), 10 * TOTAL.step())  # that of the column, whose areas are wider
    assert any(TOTAL.printed(step).range in walk.readout[2]["sentence"] for step in steps)


def test_a_second_delivery_names_what_went_missing(walk):
    assert "spend is missing from the new file." in walk.missing
    assert "spend is not in the current file" in walk.waits


def test_what_was_published_stays_as_it_was(walk):
    assert walk.after_second_delivery == walk.readout


def test_nothing_foreign_was_asked_for(walk):
    assert walk.faults == []
