"""Questions: order, versions, all or none."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.store import StaleVersionError, StoredQuestion, UnknownQuestionError
from app.study.questions import (
    Answer,
    MissingCode,
    MissingReason,
    Proposal,
    Question,
    QuestionKind,
)

FULL = Question(
    key="q4",
    columns=("q4_1", "q4_2"),
    kind=QuestionKind.SEVERAL,
    text="Which do you stock? «Été» 🌿",
    answers=(Answer("q4_1", "Peat-free"), Answer("q4_2", "Bark")),
    missing=(MissingCode("99", MissingReason.REFUSED),),
    proposals=(Proposal("98", MissingReason.DONT_KNOW, None, "Far from the rest.", "2 or 9."),),
    evidence="Two columns with the same stem.",
    set_aside=True,
)
SCALE = Question("q1", ("q1",), QuestionKind.SCALE, "How satisfied are you?")
NUMBER = Question("q9", ("q9",), QuestionKind.NUMBER, "How much do you spend?")


def test_questions_come_back_in_order(database, study) -> None:
    assert database.questions(study.id) == ()
    database.replace_questions(study.id, [NUMBER, FULL, SCALE])
    assert database.questions(study.id) == (NUMBER, FULL, SCALE)
    assert database.stored_questions(study.id)[1] == StoredQuestion(FULL, 1)
    assert database.stored_question(study.id, "q4") == StoredQuestion(FULL, 1)


def test_a_change_keeps_place_and_raises_the_version(database, study) -> None:
    database.replace_questions(study.id, [NUMBER, FULL, SCALE])
    settled = FULL.settled(accept=True)
    assert database.save_question(study.id, settled, version=1) == StoredQuestion(settled, 2)
    assert database.questions(study.id) == (NUMBER, settled, SCALE)
    assert [stored.version for stored in database.stored_questions(study.id)] == [1, 2, 1]


def test_two_people_may_settle_different_questions(database, study) -> None:
    database.replace_questions(study.id, [NUMBER, SCALE])
    database.save_question(study.id, replace(NUMBER, text="New"), version=1)
    database.save_question(study.id, replace(SCALE, text="New"), version=1)
    assert {question.text for question in database.questions(study.id)} == {"New"}


def test_an_older_version_is_refused(database, study, clock) -> None:
    database.replace_questions(study.id, [SCALE])
    database.save_question(study.id, replace(SCALE, text="First"), version=1)
    clock.go_on(minutes=3)
    with pytest.raises(StaleVersionError, match="three minutes ago"):
        database.save_question(study.id, replace(SCALE, text="Second"), version=1)
    assert database.questions(study.id)[0].text == "First"


def test_a_change_based_on_questions_that_were_replaced_is_refused(database, study) -> None:
    database.replace_questions(study.id, [SCALE, NUMBER])
    database.save_question(study.id, NUMBER, version=1)
    database.replace_questions(study.id, [SCALE])
    for version in (1, 2):
        with pytest.raises(StaleVersionError):
            database.save_question(study.id, replace(SCALE, text="Late"), version=version)
    assert database.stored_questions(study.id) == (StoredQuestion(SCALE, 3),)


def test_several_changes_are_kept_all_or_none(database, study) -> None:
    database.replace_questions(study.id, [SCALE, NUMBER])
    new = [replace(question, text="New") for question in (SCALE, NUMBER)]
    with pytest.raises(StaleVersionError):
        database.save_questions(study.id, [StoredQuestion(new[0], 1), StoredQuestion(new[1], 7)])
    assert database.questions(study.id) == (SCALE, NUMBER)
    saved = database.save_questions(study.id, [StoredQuestion(question, 1) for question in new])
    assert saved == tuple(StoredQuestion(question, 2) for question in new)
    assert database.stored_questions(study.id) == saved


def test_unknown_questions_are_named(database, study) -> None:
    with pytest.raises(UnknownQuestionError, match="no question under this address \\(q1\\)"):
        database.save_question(study.id, SCALE, version=1)
    with pytest.raises(UnknownQuestionError):
        database.stored_question(study.id, "q1")


def test_replacing_that_fails_keeps_the_earlier_questions(database, study) -> None:
    database.replace_questions(study.id, [SCALE])
    with pytest.raises(Exception, match="UNIQUE"):
        database.replace_questions(study.id, [NUMBER, NUMBER])
    assert database.questions(study.id) == (SCALE,)


def test_no_stamp_comes_back(database, study):
    seen = [database.question_stamp(study.id)]
    first = [NUMBER, FULL, SCALE]
    for _ in range(3):
        database.replace_questions(study.id, first)
        seen.append(database.question_stamp(study.id))
        for stored in database.stored_questions(study.id):
            database.save_question(study.id, stored.question, version=stored.version)
            seen.append(database.question_stamp(study.id))
        database.replace_questions(study.id, first[:1])
        seen.append(database.question_stamp(study.id))
    assert len(set(seen)) == len(seen) == 16
