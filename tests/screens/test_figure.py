from __future__ import annotations

import json
import re
from dataclasses import replace

import pytest

from app.store import StoreError
from app.study.figure_requests import FigureRequest, Statistic
from app.study.sampling_plan import SamplingMethod
from app.study.study import HouseLimit
from app.widgets.deliveries import deliver
from tests.support.screen_windows import Window
from tests.support.small_studies import CHANCE, SEPARATE, orchard, sample, save_plan


@pytest.fixture
def garden(store):
    return sample(store)


@pytest.fixture
def growers(store):
    return orchard(store, CHANCE)


def limit_fields(store, study):
    name = f"{study}_{store.study(study).version}"
    fields = ("share_points", "scale_part", "number_part", "note_part", "smallest_base")
    return {field: f"limit_{field}_{name}" for field in fields}


def test_it_opens_with_a_figure_and_everything_about_it(garden):
    window = Window("figure", study=garden, q="Q1")
    assert "How satisfied are you with the service of the association? (0 to 10)" in window.text
    assert "Had all 1,184 garden centres answered, the average would very likely lie" in window.text
    assert "Width check:" in window.text
    assert re.search(r"\d+ answered of 1,184; ", window.text)
    assert "counts like" in window.text and "95 % level" in window.text
    assert [e.label for e in window.test.expander] == [
        "How this number came about",
        "Numbers as a table",
        "Method",
    ]
    assert window.test.get("plotly_chart")
    assert window.problems == []
    assert "Not yet for clients" not in window.text


def test_pickers_write_the_address(garden):
    window = Window("figure", study=garden, q="Q1")
    window.choose("address_q", "Q3")
    assert (window.address["q"], window.address["s"]) == ("Q3", "share")
    answers = next(w for w in window.test.multiselect if w.key == "address_answers")
    answers.set_value(["Less", "Much more"])
    window.run()
    assert set(json.loads(window.address["a"])) == {"Less", "Much more"}
    assert "or \u201c" in window.text
    window.choose("address_group", json.dumps(["REGION", "Lowmere"]))
    assert (window.address["g"], window.address["ga"]) == ("REGION", "Lowmere")
    assert "in this group" in window.text
    window.choose("address_s", "total")
    assert window.address["s"] == "total"
    assert window.problems == []


def test_no_answer_chosen_falls_back_to_the_first(garden):
    window = Window("figure", study=garden, q="Q3", s="share", a="Less")
    next(w for w in window.test.multiselect if w.key == "address_answers").set_value([])
    window.run()
    assert window.problems == []
    assert 'data-figure="value"' in window.html


def test_a_row_beside_opens_as_a_figure(garden):
    window = Window("figure", study=garden, q="Q1").press("rail_2")
    assert window.address["g"] == "REGION" and window.address["ga"]
    assert f"in the group \u201c{window.address['ga']}\u201d" in window.text


def test_keep_and_take_out(store, garden):
    window = Window("figure", study=garden, q="Q1").press("keep")
    (kept,) = store.kept_figures(garden)
    assert kept.request == FigureRequest("Q1", Statistic.AVERAGE, split_by="REGION")
    assert "Kept as figure 1 of the readout." in window.text
    window.press("unkeep")
    assert store.kept_figures(garden) == ()
    assert "keep" in window.buttons()


def test_taken_out_in_another_window(store, garden):
    window = Window("figure", study=garden, q="Q1").press("keep")
    store.remove_kept(store.kept_figures(garden)[0].id)
    window.press("unkeep")
    assert len(window.messages) == 1
    assert "kept figure" in window.messages[0]


def test_keeping_when_the_store_refuses(store, garden, monkeypatch):
    def refuse(*_):
        raise StoreError("The disk is full: free some space, then try again.")

    monkeypatch.setattr(type(store), "keep_figure", refuse)
    window = Window("figure", study=garden, q="Q1").press("keep")
    assert window.messages == ["The disk is full: free some space, then try again."]


@pytest.mark.parametrize(
    ("query", "named"),
    [
        ({"q": "Q99"}, "question Q99"),
        ({"q": "<b>x</b>"}, "question <b>x</b>"),
        ({"q": "Q1", "s": "mode"}, "figure mode"),
        ({"q": "Q1", "s": "total"}, "figure total"),
        ({"q": "Q3", "s": "share", "a": "Perhaps"}, "answer Perhaps"),
        ({"q": "Q3", "s": "share", "a": "[1, 2"}, "answer [1, 2"),
        ({"q": "Q3", "s": "share", "a": "[" * 5_000}, "answer ["),
        ({"q": "Q1", "g": "Q99", "ga": "1"}, "group Q99"),
        ({"q": "Q1", "g": "REGION"}, "group REGION"),
        ({"q": "Q1", "level": "0.5"}, "level 0.5"),
        ({"q": "Q1", "level": "nan"}, "level nan"),
        ({"q": "Q1", "level": "x"}, "level x"),
        ({"q": "Q3", "method": "magic"}, "method magic"),
    ],
)
def test_an_address_that_names_what_is_not_there(garden, query, named):
    window = Window("figure", study=garden, **query)
    (problem,) = window.problems
    assert named in problem
    assert problem.endswith("so another figure is shown: choose the one you want.")
    assert 'data-figure="value"' in window.html


