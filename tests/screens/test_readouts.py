from __future__ import annotations

import json
from dataclasses import replace
from datetime import UTC, datetime

import pytest

from app.sharing.link_tokens import hash_token
from app.store import StoreError
from app.study.figure_requests import FigureRequest, Statistic
from app.study.sampling_plan import SamplingMethod
from app.study.study import HouseLimit, LinkStatus
from tests.support.screen_windows import Window
from tests.support.small_studies import CHANCE, orchard, sample

AVERAGE = FigureRequest("Q1", Statistic.AVERAGE, split_by="REGION")
SHARE = FigureRequest("Q3", Statistic.SHARE, ("Less",))
YES = FigureRequest("Q4", Statistic.SHARE, ("Yes",))


@pytest.fixture
def garden(store):
    study = sample(store)
    for request in (AVERAGE, SHARE):
        store.keep_figure(study, request)
    return study


def ids(store, study):
    return [k.id for k in store.kept_figures(study)]


def published(window):
    """Return the token in the link shown once."""
    (code,) = (c.value for c in window.test.code)
    return code.rpartition("/")[2]


def status(store, token):
    return store.find_by_token_hash(hash_token(token), datetime.now(UTC))[0]


def test_without_kept_figures(store):
    study = orchard(store, CHANCE)
    window = Window("readouts", study=study)
    assert "No figure is kept yet." in window.text
    assert "Keep at least one figure first." in window.text
    assert "publish" not in window.buttons()
    assert window.link_to("To a figure") == f"study={study}"


def test_kept_figures_stand_with_their_numbers(store, garden):
    window = Window("readouts", study=garden)
    first, second = ids(store, garden)
    assert "Average" in window.typed(f"headline_{first}")
    assert "answered \u201cLess\u201d" in window.typed(f"headline_{second}")
    assert window.problems == []
    assert window.link_to("Open") == f"study={garden}&q=Q1&s=average&by=REGION"


def test_headline_and_comment(store, garden):
    first, _ = ids(store, garden)
    window = Window("readouts", study=garden)
    window.type(f"headline_{first}", "  Members  are content ")
    window.type(f"comment_{first}", " Asked in March.\nBy mail. ")
    kept = store.kept_figures(garden)[0]
    assert (kept.headline, kept.comment) == ("Members are content", "Asked in March.\nBy mail.")
    proposed = Window("readouts", study=garden).type(f"headline_{first}", "")
    assert proposed.typed(f"headline_{first}").startswith("Average")


def test_headline_and_comment_typed_in_the_same_moment(store, garden):
    first, _ = ids(store, garden)
    window = Window("readouts", study=garden)
    window.enter(f"headline_{first}", "Content").enter(f"comment_{first}", "By mail").run()
    kept = store.kept_figures(garden)[0]
    assert (kept.headline, kept.comment) == ("Content", "By mail")
    assert window.problems == []


def test_ten_thousand_characters_are_cut_where_the_field_ends(store, garden):
    first, _ = ids(store, garden)
    window = Window("readouts", study=garden)
    window.type(f"headline_{first}", "h" * 10_000).type(f"comment_{first}", "c" * 10_000)
    kept = store.kept_figures(garden)[0]
    assert (len(kept.headline), len(kept.comment)) == (160, 2000)
    assert window.problems == []


@pytest.mark.parametrize("field", ["headline", "comment"])
def test_words_typed_in_a_stale_window_are_not_lost(store, garden, field):
    key = f"{field}_{ids(store, garden)[0]}"
    first, second = Window("readouts", study=garden), Window("readouts", study=garden)
    first.type(key, "First")
    second.type(key, "Second")
    assert getattr(store.kept_figures(garden)[0], field) == "First"
    assert "changed in another window a moment ago" in second.problems[0]
    assert second.typed(key) == "Second"
    second.press(f"drop_{key}")
    assert (second.typed(key), second.problems) == ("First", [])
    first.type(key, "Third")
    second.type(key, "Fourth").press(f"again_{key}")
    assert getattr(store.kept_figures(garden)[0], field) == "Fourth"
    assert second.problems == []


def test_words_for_a_figure_taken_out_elsewhere_are_given_back(store, garden):
    first, _ = ids(store, garden)
    window = Window("readouts", study=garden)
    store.remove_kept(first)
    window.type(f"comment_{first}", "A long thought.")
    assert window.messages == [
        "This figure was taken out in another window. You had typed: \u201cA long thought.\u201d"
    ]


