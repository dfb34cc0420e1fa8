"""What is said about a figure is true for every way of sampling, and English."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.study.figure_requests import FigureRequest, Statistic
from app.study.figures import compute_figure
from app.study.questions import MissingCode, MissingReason, QuestionKind
from app.study.sampling_plan import SamplingMethod
from app.study.sentences import between_words, describe, endless_words, sureness, value_words
from tests.support.studies import (
    DONT_KNOW,
    REFUSED,
    chance,
    choice,
    data_of,
    garden_data,
    number,
    question,
    ratings,
    strata,
    yes_no,
)

NB = "\u00a0"
YES = FigureRequest("Q4", Statistic.SHARE, ("Yes",))
AVERAGE = FigureRequest("Q1", Statistic.AVERAGE)
FORTY_TWO = (168, 232)  # yes and no of 400: Wilson 37.3 to 46.9 %


def say(data, asked=YES):
    return describe(data, compute_figure(data, asked))


def printed(data, asked=YES):
    """Big number and interval as in a table."""
    figure = compute_figure(data, asked)
    words = describe(data, figure).words
    mark = data.study.decimal_mark
    return value_words(figure, words, mark), between_words(figure, words)


def test_a_share_of_an_endless_universe():
    text = say(yes_no(*FORTY_TWO))
    assert text.sentence == (
        f"Had all kiosks answered, the share would very likely lie between 37 and 47{NB}%."
    )
    assert text.title == "answered \u201cYes\u201d"
    assert text.who == "all kiosks"
    assert text.base_line == "400 answered of 400 asked"
    assert text.counts_like == "counts like 400 answers from an endless universe"
    assert text.headline == f"42{NB}% of kiosks answered \u201cYes\u201d: Question Q4"


def test_a_known_universe_is_named():
    text = say(yes_no(*FORTY_TWO, chance(1184)))
    assert text.sentence.startswith(f"Had all 1,184{NB}kiosks answered, the share would")
    assert text.base_line == "400 answered of 1,184"
    assert (
        text.counts_like == "counts like 604 answers from an endless universe"
    )  # 400/(1-400/1184)


@pytest.mark.parametrize(
    ("method", "lead"),
    [
        (
            SamplingMethod.EVERYBODY,
            f"Had all 1,184{NB}kiosks answered, and were the silent ones like those who did,",
        ),
        (
            SamplingMethod.QUOTA,
            f"If these answers stand for all 1,184{NB}kiosks, which is an assumption,",
        ),
        (
            SamplingMethod.NOT_SURE,
            "If people were drawn by chance, which is not known, and all "
            f"1,184{NB}kiosks had answered,",
        ),
    ],
)
def test_every_method_says_what_it_assumes(method, lead):
    sentence = say(yes_no(*FORTY_TWO, chance(1184, method=method))).sentence
    assert sentence.startswith(f"{lead} the share would very likely lie between ")


def test_a_study_that_named_no_unit_speaks_of_people():
    plan = replace(chance(), unit_many="respondents")
    text = say(yes_no(*FORTY_TWO, plan))
    assert text.sentence.startswith("Had everybody answered, ")
    assert text.who == "everybody"
    known = say(yes_no(*FORTY_TWO, replace(plan, universe_size=5000)))
    assert known.sentence.startswith(f"Had all 5,000{NB}people answered, ")


def test_a_group():
    data = garden_data()
    asked = FigureRequest("Q6", Statistic.AVERAGE, (), "REGION", "Lowmere")
    text = say(data, asked)
    assert text.sentence.startswith(
        "Had all garden centres in the group \u201cLowmere\u201d answered, the average would very "
        "likely lie between "
    )
    assert text.who == "Region: Lowmere"
    assert text.base_line == "150 answered of 150 asked in this group"
    assert text.headline.startswith("Average ") and " (Lowmere): How many people" in text.headline
    plan = replace(chance(), unit_many="respondents")
    nobody = data_of(
        {"Q4": ["Yes", "No"] * 9, "area": ["N"] * 18},
        [choice("Q4", "Yes", "No"), choice("area", "N")],
        plan,
    )
    sentence = say(nobody, replace(YES, group_question="area", group_answer="N")).sentence
    assert sentence.startswith("Had everybody in the group \u201cN\u201d answered, ")


def test_nobody_chose_it():
    """0 of 40: Wilson 0 to 8.8 %."""
    data = yes_no(0, 40)
    assert printed(data) == ("0 of 40", f"up to 9{NB}%")
    text = say(data)
    assert text.sentence == (
        f"Had all kiosks answered, the share would very likely be no more than 9{NB}%."
    )
    assert text.headline == "None of 40 kiosks answered \u201cYes\u201d: Question Q4"


def test_everybody_chose_it():
    data = yes_no(40, 0)
    assert printed(data) == ("40 of 40", f"at least 91{NB}%")
    text = say(data)
    assert text.sentence == (
        f"Had all kiosks answered, the share would very likely be no less than 91{NB}%."
    )
    assert text.headline == "All of 40 kiosks answered \u201cYes\u201d: Question Q4"


def test_an_end_too_small_to_print_is_left_out_of_the_sentence():
    """2 of 1,000: Wilson 0.05 to 0.73 %."""
    data = yes_no(2, 998)
    assert printed(data) == (f"0.2{NB}%", f"0.1 to 0.7{NB}%")
    data = yes_no(1, 999)  # Wilson 0.02 to 0.56 %
    assert printed(data)[1] == f"under 0.1 to 0.6{NB}%"
    assert say(data).sentence.endswith(f"be no more than 0.6{NB}%.")
    assert say(yes_no(999, 1)).sentence.endswith(f"be no less than 99.4{NB}%.")


def test_a_census_has_no_sampling_error():
    text = say(yes_no(18, 24, chance(42)))
    assert text.sentence == (
        f"Everybody was asked and answered: the share is 42.9{NB}%, without sampling error."
    )
    assert text.counts_like == ""
    assert printed(yes_no(0, 42, chance(42))) == ("0 of 42", f"0.0{NB}%")


def test_a_group_of_which_everybody_answered():
    data = data_of(
        {"Q1": [5.0, 7.0, 8.0, 3.0, 4.0], "area": [*"NNNSS"]},
        [ratings([1]).questions[0], choice("area", "N", "S")],
        chance(strata_column="area", strata=strata(N=3, S=90)),
    )
    sentence = say(data, replace(AVERAGE, group_question="area", group_answer="N")).sentence
    assert sentence.startswith("Everybody in this group was asked and answered: the average is 6")


def test_equal_answers_are_no_census():
    assert say(ratings([7] * 40), AVERAGE).sentence == (
        "All 40 who answered said 7, so their answers do not show how far the average may be from "
        "the truth."
    )


def test_a_median_that_many_gave_is_no_census():
    data = ratings([6] * 5 + [7] * 90 + [8] * 5)
    sentence = say(data, FigureRequest("Q1", Statistic.MEDIAN)).sentence
    assert sentence == (
        "The median is 7; so many gave this answer that the interval begins and ends with it."
    )


def test_a_number_the_plan_itself_fixes():
    asked = FigureRequest("REGION", Statistic.TOTAL, ("Lowmere",))
    text = say(garden_data(), asked)
    assert text.sentence == (
        "The number that answered \u201cLowmere\u201d is 331: the sampling plan itself fixes it, "
        "so it cannot vary."
    )
    assert text.headline == "331 garden centres answered \u201cLowmere\u201d: Region"


def test_too_few_to_say():
    text = say(ratings([7]), AVERAGE)
    assert text.sentence == "There are too few answers to say how far this may be from the truth."
    assert printed(ratings([7]), AVERAGE)[1] == "too few answers to say"


def test_totals():
    data = garden_data()
    spend = say(data, FigureRequest("Q5", Statistic.TOTAL))
    assert (
        f"{NB}garden centres answered, the total would very likely lie between " in spend.sentence
    )
    people = say(data, FigureRequest("Q7", Statistic.TOTAL, ("Q7_1",)))
    assert "the number that chose \u201cLindenroot\u201d would very likely lie" in people.sentence
    assert people.title == "in all chose \u201cLindenroot\u201d"
    assert people.headline.endswith(
        " garden centres chose \u201cLindenroot\u201d: Which brands do you stock"
    )


def test_several_answers_counted_together():
    text = say(garden_data(), FigureRequest("Q7", Statistic.SHARE, ("Q7_1", "Q7_2")))
    assert text.title == "chose \u201cLindenroot\u201d or \u201cMarlow Peat\u201d"
    assert text.headline.endswith(
        "of garden centres chose \u201cLindenroot\u201d or \u201cMarlow Peat\u201d: "
        "Which brands do you stock"
    )


def test_scales_name_their_ends():
    assert say(ratings([1, 5, 9]), AVERAGE).title == "average, on a scale from 0 to 10"


@pytest.mark.parametrize(
    ("yes", "no", "start"),
    [
        (200, 200, "Half of kiosks answered"),
        (100, 300, "A quarter of kiosks answered"),
        (300, 100, "Three quarters of kiosks answered"),
        (199, 201, f"50{NB}% of kiosks answered"),
        (1, 999, f"0.1{NB}% of kiosks answered"),
    ],
)
def test_parts_in_words_only_where_they_are_true(yes, no, start):
    assert say(yes_no(yes, no)).headline.startswith(start)


@pytest.mark.parametrize(
    ("level", "words"), [(0.9, "probably"), (0.95, "very likely"), (0.99, "almost certainly")]
)
def test_levels_in_words(level, words):
    assert sureness(level) == words
    sentence = say(yes_no(*FORTY_TWO), replace(YES, confidence=level)).sentence
    assert f"would {words} lie" in sentence


def test_base_lines_name_every_reason():
    answers = ["Yes"] * 12 + ["No"] * 18 + ["99"] * 6 + ["98"] * 4 + [None] * 2
    data = data_of(
        {"Q4": answers, "Q5": range(42)},
        [choice("Q4", "Yes", "No", missing=(DONT_KNOW, REFUSED)), number()],
        chance(84),
    )
    assert say(data).base_line == (
        "30 answered of 84; 6 said don\u2019t know; 4 refused; 2 gave no answer"
    )
    assert say(data, replace(YES, missing_counted=True)).base_line == (
        "40 answered of 84; don\u2019t know and refused are counted in; 2 gave no answer"
    )


def test_an_average_never_counts_those_who_did_not_know():
    data = ratings([5, 6, 99, 7])
    line = say(data, replace(AVERAGE, missing_counted=True)).base_line
    assert line == "3 answered of 4 asked; 1 said don\u2019t know"


def test_who_was_not_asked_is_not_counted_as_asked():
    not_asked = MissingCode("-1", MissingReason.NOT_ASKED)
    data = data_of(
        {"Q13": [1.0, 5.0, 3.0, -1.0]},
        [question("Q13", QuestionKind.SCALE, [*"12345"], (not_asked,))],
        chance(90),
    )
    asked = FigureRequest("Q13", Statistic.AVERAGE)
    assert say(data, asked).base_line == "3 answered of 3 asked"


def test_the_decimal_comma():
    text = say(yes_no(1, 999, chance(11840), decimal_mark=","))
    assert f"11.840{NB}kiosks" in text.sentence
    assert "0,5" in text.sentence
    assert text.base_line == "1.000 answered of 11.840"


def test_a_column_gives_its_step_and_the_endless_interval_follows():
    data = ratings([5, 6, 7, 8] * 30, chance(400))
    figure = compute_figure(data, AVERAGE)
    assert describe(data, figure).words.step == 0.01
    assert describe(data, figure, step=1.0).words.value == "7"
    assert endless_words(figure, ".").step == 0.01
    assert endless_words(figure, ".", step=1.0).step == 1.0


def test_no_sentence_speaks_of_a_probability_of_the_truth():
    for method in SamplingMethod:
        more = {"clusters_column": "Q4"} if method is SamplingMethod.GROUPS else {}
        text = say(yes_no(30, 50, chance(500, method=method, **more)))
        assert "probab" not in text.sentence.replace("probably", "")
        assert f"95{NB}%" not in text.sentence and "95 %" not in text.sentence
