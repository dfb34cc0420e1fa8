"""The sample study from the first screen to a stranger's browser, every printed number checked.

Expected numbers come from ``tests.support.textbook_figures``, worked out from the rows of the
file; nothing of the program takes part in them.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
import pytest

from tests.support import browser_pages as pages
from tests.support.figure_screen import FigureScreen, read_figure
from tests.support.textbook_figures import (
    Printed,
    Worked,
    column_step,
    column_texts,
    count_text,
    read_rows,
    stratified_mean,
    stratified_median,
    stratified_share,
    stratified_total,
    subgroup_mean,
    wilson,
)

FILE = Path(__file__).resolve().parents[2] / "sample_data" / "garden_centres_spring.csv"
SIZES = {"Northmark": 402, "Lowmere": 331, "Eastreach": 268, "Westholm": 183}
UNIVERSE = 1184
ROWS = read_rows(FILE, delimiter=";", heads=2)
QUESTIONS = read_rows(FILE, delimiter=";")[0]
NOT_ANSWERS = {"Q1": {"98": "refused", "99": "don't know"}, "Q5": {"99999": "refused"}}
MOST_LIKE = 1  # counted in whole answers


def option_of(column: str) -> str:
    return f"{column} · {QUESTIONS[column]}"


def number(cell: str) -> float:
    return float(cell.replace(",", "."))


def strata_of(column: str, read=number, missing=(), region: str | None = None):
    """One pair of answers and universe size for each region, in the order of the plan."""
    return [
        (
            np.array(
                [
                    read(row[column])
                    for row in ROWS
                    if row["REGION"] == label and row[column] not in ("", *missing)
                ]
            ),
            size,
        )
        for label, size in SIZES.items()
        if region in (None, label)
    ]


def by_region(work, column: str, **options) -> dict[str, Worked]:
    """The figure of everyone under "all", then of each region as a sample of its own."""
    found = {"all": work(strata_of(column, **options))}
    for label in SIZES:
        strata = strata_of(column, region=label, **options)
        if work is stratified_share:  # N - n + rows asked: who is known to be elsewhere is out
            asked = sum(row["REGION"] == label and row[column] != "" for row in ROWS)
            found[label] = work(strata, most=UNIVERSE - len(ROWS) + asked)
        else:
            found[label] = work(strata)
    return found


def total_of_region(label: str) -> Worked:
    """The total of one region, worth what a simple sample of everyone would need for it.

    In such a sample all others count as zero, so the size of the region varies as well
    (Cochran 1977, section 2.13).
    """
    ((values, size),) = strata_of("Q5", missing=("99999",), region=label)
    worked = stratified_total([(values, size)])
    others = [
        (np.zeros(sum(r["REGION"] == h for r in ROWS)), SIZES[h]) for h in SIZES if h != label
    ]
    everyone = [(values, size), *others]
    weights = np.concatenate([np.full(len(v), n / len(v)) for v, n in everyone])
    numbers = np.concatenate([v for v, _ in everyone])
    centre = weights @ numbers / UNIVERSE
    spread = weights @ (numbers - centre) ** 2 / UNIVERSE
    asked = sum(row["REGION"] == label for row in ROWS)
    variance = (1 - len(values) / size) * size**2 * float(np.var(values, ddof=1)) / len(values)
    rows = len(ROWS) * len(values) / asked
    like = UNIVERSE**2 * spread * len(values) / ((rows - 1) * variance)
    return replace(worked, counts_like=float(like))


def is_one_of(*answers: str):
    return lambda cell: float(cell in answers)


AVERAGE = by_region(stratified_mean, "Q1", missing=("98", "99"))
SHARE = by_region(
    stratified_share, "Q3", read=is_one_of("Much more", "A little more"), missing=("Don't know",)
)
TOTAL = {
    "all": stratified_total(strata_of("Q5", missing=("99999",))),
    **{label: total_of_region(label) for label in SIZES},
}
MEDIAN = by_region(stratified_median, "Q5", missing=("99999",))
ONE_REGION = by_region(stratified_share, "Q4", read=is_one_of("Yes"), missing=("Don't know",))


@dataclass
class Walk:
    """What was seen on the way."""

    accepted: int
    counts_after: str
    strip: str
    screens: dict[str, FigureScreen]
    by_size: FigureScreen
    link: str
    status: int
    page_text: str
    readout: list[dict]
    cookies: list
    faults: list[str]


@pytest.fixture(scope="module")
def walk(server, browser):
    page, listener = pages.opened_page(browser, server.address)
    study = pages.open_sample(page, server.address)
    pages.go(page, f"{server.address}/")
    page.get_by_role("link", name="Garden centres").first.click()
    page.wait_for_url("**/figure?*")
    pages.idle(page)
    pages.journey(page, "Questions")
    accepted = pages.settle_questions(page)
    counts_after = pages.plain(page.get_by_text("need you").first.inner_text())
    pages.journey(page, "Sampling plan")
    strip = pages.plain(page.get_by_text("A share of 50").first.inner_text())
    pages.journey(page, "Figure")
    screens = look_at_figures(page)
    figure(page, "Q6", "average")
    pages.choose(page, "address_by", f"by {QUESTIONS['SIZE']}")
    by_size = read_figure(page)
    pages.journey(page, "Readout")
    link = pages.publish(page, "Spring wave")
    stranger, strange = pages.opened_page(browser, server.address)
    answer = stranger.goto(link)
    seen = Walk(
        accepted,
        counts_after,
        strip,
        screens,
        by_size,
        link,
        answer.status,
        pages.plain(stranger.locator("body").inner_text()),
        pages.readout_figures(stranger),
        stranger.context.cookies(),
        [*listener.foreign, *listener.complaints, *strange.foreign, *strange.complaints],
    )
    assert pages.study_in(page.url) == study
    stranger.context.close()
    page.context.close()
    return seen


def figure(page, column: str, statistic: str, group: str = "") -> None:
    pages.choose(page, "address_q", option_of(column))
    pages.choose(page, "address_s", statistic)
    if group:
        pages.choose(page, "address_group", group)


def look_at_figures(page) -> dict[str, FigureScreen]:
    """Choose five figures, read each and keep it."""
    screens = {}
    figure(page, "Q1", "average")
    screens["average"] = read_and_keep(page)
    figure(page, "Q3", "share")
    pages.choose_answers(page, "Much more", "A little more")
    screens["share"] = read_and_keep(page)
    figure(page, "Q5", "total in the universe")
    screens["total"] = read_and_keep(page)
    figure(page, "Q5", "median")
    screens["median"] = read_and_keep(page)
    figure(page, "Q4", "share", "Lowmere · Region")
    screens["one region"] = read_and_keep(page)
    pages.choose(page, "address_group", "all garden centres")
    return screens


def read_and_keep(page) -> FigureScreen:
    seen = read_figure(page)
    pages.keep(page)
    return seen


CASES = {
    "average": (AVERAGE, "all", "average, on a scale from 0 to 10"),
    "share": (SHARE, "all", "answered “Much more” or “A little more”"),
    "total": (TOTAL, "all", "total"),
    "median": (MEDIAN, "all", "median"),
    "one region": (ONE_REGION, "Lowmere", "answered “Yes”"),
}


def shown(name: str) -> tuple[Worked, Printed]:
    """A figure and how it is written: like the rows beside it, if it is one of them."""
    table, label, _ = CASES[name]
    worked = table[label]
    return worked, worked.printed(None if worked.share else column_step([*table.values()]))


def test_every_proposal_is_accepted_and_none_is_left(walk):
    assert walk.accepted == 10  # Q1, Q2_1 to Q2_4, Q3, Q4, Q5, Q10 and Q13 hold such codes
    assert walk.counts_after.startswith("0 need you")


def test_the_strip_says_what_a_share_of_one_half_carries(walk):
    alternating = [
        (np.arange(sum(r["REGION"] == h for r in ROWS)) % 2, n) for h, n in SIZES.items()
    ]
    here = stratified_share([(v.astype(float), n) for v, n in alternating])
    endless = stratified_share([(v.astype(float), n) for v, n in alternating], endless=True)
    assert f"±{100 * here.half_width:.1f} points" in walk.strip
    assert f"(endless universe: ±{100 * endless.half_width:.1f})" in walk.strip
    textbook = wilson(0.5, 395 / (1 - 395 / UNIVERSE))  # a simple sample comes close to it
    assert math.isclose(here.half_width, (textbook[1] - textbook[0]) / 2, abs_tol=0.003)


@pytest.mark.parametrize("name", CASES)
def test_the_big_number_and_its_sentence(walk, name):
    printed, screen = shown(name)[1], walk.screens[name]
    assert screen.value.startswith(f"{printed.full} {CASES[name][2]}")
    assert printed.range in screen.sentence


@pytest.mark.parametrize("name", CASES)
def test_the_fan_carries_the_same_three_numbers(walk, name):
    printed, texts = shown(name)[1], walk.screens[name].fan
    for part in (printed.low, printed.value, printed.high):
        assert f"{part} {printed.unit}".strip() in texts


@pytest.mark.parametrize("name", CASES)
def test_the_base_and_what_it_counts_like(walk, name):
    worked, printed = shown(name)
    asked = f"{UNIVERSE:,}" if name != "one region" else "150"
    assert walk.screens[name].base.startswith(f"{count_text(worked.base)} answered of {asked}")
    assert f"counts like {count_text(worked.counts_like)} answers" in walk.screens[name].base
    assert walk.screens[name].steps["answered"] == count_text(worked.base)
    steps = (printed.between, worked.printed().between)
    assert walk.screens[name].steps["interval"] in steps


def test_people_without_an_answer_are_counted_by_their_reason(walk):
    said = {reason: sum(row["Q1"] == code for row in ROWS) for code, reason in (("98", "refused"),)}
    unsure = sum(row["Q1"] == "99" for row in ROWS)
    assert f"{said['refused']} refused" in walk.screens["average"].base
    assert f"{unsure} said don’t know" in walk.screens["average"].base


@pytest.mark.parametrize(
    ("name", "table"),
    [("average", AVERAGE), ("total", TOTAL), ("median", MEDIAN)],
)
def test_regions_beside_a_figure(walk, name, table):
    check_table(walk.screens[name], table)


def test_answers_beside_a_share(walk):
    labels = ("Much more", "A little more", "About the same", "Less")
    table = {
        label: stratified_share(strata_of("Q3", read=is_one_of(label), missing=("Don't know",)))
        for label in labels
    }
    check_table(walk.screens["share"], table)


def test_groups_that_cut_across_the_strata(walk):
    staff = np.array([number(row["Q6"]) for row in ROWS])
    strata = np.array([row["REGION"] for row in ROWS])
    size = np.array([row["SIZE"] for row in ROWS])
    table = {"all": stratified_mean(strata_of("Q6"))}
    for label in ("small", "medium", "large", "very large"):
        table[label] = subgroup_mean(staff, size == label, strata, SIZES)
    check_table(walk.by_size, table)


def check_table(screen: FigureScreen, table: dict[str, Worked]) -> None:
    """Every row in the step of the column, in the table and beside the rail."""
    cells = column_texts(table)
    assert sorted(screen.rows) == sorted(table)
    for label, worked in table.items():
        printed = cells[label]
        value, between, answers, like, _ = screen.rows[label]
        assert [value, between, answers] == [printed.value, printed.between, str(worked.base)], (
            label
        )
        assert abs(int(like.replace(",", "")) - worked.counts_like) <= MOST_LIKE
        assert screen.rails[label] == f"{label}: {printed.full}, {printed.between}"


@pytest.mark.parametrize(
    ("name", "endless"),
    [
        ("average", stratified_mean(strata_of("Q1", missing=("98", "99")), endless=True)),
        ("total", stratified_total(strata_of("Q5", missing=("99999",)), endless=True)),
        ("median", stratified_median(strata_of("Q5", missing=("99999",)), endless=True)),
    ],
)
def test_the_interval_from_an_endless_universe(walk, name, endless):
    own = CASES[name][0]["all"].step()
    told = [
        f"From an endless universe: {endless.printed(step).between}."
        for step in (own, column_step([*CASES[name][0].values()]))
    ]
    assert any(words in walk.screens[name].method for words in told)


@pytest.mark.parametrize("name", CASES)
def test_the_width_check_prints_the_half_width(walk, name):
    worked, _ = shown(name)
    half = worked.half_width * (100 if worked.share else 1)
    step = max(0.1, min(1.0, worked.step())) if worked.share else worked.step()
    width = Worked(half, half, half, 0, 0.0).printed(step).value
    assert f"±{width}" in walk.screens[name].verdict


def test_a_stranger_opens_the_readout(walk):
    assert walk.status == 200
    assert walk.cookies == []
    assert "395 of 1,184 garden centres answered" in walk.page_text
    assert "Readout 1, frozen" in walk.page_text


@pytest.mark.parametrize(("place", "table"), [*enumerate([AVERAGE, SHARE, TOTAL, MEDIAN])])
def test_every_row_of_the_readout(walk, place, table):
    section = walk.readout[place]
    printed = table["all"].printed(column_step([*table.values()]))
    assert printed.range in section["sentence"]  # a section rounds all of a figure alike
    assert section["base"].startswith(f"{table['all'].base} answered of 1,184")
    cells = column_texts(table)
    assert sorted(row["who"] for row in section["rows"]) == sorted(table)
    assert section["rows"][0]["who"] == "all"
    for row in section["rows"]:
        check_readout_row(row, table[row["who"]], cells[row["who"]])


def check_readout_row(row: dict, worked: Worked, printed: Printed) -> None:
    """A row carries its numbers, unless it is too wide for the house: then it carries none."""
    assert row["answers"] == str(worked.base)
    if is_too_wide(worked):
        assert row["held"] == "held back: too wide"
        assert "value" not in row and "between" not in row
        return
    assert row["value"] == printed.value
    assert row["between"] == printed.between


def is_too_wide(worked: Worked) -> bool:
    """The house limit as the program begins with it: 10 points, or a quarter of the value."""
    if worked.share:
        return worked.half_width > 0.10
    return worked.half_width > (0.5 if worked.value < 10 else 0.25 * worked.value)


def test_a_group_on_the_readout_stands_alone(walk):
    section, worked = walk.readout[4], ONE_REGION["Lowmere"]
    printed = worked.printed()
    assert printed.range in section["sentence"]
    (row,) = section["rows"]
    assert [row["value"], row["between"], row["answers"]] == [
        printed.value,
        printed.between,
        str(worked.base),
    ]
    assert section["headline"] == "5 " + (
        f"{printed.full} of garden centres (Lowmere) answered “Yes”: Do you stock peat-free compost"
    )


def test_nothing_foreign_was_asked_for(walk):
    assert walk.faults == []