@pytest.mark.parametrize(
    ("query", "words"),
    [
        ({"q": "Q1", "g": "REGION", "ga": "Atlantis"}, "has no answer Atlantis"),
        ({"q": "Q1", "g": "Q5", "ga": "7"}, "has no answer 7"),
        ({"q": "ID"}, "is set aside or holds no answers to count"),
        ({"q": "Q14"}, "is set aside or holds no answers to count"),
        ({"q": "Q1", "g": "ID", "ga": "1"}, "is set aside or holds no answers to count"),
    ],
)
def test_a_figure_that_cannot_be_given(garden, query, words):
    window = Window("figure", study=garden, **query)
    assert words in window.problems[0]
    assert 'data-figure="value"' not in window.html
    assert "keep" not in window.buttons()


@pytest.mark.parametrize("by", ["Q99", "Q5", "ID", "answers", "Q1"])
def test_rows_by_something_odd(garden, by):
    assert Window("figure", study=garden, q="Q1", by=by).problems == []


def test_a_group_nobody_is_in(store):
    data = b"G,Q\n" + b"a,1\na,2\na,3\nb,\n" * 10
    study = deliver(store, "", data, "x.csv").study_id
    window = Window("figure", study=study, q="Q", g="G", ga="b")
    assert "Nobody in this group answered" in window.problems[0]


def test_a_total_without_a_universe(store):
    study = orchard(store, replace(CHANCE, universe_size=None))
    window = Window("figure", study=study, q="Q3", s="total")
    assert window.problems[0] == (
        "Please look: A total needs the size of the universe: type it in the sampling plan."
    )


@pytest.mark.parametrize(
    ("method", "words"),
    [
        (SamplingMethod.CHANCE, "Had all 400 growers answered, the average would"),
        (SamplingMethod.EVERYBODY, "the silent ones"),
        (SamplingMethod.GROUPS, "Had all 400 growers answered, the average would"),
        (SamplingMethod.QUOTA, "which is an assumption, the average would"),
        (SamplingMethod.NOT_SURE, "which is not known, and all 400 growers"),
    ],
)
def test_every_method_has_its_wording(store, method, words):
    study = orchard(store, replace(CHANCE, method=method, clusters_column="VILLAGE"))
    window = Window("figure", study=study, q="Q1", s="average")
    assert words in window.text
    blocked = "figures on \u201cnot sure\u201d cannot be published" in window.text
    assert blocked == (method is SamplingMethod.NOT_SURE)
    assert window.problems == []


def test_an_open_proposal_stands_in_the_way_with_a_link(store):
    study = orchard(store, CHANCE, settled=False)
    key = next(q.key for q in store.questions(study) if q.needs_you)
    window = Window("figure", study=study, q=key)
    assert "Not yet for clients:" in window.text
    assert "Accept or turn down the proposal first." in window.text
    assert f"study={study}&q={key}" in [
        p.proto.query_string for p in window.test.get("page_link") if p.proto.label == "Questions"
    ]


def test_a_provisional_plan_stands_in_the_way_with_a_link(store):
    study = orchard(store)
    window = Window("figure", study=study)
    assert "The sampling plan is provisional: say how people got in." in window.text


@pytest.mark.parametrize(
    "query", [{"q": "Q1"}, {"q": "Q5"}, {"q": "Q5", "s": "total"}, {"q": "Q3"}]
)
def test_the_decimal_comma_stands_everywhere(store, garden, query):
    store.save_study(replace(store.study(garden), decimal_mark=","))
    window = Window("figure", study=garden, endless="1", **query)
    text = " ".join((window.text, *fan_texts(window)))
    assert re.search(r"\d,\d", text)
    assert re.findall(r"(?<![\d.])\d+\.\d(?!\d\d)[^ ]*", text) == []
    assert "1,184" not in text
    assert "1.184" in text


def fan_texts(window):
    found = []

    def collect(part):
        if isinstance(part, dict):
            for name, value in part.items():
                if name in ("text", "ticktext", "hovertext"):
                    found.extend([value] if isinstance(value, str) else list(value))
                collect(value)
        elif isinstance(part, list):
            for value in part:
                collect(value)

    collect(json.loads(window.test.get("plotly_chart")[0].proto.spec))
    return [text for text in found if isinstance(text, str)]