def test_figures_move_and_go(store, garden):
    first, second = ids(store, garden)
    window = Window("readouts", study=garden)
    assert window.test.button(key=f"Up_{first}").disabled
    window.press(f"Down_{first}")
    assert ids(store, garden) == [second, first]
    window.press(f"Up_{first}")
    assert ids(store, garden) == [first, second]
    window.press(f"out_{first}")
    assert ids(store, garden) == [second]
    assert window.problems == window.messages == []


@pytest.mark.parametrize("action", ["Down", "out"])
def test_a_figure_taken_out_elsewhere_cannot_be_moved(store, garden, action):
    first, second = ids(store, garden)
    window = Window("readouts", study=garden)
    store.remove_kept(first)
    window.press(f"{action}_{first}")
    assert len(window.messages) == 1
    assert ids(store, garden) == [second]


def test_publish_shows_the_link_once(store, garden):
    window = Window("readouts", study=garden)
    window.enter("readout_title", "Spring wave").press("publish")
    (readout,) = store.readouts(garden)
    assert (readout.number, readout.title) == (1, "Spring wave")
    assert (readout.expires_at - readout.published_at).days in (29, 30)
    token = published(window)
    assert status(store, token) is LinkStatus.LIVE
    assert "This link opens only on this computer." in window.text
    assert "Readout 1 Spring wave" in window.text
    window.run()
    assert not window.test.code
    assert token not in window.text


def test_words_typed_in_the_same_moment_are_published(store, garden):
    first, _ = ids(store, garden)
    window = Window("readouts", study=garden)
    window.enter(f"headline_{first}", "Members are content").press("publish")
    (readout,) = store.readouts(garden)
    assert "Members are content" in readout.html
    assert window.messages == []


def test_days_and_an_empty_title(store, garden):
    window = Window("readouts", study=garden).enter("readout_title", "  ")
    window.choose("link_days", "0").press("publish")
    (readout,) = store.readouts(garden)
    assert (readout.title, readout.expires_at) == ("Garden centres", None)
    assert "link open without end" in window.text


def test_revoke_and_a_new_link(store, garden):
    window = Window("readouts", study=garden).press("publish")
    token, (readout,) = published(window), store.readouts(garden)
    window.press(f"revoke_{readout.id}")
    assert window.messages == [
        "The link of readout 1 is withdrawn: nobody can open it from now on. "
        "Copies and files remain."
    ]
    assert status(store, token) is LinkStatus.REVOKED
    assert f"revoke_{readout.id}" not in window.buttons()
    window.press(f"link_{readout.id}")
    fresh = published(window)
    assert fresh != token
    assert status(store, fresh) is LinkStatus.LIVE
    window.press(f"link_{readout.id}")
    assert status(store, fresh) is LinkStatus.REVOKED


def test_the_file_for_mail_needs_nothing_else(store, garden):
    window = Window("readouts", study=garden).press("publish")
    (readout,) = store.readouts(garden)
    (button,) = window.test.get("download_button")
    assert button.proto.label == "Page as a file"
    assert json.loads(readout.frozen)["number"] == 1


def test_a_second_readout_is_frozen_beside_the_first(store, garden):
    window = Window("readouts", study=garden).press("publish")
    store.keep_figure(garden, YES)
    window.run().press("publish")
    assert [r.number for r in store.readouts(garden)] == [2, 1]
    assert status(store, published(window)) is LinkStatus.LIVE


@pytest.mark.parametrize("change", ["figure", "plan", "question", "limit"])
def test_publishing_from_a_stale_window_is_refused(store, garden, change):
    window = Window("readouts", study=garden)
    if change == "figure":
        store.keep_figure(garden, YES)
    elif change == "plan":
        stored = store.plan(garden)
        store.save_plan(garden, replace(stored.plan, provisional=True), stored.version)
    elif change == "question":
        stored = store.stored_question(garden, "Q1")
        other = replace(stored.question, text="Another text")
        store.save_question(garden, other, version=stored.version)
    else:
        store.save_study(replace(store.study(garden), limit=HouseLimit(share_points=1)))
    window.press("publish")
    assert store.readouts(garden) == ()
    assert window.messages == [
        "Nothing was published. The figures, the questions or the plan were changed in another "
        "window: look at them again, then publish."
    ]


def test_publishing_when_the_store_refuses(store, garden, monkeypatch):
    def refuse(*_, **__):
        raise StoreError("The disk is full: free some space, then try again.")

    monkeypatch.setattr(type(store), "publish", refuse)
    window = Window("readouts", study=garden).enter("readout_title", "Spring").press("publish")
    assert window.messages == [
        "Nothing was published. The disk is full: free some space, then try again."
    ]
    assert window.typed("readout_title") == "Spring"
    assert not window.test.code


