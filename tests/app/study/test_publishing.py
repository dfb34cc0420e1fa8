"""What stands in the way of publishing, each with what to do."""

from __future__ import annotations

from dataclasses import replace

from app.study.figure_requests import FigureRequest, Statistic
from app.study.publishing import obstacles_of
from app.study.questions import Proposal
from app.study.sampling_plan import SamplingMethod
from tests.support.studies import chance, choice, data_of, yes_no

YES = FigureRequest("Q4", Statistic.SHARE, ("Yes",))


def sentences(data, *requests):
    return [(o.screen, o.question, o.sentence) for o in obstacles_of(data, requests or (YES,))]


def test_nothing_in_the_way():
    assert sentences(yes_no(30, 30)) == []


def test_a_provisional_plan():
    data = yes_no(30, 30, replace(chance(), provisional=True))
    assert sentences(data) == [
        ("plan", "", "The sampling plan is provisional: say how people got in.")
    ]


def test_not_sure_cannot_be_published():
    ((screen, _, sentence),) = sentences(yes_no(30, 30, chance(method=SamplingMethod.NOT_SURE)))
    assert screen == "plan"
    assert sentence.endswith("Ask who drew the sample, then choose a method.")


def test_contradictions_that_block():
    ((screen, _, sentence),) = sentences(yes_no(30, 30, chance(10)))
    assert screen == "plan"
    assert "The file has 60 answers but the universe only 10" in sentence


def test_open_proposals_missing_and_set_aside_questions_each_once():
    open_ = Proposal("99", None, None, "99 may be no answer.", "")
    data = data_of(
        {"Q4": ["Yes", "No"], "area": ["N", "S"], "old": ["x", "y"]},
        [
            replace(choice("Q4", "Yes", "No"), proposals=(open_,)),
            choice("area", "N", "S"),
            replace(choice("old", "x", "y"), set_aside=True),
        ],
    )
    asked = (
        replace(YES, split_by="area"),
        replace(YES, group_question="old", group_answer="x"),
        replace(YES, question="Q9"),
        YES,
    )
    assert sentences(data, *asked) == [
        (
            "questions",
            "Q4",
            "\u201cQuestion Q4?\u201d: 99 may be no answer. Accept or turn down the proposal "
            "first.",
        ),
        (
            "questions",
            "old",
            "\u201cQuestion old?\u201d is set aside or holds no answers to count: use it again, or "
            "take the figure out.",
        ),
        ("questions", "Q9", "Q9 is not in the current file: take the figure out."),
    ]
