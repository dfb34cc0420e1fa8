"""The address is the state: reload, Back, Forward and a bookmark bring the same screen back."""

from __future__ import annotations

import re

import pytest

from tests.support import browser_pages as pages

QUESTION = "Q4 · Do you stock peat-free compost?"
OTHER = "Q1 · How satisfied are you with the service of the association? (0 to 10)"


@pytest.fixture(scope="module")
def study(server, browser):
    page, _ = pages.opened_page(browser, server.address)
    found = pages.open_sample(page, server.address)
    page.context.close()
    return found


@pytest.fixture
def page(server, browser):
    opened, listener = pages.opened_page(browser, server.address)
    yield opened
    opened.context.close()
    assert listener.foreign == []


def figure_state(page) -> dict[str, object]:
    """What a person sees of a figure: the pickers, the number, the row that is marked."""
    page.wait_for_selector("[data-figure=value]")
    pages.idle(page)
    answers = page.locator(".st-key-address_answers [data-tag]")
    return {
        "question": pages.typed(page, "address_q"),
        "figure": pages.typed(page, "address_s"),
        "answers": answers.evaluate_all("tags => tags.map(tag => tag.ariaLabel)"),
        "who": pages.typed(page, "address_group"),
        "beside": pages.typed(page, "address_by"),
        "number": pages.text_of(page, "[data-figure=value]"),
        "sentence": pages.text_of(page, "[data-figure=sentence]"),
    }


def set_figure(page, server, study) -> dict[str, object]:
    pages.go(page, f"{server.address}/figure?study={study}")
    pages.choose(page, "address_q", QUESTION)
    pages.choose_answers(page, "No")
    pages.choose(page, "address_group", "Lowmere · Region")
    pages.choose(page, "address_by", "by Size of the garden centre")
    return figure_state(page)


def test_reload_and_a_bookmark_bring_back_a_figure(page, server, browser, study):
    before = set_figure(page, server, study)
    assert before["question"] == QUESTION
    assert before["answers"] == ["No"]
    assert before["who"] == "Lowmere · Region"
    page.reload()
    assert figure_state(page) == before
    bookmark, other = page.url, pages.opened_page(browser, server.address)[0]
    other.goto(bookmark)
    assert figure_state(other) == before
    other.context.close()


def test_back_and_forward_walk_through_figures(page, server, study):
    pages.go(page, f"{server.address}/figure?study={study}&q=Q4&s=share&a=Yes")
    first = figure_state(page)
    pages.choose(page, "address_q", OTHER)
    second = figure_state(page)
    pages.choose(page, "address_s", "median")
    third = figure_state(page)
    assert len({state["number"] for state in (first, second, third)}) == 3
    for move, state in (
        (page.go_back, second),
        (page.go_back, first),
        (page.go_forward, second),
        (page.go_forward, third),
    ):
        move()
        settles_at(page, state)


def settles_at(page, state: dict[str, object]) -> None:
    pages.until(
        lambda: pages.text_of(page, "[data-figure=value]") == state["number"],
        f"{state['number']} again at {page.url}",
        5,
    )
    assert figure_state(page) == state


def test_a_row_beside_the_figure_opens_as_a_figure_and_back_returns(page, server, study):
    pages.go(page, f"{server.address}/figure?study={study}&q=Q4&s=share&a=Yes&by=SIZE")
    before = figure_state(page)
    page.locator(".st-key-rails").get_by_role("button", name="small", exact=True).click()
    pages.idle(page)
    assert "ga=small" in page.url
    assert figure_state(page)["who"].startswith("small")
    page.go_back()
    settles_at(page, before)


def test_level_and_method_are_in_the_address(page, server, study):
    pages.go(page, f"{server.address}/figure?study={study}&q=Q4&s=share&a=Yes")
    usual = pages.text_of(page, "[data-figure=sentence]")
    pages.open_expander(page, "Method")
    pages.choose(page, "address_level", "99 %")
    wider = pages.text_of(page, "[data-figure=sentence]")
    assert wider != usual
    page.reload()
    pages.idle(page)
    assert pages.text_of(page, "[data-figure=sentence]") == wider
    assert "99 % level" in pages.text_of(page, "[data-figure=base]")


def questions_state(page) -> dict[str, object]:
    pages.idle(page)
    rows = page.locator("[class*=st-key-question_row_] button")
    return {
        "show": pages.typed(page, "address_show"),
        "find": pages.typed(page, "address_find"),
        "rows": [pages.plain(text) for text in rows.all_inner_texts()],
        "card": pages.text_of(page, ".st-key-question_card h2"),
    }


def test_questions_come_back_with_filter_search_and_choice(page, server, browser, study):
    pages.go(page, f"{server.address}/questions?study={study}")
    pages.choose(page, "address_show", "all questions")
    pages.fill(page, "address_find", "compost")
    page.locator("[class*=st-key-question_row_] button").filter(has_text="Q9").click()
    before = questions_state(page)
    assert before["find"] == "compost"
    assert 2 <= len(before["rows"]) <= 6
    assert before["card"] == "Where do you mainly buy compost?"
    page.reload()
    assert questions_state(page) == before
    other = pages.opened_page(browser, server.address)[0]
    other.goto(page.url)
    assert questions_state(other) == before
    other.context.close()


def test_back_from_a_question_opens_the_one_before(page, server, study):
    pages.go(page, f"{server.address}/questions?study={study}&show=all&q=Q8")
    assert questions_state(page)["card"].startswith("Did you close")
    page.locator("[class*=st-key-question_row_] button").filter(has_text="Q9").click()
    pages.until(
        lambda: questions_state(page)["card"].startswith("Where do you"), "the question clicked"
    )
    page.go_back()
    pages.until(
        lambda: questions_state(page)["card"].startswith("Did you close"), "the one before", 5
    )


def test_the_way_between_screens_is_walked_back_with_the_study(page, server, study):
    pages.go(page, f"{server.address}/figure?study={study}&q=Q4&s=share&a=No")
    number = pages.text_of(page, "[data-figure=value]")
    pages.journey(page, "Sampling plan")
    plan = {key: pages.typed(page, f"plan_{key}") for key in ("size", "unit_one", "source")}
    assert plan["size"] == "1,184"
    pages.journey(page, "Readout")
    page.go_back()
    page.wait_for_url(re.compile("/plan"))
    pages.idle(page)
    assert plan == {key: pages.typed(page, f"plan_{key}") for key in plan}
    page.go_back()
    page.wait_for_url(re.compile("/figure"))
    pages.until(
        lambda: pages.text_of(page, "[data-figure=value]") == number, "the figure left behind", 5
    )
    page.go_forward()
    page.wait_for_url(re.compile("/plan"))
    pages.idle(page)
    assert pages.typed(page, "plan_size") == "1,184"


def test_an_address_that_names_nothing_is_answered_in_a_sentence(page, server, study):
    pages.go(page, f"{server.address}/questions?study={study}&q=Q99")
    assert "This study has no question Q99" in pages.text_of(page, "[role=alert]")
    pages.go(page, f"{server.address}/figure?study=nothing")
    assert "This study is not here any more" in pages.text_of(page, "[role=alert]")
    pages.go(page, f"{server.address}/figure?study={study}&q=Q99&s=odd&g=none&level=7")
    page.wait_for_selector("[data-figure=value]")
