from __future__ import annotations

from dataclasses import replace

import numpy as np
import pandas as pd

from app.study.question_guessing import guess_questions
from app.study.questions import MissingReason, QuestionKind
from app.study.study_changes import carry_over

FIRST = pd.DataFrame(
    {
        "id": [f"{i:03d}" for i in range(20)],
        "Q1": [*range(11), 5, 6, 7, 8, 9, 5, 6, 99, 99],
        "Q3": ["Post", "Web", "Web", "Web", "Post"] * 4,
        "Q4": [np.nan] * 20,
        "Q7_1": [0, 1] * 10,
        "Q7_2": [1, 1, 0, 0] * 5,
        "Q9": ["Yes", "No", "Yes", "Yes"] * 5,
    }
)


def settled(frame, texts=None):
    return tuple(q.settled(accept=True) for q in guess_questions(frame, texts or {}))


def carried(second, old=None, texts=None):
    return carry_over(old or settled(FIRST), guess_questions(second, texts or {}))


def by_key(result):
    return {question.key: question for question in result.questions}


def test_the_same_file_changes_nothing():
    old = settled(FIRST)
    result = carried(FIRST, old)
    assert result.questions == old
    assert result.kept == tuple(q.key for q in old)
    assert (result.gone, result.new, result.changed, result.sentences) == ((), (), (), ())


def test_what_a_person_settled_is_kept():
    old = tuple(
        replace(q, text="My words", kind=QuestionKind.NUMBER, answers=()) if q.key == "Q1" else q
        for q in settled(FIRST)
    )
    kept = by_key(carried(FIRST, old))["Q1"]
    assert (kept.text, kept.kind) == ("My words", QuestionKind.NUMBER)
    assert kept.missing[0].reason is MissingReason.DONT_KNOW
    assert kept.proposals == ()


def test_columns_that_are_missing_or_new_are_named():
    second = FIRST.drop(columns="Q9").assign(Q15=["a", "b"] * 10)
    result = carried(second)
    assert (result.gone, result.new) == (("Q9",), ("Q15",))
    assert result.sentences == ("Q9 is missing from the new file.", "Q15 is new.")


def test_a_renamed_column_is_suspected_by_its_text():
    texts = {"Q9": "Are you a member?"}
    result = carried(
        FIRST.rename(columns={"Q9": "MEMBER"}),
        settled(FIRST, texts),
        {"MEMBER": "Are you a member?"},
    )
    assert result.renamed == (("Q9", "MEMBER"),)
    assert any(s.startswith("MEMBER asks the same as Q9") for s in result.sentences)


def test_answers_never_seen_are_appended():
    second = FIRST.assign(Q3=["Fax", "Web", "Web", "Post"] * 5)
    result = carried(second)
    assert [a.code for a in by_key(result)["Q3"].answers] == ["Web", "Post", "Fax"]
    (change,) = result.changed
    assert change.sentence == "Q3: Fax is new and added at the end."
    assert [a.code for a in change.added] == ["Fax"]


def test_a_new_missing_code_is_proposed_and_a_settled_one_is_not():
    second = FIRST.assign(Q1=[*range(11), 5, 6, 7, 8, 9, 98, 98, 99, 99])
    question = by_key(carried(second))["Q1"]
    assert [p.code for p in question.proposals] == ["98"]
    assert [a.code for a in question.answers] == [*map(str, range(11)), "98"]
    assert [a.code for a in question.settled(accept=True).answers] == [*map(str, range(11))]


def test_a_set_gains_and_loses_columns():
    second = FIRST.drop(columns="Q7_1")
    second.insert(5, "Q7_3", [0, 0, 1, 1] * 5)
    result = carried(second)
    question = by_key(result)["Q7"]
    assert question.columns == ("Q7_2", "Q7_3")
    assert [a.code for a in question.answers] == ["Q7_2", "Q7_3"]
    assert result.sentences == (
        "Q7: Q7_3 is new and added at the end.",
        "Q7: Q7_1 has no column in the new file and is left out.",
    )


def test_a_set_that_looks_like_single_questions_stays_a_set():
    second = FIRST.assign(Q7_2=["often", "never", "rarely", "often"] * 5)
    result = carried(second)
    question = by_key(result)["Q7"]
    assert question.kind is QuestionKind.SEVERAL
    assert question.columns == ("Q7_1", "Q7_2")
    assert [a.code for a in question.answers] == ["Q7_1", "Q7_2"]
    assert len(result.changed) == 1


def test_single_questions_that_look_like_a_set_stay_single():
    single = guess_questions(FIRST[["Q7_1"]], {}) + guess_questions(FIRST[["Q7_2"]], {})
    second = FIRST[["Q7_1", "Q7_2"]].assign(Q7_3=[0, 1] * 10)
    result = carried(second, single)
    assert result.kept == ("Q7_1", "Q7_2")
    assert result.gone == ()
    assert by_key(result)["Q7_1"].kind is QuestionKind.CHOICE
    assert [a.code for a in by_key(result)["Q7_1"].answers] == ["0", "1"]
    assert result.new == ("Q7",)
    assert by_key(result)["Q7"].columns == ("Q7_3",)


def test_an_empty_column_that_fills_up_is_read_anew():
    result = carried(FIRST.assign(Q4=["Yes", "No"] * 10))
    question = by_key(result)["Q4"]
    assert not question.set_aside
    assert [a.code for a in question.answers] == ["Yes", "No"]


def test_what_a_person_set_aside_stays_aside():
    old = tuple(replace(q, set_aside=True) if q.key == "Q9" else q for q in settled(FIRST))
    assert by_key(carried(FIRST, old))["Q9"].set_aside


def test_every_column_is_in_exactly_one_question():
    second = FIRST.assign(Q7_3=[0, 1] * 10, Z=list(range(20)))
    columns = [c for q in carried(second).questions for c in q.columns]
    assert sorted(columns) == sorted(second.columns)


def test_empty_columns_that_fill_up_together_become_one_question():
    first = FIRST.assign(Q8_1=[np.nan] * 20, Q8_2=[np.nan] * 20)
    result = carried(FIRST.assign(Q8_1=[0, 1] * 10, Q8_2=[1, 1, 0, 0] * 5), settled(first))
    assert by_key(result)["Q8"].columns == ("Q8_1", "Q8_2")
    assert result.new == ("Q8",)
    assert result.gone == ()
