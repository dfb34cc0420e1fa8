from __future__ import annotations

from dataclasses import replace

import pytest

from app.study.questions import QuestionKind
from app.study.sample_studies import garden_centres
from app.widgets.deliveries import deliver, open_sample
from tests.support.screen_windows import Window
from tests.support.small_studies import orchard, settle


@pytest.fixture
def fresh(store):
    """The sample study before anything is settled."""
    return open_sample(store, garden_centres())


def question(store, study, key):
    return next(q for q in store.questions(study) if q.key == key)


def open_keys(store, study):
    return [q.key for q in store.questions(study) if q.needs_you]


def draft_field(window, part):
    return next(
        f.key for f in (*window.test.text_input, *window.test.text_area) if f.key.startswith(part)
    )


def test_it_opens_on_what_needs_a_person(store, fresh):
    window = Window("questions", study=fresh)
    need = open_keys(store, fresh)
    assert f"{len(need)} need you" in window.text
    assert f"Accept, next ({len(need) - 1})" in window.text
    shown = [key for key in window.buttons() if key.startswith("to_question_")]
    assert len(shown) == len(need)


def test_accept_goes_to_the_next_and_ends(store, fresh):
    window = Window("questions", study=fresh)
    need = open_keys(store, fresh)
    for left in range(len(need) - 1, -1, -1):
        window.press("accept")
        assert len(open_keys(store, fresh)) == left
    assert "Nothing needs you here." in window.text
    assert "accept" not in window.buttons()
    refused = {m.code: m.reason.value for m in question(store, fresh, "Q1").missing}
    assert refused == {"98": "refused", "99": "don't know"}


def test_a_proposal_turned_down_leaves_the_codes_as_answers(store, fresh):
    window = Window("questions", study=fresh, q="Q1")
    window.choose("choice_Q1_1", "as it is in the file").press("accept")
    settled = question(store, fresh, "Q1")
    assert not settled.needs_you and settled.missing == ()
    assert {"98", "99"} <= {a.code for a in settled.answers}


def test_a_choice_made_in_the_same_moment_as_accept_counts(store, fresh):
    window = Window("questions", study=fresh, q="Q1")
    next(r for r in window.test.radio if r.key == "choice_Q1_1").set_value("as it is in the file")
    window.press("accept")
    assert question(store, fresh, "Q1").missing == ()


def test_all_proposals_are_accepted_at_once(store, fresh):
    window = Window("questions", study=fresh)
    count = len(open_keys(store, fresh))
    assert f"Accept all proposals ({count})" in window.text
    window.press("accept_all")
    assert open_keys(store, fresh) == []
    assert window.messages[0].startswith(f"The proposals for {count} questions are accepted.")
    assert "accept_all" not in window.buttons()
    assert "0 need you" in window.text


def test_accepting_all_is_refused_as_a_whole_when_one_was_changed(store, fresh):
    first, second = Window("questions", study=fresh), Window("questions", study=fresh)
    count = len(open_keys(store, fresh))
    first.press("accept")
    second.press("accept_all")
    assert "changed in another window" in second.messages[0]
    assert len(open_keys(store, fresh)) == count - 1


def test_set_aside_take_back_and_read_afresh(store, fresh):
    window = Window("questions", study=fresh, q="Q9").press("set_aside")
    assert question(store, fresh, "Q9").set_aside
    window.press("set_aside")
    assert not question(store, fresh, "Q9").set_aside
    before = question(store, fresh, "Q1")
    window.go("questions", study=fresh, q="Q1").press("accept")
    window.go("questions", study=fresh, q="Q1").press("read_afresh")
    again = question(store, fresh, "Q1")
    assert (again.needs_you, again.text, again.answers) == (True, before.text, before.answers)


def test_a_set_of_columns_is_read_afresh_with_its_texts(store, fresh):
    before = question(store, fresh, "Q7")
    Window("questions", study=fresh, q="Q7").press("read_afresh")
    again = question(store, fresh, "Q7")
    assert (again.kind, again.columns) == (before.kind, before.columns)
    assert (again.text, again.answers) == (before.text, before.answers)


def test_filter_search_and_pages(fresh):
    window = Window("questions", study=fresh, show="all")
    shown = [key for key in window.buttons() if key.startswith("to_question_")]
    assert len(shown) == 20
    window.press("page_on")
    assert window.address["page"] == "1"
    window.type("address_find", "compost")
    assert window.address["find"] == "compost" and "page" not in window.address
    assert "to_question_Q5" in window.buttons() and "to_question_Q1" not in window.buttons()
    window.type("address_find", "zzz")
    assert "No question here." in window.text
    assert window.problems == []


@pytest.mark.parametrize("page", ["-1", "x", "99999", "9" * 5_000, "\u0664"])
def test_a_page_that_is_not_there(fresh, page):
    assert Window("questions", study=fresh, show="all", page=page).problems == []


def test_an_address_with_a_question_that_is_not_there(fresh):
    window = Window("questions", study=fresh, q="Q99<b>")
    assert window.problems == [
        "Please look: This study has no question Q99<b>: choose one from the list."
    ]


def test_a_row_opens_its_question(store, fresh):
    settle(store, fresh)
    window = Window("questions", study=fresh).press("to_question_Q9")
    assert window.address["q"] == "Q9"
    assert window.link_to("Figure of this question") == f"study={fresh}&q=Q9"