def test_level_method_and_base_are_changed(garden):
    window = Window("figure", study=garden, q="Q3", s="share", a="Less")
    before = window.text
    window.choose("address_level", "0.99")
    assert "almost certainly lie" in window.text and "99 % level" in window.text
    window.choose("address_method", "clopper_pearson")
    assert window.address["method"] == "clopper_pearson"
    window.tick("address_dk")
    assert window.address["dk"] == "1"
    window.tick("address_endless")
    assert window.address["endless"] == "1"
    assert window.problems == [] and window.text != before


def test_the_house_limit_is_changed(store, garden):
    window = Window("figure", study=garden, q="Q1")
    assert "publish" in window.text and "hold back" not in window.text.split("Width check")[1][:99]
    fields = limit_fields(store, garden)
    assert [window.typed(key) for key in fields.values()] == ["10", "5", "25", "70", "30"]
    window.enter(fields["share_points"], "7,5 %").enter(fields["scale_part"], "1")
    window.enter(fields["smallest_base"], "1,000").submit("Change the limit")
    assert window.problems == []
    assert store.study(garden).limit == HouseLimit(
        share_points=7.5, scale_part=0.01, smallest_base=1000
    )
    assert "hold back" in window.text
    assert "fewer than the 1,000 the house asks for" in window.text
    assert "shares within ±7.5" in window.text


@pytest.mark.parametrize(
    ("field", "typed", "words"),
    [
        ("share_points", "abc", "\u201cabc\u201d is no number; type it like 10 or 7.5."),
        ("share_points", "-5", "is no number"),
        ("share_points", "0", "it must be above 0 and at most 50."),
        ("share_points", "51", "it must be above 0 and at most 50."),
        ("share_points", "", "is no number"),
        ("scale_part", "1.2.3", "is no number"),
        ("number_part", "101", "at most 100"),
        ("note_part", "nan", "is no number"),
        ("note_part", "9" * 20, "is no number"),
        ("smallest_base", "1.5", "is no whole number"),
        ("smallest_base", "0", "at least 1"),
        ("smallest_base", "", "type a whole number such as 30."),
    ],
)
def test_a_wrong_limit_is_refused_and_stays(store, garden, field, typed, words):
    window = Window("figure", study=garden, q="Q1")
    fields = limit_fields(store, garden)
    window.enter(fields[field], typed).submit("Change the limit")
    (problem,) = window.problems
    assert words in problem
    assert window.typed(fields[field]) == typed
    assert store.study(garden).limit == HouseLimit()
    window.press("drop_limit")
    assert window.problems == []
    assert window.typed(fields["share_points"]) == "10"


def test_a_limit_changed_in_another_window(store, garden):
    first, second = (Window("figure", study=garden, q="Q1") for _ in range(2))
    fields = limit_fields(store, garden)
    first.enter(fields["share_points"], "8").submit("Change the limit")
    second.enter(fields["share_points"], "9").submit("Change the limit")
    assert "changed in another window" in second.problems[0]
    assert store.study(garden).limit.share_points == 8
    assert second.typed(limit_fields(store, garden)["share_points"]) == "9"
    second.submit("Change the limit")
    assert store.study(garden).limit.share_points == 9


def test_no_question_to_count(store):
    study = deliver(store, "", b"Name\nanna\nbert\ncaro\ndora\n", "names.csv").study_id
    store.save_questions(
        study,
        [
            replace(s, question=replace(s.question, set_aside=True))
            for s in store.stored_questions(study)
        ],
    )
    window = Window("figure", study=study)
    assert window.problems == [
        "Please look: No question of this file can be counted: look at the Questions screen."
    ]
    assert window.links[-1] == "Questions"


def test_everybody_answered_has_no_sampling_error(store):
    study = orchard(store)
    save_plan(store, study, replace(CHANCE, universe_size=120))
    window = Window("figure", study=study, q="SIZE", s="share", a="large")
    assert "without sampling error" in window.text
    assert window.problems == []


@pytest.mark.parametrize("plan", [CHANCE, SEPARATE])
@pytest.mark.parametrize("statistic", ["average", "share", "total", "median"])
def test_the_largest_universe_that_can_be_typed(store, plan, statistic):
    most = 10**10
    strata = tuple(replace(s, population_size=most) for s in plan.strata)
    study = orchard(store, replace(plan, universe_size=None if strata else most, strata=strata))
    question = "Q3" if statistic == "total" else "Q1"
    window = Window("figure", study=study, q=question, s=statistic)
    assert 'data-figure="value"' in window.html
    assert window.problems == []


def test_separate_draws(store):
    study = orchard(store, SEPARATE)
    window = Window("figure", study=study, q="Q1", s="average")
    assert "Had all 400 growers answered" in window.text
    assert window.chosen("address_by") == "REGION"