@pytest.mark.parametrize(
    ("plan", "words"),
    [
        (replace(CHANCE, provisional=True), "The sampling plan is provisional"),
        (replace(CHANCE, method=SamplingMethod.NOT_SURE), "How people got in is not known"),
        (replace(CHANCE, universe_size=50), "The file has 120 answers but the universe only 50"),
        (replace(CHANCE, method=SamplingMethod.GROUPS), "Say which column names the group"),
    ],
)
def test_what_stands_in_the_way_of_publishing(store, plan, words):
    study = orchard(store, plan)
    store.keep_figure(study, FigureRequest("Q2", Statistic.SHARE, ("Yes",)))
    window = Window("readouts", study=study)
    assert "Publishing waits for this:" in window.text
    assert words in window.text
    assert "publish" not in window.buttons()
    assert window.links[-1] == "Sampling plan"


@pytest.mark.parametrize(
    "method", [SamplingMethod.CHANCE, SamplingMethod.EVERYBODY, SamplingMethod.QUOTA]
)
def test_methods_that_can_be_published(store, method):
    study = orchard(store, replace(CHANCE, method=method))
    store.keep_figure(study, FigureRequest("Q2", Statistic.SHARE, ("Yes",)))
    window = Window("readouts", study=study).press("publish")
    assert status(store, published(window)) is LinkStatus.LIVE


def test_an_open_proposal_is_linked(store):
    study = orchard(store, CHANCE, settled=False)
    key = next(q.key for q in store.questions(study) if q.needs_you)
    other = next(q.key for q in store.questions(study) if q.key == "Q2")
    store.keep_figure(study, FigureRequest(other, Statistic.SHARE, ("Yes",)))
    assert "publish" in Window("readouts", study=study).buttons()
    store.keep_figure(study, FigureRequest(key, Statistic.AVERAGE))
    window = Window("readouts", study=study)
    assert "publish" not in window.buttons()
    queries = [p.proto.query_string for p in window.test.get("page_link")]
    assert f"study={study}&q={key}" in queries


def test_a_kept_figure_whose_question_is_gone(store, garden):
    store.replace_questions(garden, [q for q in store.questions(garden) if q.key != "Q3"])
    window = Window("readouts", study=garden)
    assert any("The current file has no question Q3" in p for p in window.problems)
    assert "Q3 is not in the current file: take the figure out." in window.text
    assert "publish" not in window.buttons()
    window.press(f"out_{ids(store, garden)[1]}")
    assert "publish" in window.buttons()


def test_held_back_figures_carry_no_number(store, garden):
    store.remove_kept(ids(store, garden)[0])
    shown = Window("figure", study=garden, q="Q3", s="share", a="Less").html
    value = shown.split('data-figure="value">')[1].split(" <small>")[0]
    assert value.endswith("\u00a0%")
    assert value in Window("readouts", study=garden).press("publish").html
    assert value in store.readouts(garden)[0].html
    store.save_study(replace(store.study(garden), limit=HouseLimit(share_points=0.5)))
    window = Window("readouts", study=garden)
    assert "hold back" in window.text
    window.press("publish")
    held = store.readouts(garden)[0]
    assert "held back: too wide" in held.html
    assert value not in held.html
    assert json.loads(held.frozen)["held_back"] != []


def test_the_decimal_comma_is_chosen_here(store, garden):
    window = Window("readouts", study=garden).choose("mark", ",")
    assert store.study(garden).decimal_mark == ","
    assert "1.184" in window.text
    window.press("publish")
    (readout,) = store.readouts(garden)
    assert "395 of 1.184" in readout.html.replace("\u00a0", " ")


def test_the_decimal_mark_in_a_stale_window(store, garden):
    window = Window("readouts", study=garden)
    store.save_study(replace(store.study(garden), name="Another name"))
    window.choose("mark", ",")
    assert "changed in another window" in window.messages[0]
    assert store.study(garden).decimal_mark == "."
    assert window.chosen("mark") == "."


def test_what_people_type_is_shown_as_typed(store, garden):
    first, _ = ids(store, garden)
    hostile = "<img src=x onerror=alert(1)> [a](http://x.example) **b**"
    window = Window("readouts", study=garden).type(f"headline_{first}", hostile)
    window.type(f"comment_{first}", hostile).enter("readout_title", hostile).press("publish")
    (readout,) = store.readouts(garden)
    assert "<img" not in window.html and "<img" not in readout.html
    assert readout.title == hostile