def test_columns_named_like_parts_of_the_screen(store):
    data = b"list,card,row_Q1,Q1\n" + b"1,2,3,4\n2,3,4,5\n" * 20
    study = deliver(store, "", data, "odd.csv").study_id
    window = Window("questions", study=study, show="all")
    assert {"to_question_list", "to_question_card", "to_question_row_Q1"} <= window.buttons()


def test_text_and_labels_are_typed(store, fresh):
    window = Window("questions", study=fresh, q="Q9")
    window.enter("text_Q9_1", "Where do you buy?")
    answers = window.typed("answers_Q9_1").replace("Wholesaler = Wholesaler", "Wholesaler = Trade")
    window.enter("answers_Q9_1", answers).submit("Save the question")
    saved = question(store, fresh, "Q9")
    assert saved.text == "Where do you buy?"
    assert saved.label_of("Wholesaler") == "Trade"
    assert window.problems == []
    assert window.typed("text_Q9_2") == "Where do you buy?"


@pytest.mark.parametrize(
    ("part", "typed", "words"),
    [
        ("text", "  ", "The question has no text"),
        ("answers", "nonsense", "Line 1 of the answers"),
        ("answers", "1 = a\n1 = b", "The code 1 stands twice"),
        ("answers", "", "needs at least one"),
        ("missing", "98 = whatever", "is no reason"),
        ("missing", "Wholesaler = refused", "is an answer and a missing code"),
    ],
)
def test_wrong_lines_are_refused_and_stay_where_they_are(store, fresh, part, typed, words):
    before = question(store, fresh, "Q9")
    window = Window("questions", study=fresh, q="Q9")
    window.enter(f"{part}_Q9_1", typed).submit("Save the question")
    (problem,) = window.problems
    assert words in problem
    assert window.typed(f"{part}_Q9_1") == typed
    assert question(store, fresh, "Q9") == before
    window.go("questions", study=fresh, q="Q1").go("questions", study=fresh, q="Q9")
    assert window.typed(f"{part}_Q9_1") == typed
    window.press("drop_draft")
    assert window.problems == []
    assert window.typed("text_Q9_1") == before.text


def test_ten_thousand_characters_of_question(store, fresh):
    window = Window("questions", study=fresh, q="Q9")
    window.enter("text_Q9_1", "w" * 10_000).submit("Save the question")
    assert question(store, fresh, "Q9").text == "w" * 500


def test_a_form_filled_in_while_another_window_saved(store, fresh):
    first, second = (Window("questions", study=fresh, q="Q9") for _ in range(2))
    first.enter("text_Q9_1", "First words?").submit("Save the question")
    second.enter("text_Q9_1", "Second words?").submit("Save the question")
    assert question(store, fresh, "Q9").text == "First words?"
    assert "changed in another window a moment ago" in second.problems[0]
    assert second.typed(draft_field(second, "text_Q9")) == "Second words?"
    second.submit("Save the question")
    assert question(store, fresh, "Q9").text == "Second words?"
    assert second.problems == []


def test_accepted_in_two_windows(store, fresh):
    first, second = (Window("questions", study=fresh, q="Q1") for _ in range(2))
    first.press("accept")
    next(r for r in second.test.radio if r.key == "choice_Q1_1").set_value("as it is in the file")
    second.press("accept")
    assert "changed in another window" in second.messages[0]
    assert [m.code for m in question(store, fresh, "Q1").missing] == ["98", "99"]


def test_a_question_that_the_file_has_lost(store):
    study = orchard(store)
    asked = store.questions(study)
    store.replace_questions(study, [*asked, replace(asked[-1], key="Z", columns=("Z",))])
    window = Window("questions", study=study, q="Z")
    assert window.problems == [
        "Please look: The current file does not have this question; figures on it wait."
    ]
    window.press("read_afresh")
    assert window.messages == [
        "This question cannot be read afresh: the file has lost its columns."
    ]


def test_a_column_set_to_several_answers(store):
    study = orchard(store)
    window = Window("questions", study=study, q="Q2")
    assert QuestionKind.SEVERAL.value not in [
        str(o) for w in window.test.selectbox if w.key.startswith("kind_Q2") for o in w.options
    ]


def test_numbers_on_the_card_follow_the_decimal_comma(store):
    study = orchard(store)
    store.save_study(replace(store.study(study), decimal_mark=","))
    window = Window("questions", study=study, q="Q3")
    assert "from 10,5 to 220,5, median 1" in window.text


def test_all_set_aside(store):
    study = orchard(store)
    store.save_questions(
        study,
        [
            replace(s, question=replace(s.question, set_aside=True))
            for s in store.stored_questions(study)
        ],
    )
    for screen in ("file", "questions", "plan", "figure", "readouts"):
        window = Window(screen, study=study)
        assert len(window.problems) == (screen == "figure")
    assert "8 set aside" in Window("questions", study=study).text


def test_all_questions_are_one_click_away(store, fresh):
    window = Window("questions", study=fresh)
    window.press("all_questions")
    shown = [key for key in window.buttons() if key.startswith("to_question_")]
    assert len(shown) == min(20, len(store.questions(fresh)))
    assert "page 1 of 2" in window.text
    assert "all_questions" not in window.buttons()
