from __future__ import annotations

from dataclasses import replace

import pytest

from app.study.sampling_plan import SamplingMethod, SamplingPlan, StratumCount
from app.widgets.deliveries import deliver
from tests.support.screen_windows import Window
from tests.support.small_studies import CHANCE, SEPARATE, orchard, orchard_csv, save_plan


def plan(store, study):
    return store.plan(study).plan


@pytest.fixture
def growers(store):
    return orchard(store, CHANCE)


@pytest.fixture
def separate(store):
    return orchard(store, SEPARATE)


def test_a_new_plan_is_provisional_until_confirmed(store):
    study = orchard(store)
    window = Window("plan", study=study)
    assert "Provisional: nobody has said yet how people got in." in window.text
    assert "120 answered; the universe is not known." in window.text
    window.type("plan_universe", "all growers").type("plan_size", "400")
    window.choose("plan_method", SamplingMethod.CHANCE)
    window.press("confirm_plan")
    assert "Confirmed. Every change below is kept as you leave its field." in window.text
    assert plan(store, study) == SamplingPlan(
        universe="all growers",
        universe_size=400,
        method=SamplingMethod.CHANCE,
        provisional=False,
    )
    assert "120 of 400 answered" in window.text


def test_a_count_typed_in_the_same_moment_as_confirm_is_kept(store):
    study = orchard(store)
    window = Window("plan", study=study)
    window.enter("plan_size", "400").enter("plan_source", "a register").press("confirm_plan")
    assert window.messages == []
    assert plan(store, study) == SamplingPlan(
        universe_size=400, source="a register", provisional=False
    )


@pytest.mark.parametrize("typed", ["1184", "1,184", "1.184", "1 184", "1'184", " 1\u00a0184 "])
def test_counts_are_read_in_every_common_form(store, growers, typed):
    window = Window("plan", study=growers).type("plan_size", typed)
    assert plan(store, growers).universe_size == 1184
    assert window.typed("plan_size") == "1,184"


def test_an_empty_count_means_not_known(store, growers):
    window = Window("plan", study=growers).type("plan_size", "  ")
    assert plan(store, growers).universe_size is None
    assert "Not known: the universe counts as endless" in window.text


WRONG = ["abc", "-5", "1,18", "0", "1.5", "999999999999999", "9" * 20, "\u0661\u0662", "1e3", "="]


@pytest.mark.parametrize("typed", WRONG)
@pytest.mark.parametrize(
    ("key", "name"), [("plan_size", "How many are there"), ("plan_clusters", "Groups in the")]
)
def test_a_wrong_count_is_refused_and_stays_in_its_field(store, typed, key, name):
    before = replace(
        CHANCE,
        method=SamplingMethod.GROUPS,
        clusters_column="VILLAGE",
        universe_clusters=60,
    )
    study = orchard(store, before)
    window = Window("plan", study=study).type(key, typed)
    (problem,) = window.problems
    assert problem.startswith(f"Please look: {name}") and problem.endswith(".")
    assert window.typed(key) == typed
    assert plan(store, study) == before
    window.go("figure", study=study).go("plan", study=study)
    assert window.typed(key) == typed
    window.type(key, "64")
    assert len(window.problems) == (key == "plan_size")  # 64 units are fewer than the answers
    assert window.typed(key) == "64"


@pytest.mark.parametrize("typed", WRONG)
def test_a_wrong_count_of_a_stratum(store, separate, typed):
    window = Window("plan", study=separate).type("stratum_0_REGION", typed)
    (problem,) = window.problems
    assert problem.startswith("Please look: North: ")
    assert window.typed("stratum_0_REGION") == typed
    assert plan(store, separate) == SEPARATE


def test_what_was_refused_in_one_study_does_not_stand_in_another(store, growers):
    other = orchard(store, CHANCE)
    window = Window("plan", study=growers).type("plan_size", "abc")
    window.go("plan", study=other)
    assert window.typed("plan_size") == "400"
    assert window.problems == []


def test_fewer_units_than_answers(store, growers):
    window = Window("plan", study=growers).type("plan_size", "100")
    (problem,) = window.problems
    assert problem == (
        "! The file has 120 answers but the universe only 100: correct the universe, or say that "
        "each could be drawn twice. to the field"
    )
    assert 'href="#universe_size"' in window.html
    assert plan(store, growers).universe_size == 100
    window.tick("plan_replacement")
    assert window.problems == []
    assert plan(store, growers).replacement


@pytest.mark.parametrize(
    ("key", "label", "example"),
    [
        ("plan_unit_one", "One of them is a", "garden centre"),
        ("plan_unit_many", "Several are", "garden centres"),
    ],
)
def test_unit_words_cannot_be_empty(store, growers, key, label, example):
    window = Window("plan", study=growers).type(key, " ")
    assert window.problems == [f"Please look: {label}: type a word such as \u201c{example}\u201d."]
    assert plan(store, growers) == CHANCE


def test_words_are_shown_as_typed(store, growers):
    hostile = "<img src=x onerror=alert(1)> ![a](http://x.example/a.png)"
    window = Window("plan", study=growers).type("plan_unit_many", hostile)
    assert plan(store, growers).unit_many == hostile
    for screen in ("plan", "figure", "file"):
        assert "<img" not in window.go(screen, study=growers).html


def test_ten_thousand_characters_are_cut_where_the_field_ends(store, growers):
    Window("plan", study=growers).type("plan_universe", "u" * 10_000)
    assert plan(store, growers).universe == "u" * 120


def test_separate_draws_ask_for_every_stratum(store, growers):
    window = Window("plan", study=growers).choose("plan_strata_column", "REGION")
    assert plan(store, growers).strata == (
        StratumCount("North", None),
        StratumCount("South", None),
    )
    assert [p.split(":")[0] for p in window.problems] == ["! North", "! South"]
    window.type("stratum_0_REGION", "150")
    assert [p.split(":")[0] for p in window.problems] == ["! South"]
    assert "The strata add up" not in window.text  # one of them is not known
    assert "120 of 150" not in window.text
    window.type("stratum_1_REGION", "250")
    assert window.problems == []
    assert plan(store, growers).strata == SEPARATE.strata
    window.choose("plan_strata_column", "none")
    assert plan(store, growers) == CHANCE


def test_strata_that_do_not_add_up_to_the_universe(store):
    study = orchard(store, replace(SEPARATE, universe_size=500))
    window = Window("plan", study=study)
    assert "The strata add up to 400; that counts." in window.text
    assert "The strata add up to 400 but the universe is given as 500" in window.problems[0]


def paste(window, text):
    return window.type("paste_strata", text)


def test_counts_are_pasted_with_a_preview(store, separate):
    window = paste(Window("plan", study=separate), "Region\tCount\nNorth\t200\nSouth\t1.300\n")
    assert "Understood as" in window.text
    assert plan(store, separate) == SEPARATE
    window.press("use_pasted")
    assert plan(store, separate).strata == (
        StratumCount("North", 200),
        StratumCount("South", 1300),
    )
    assert window.typed("paste_strata") == ""
    assert window.typed("stratum_1_REGION") == "1,300"


def test_counts_changed_after_the_preview_are_the_ones_used(store, separate):
    window = paste(Window("plan", study=separate), "North\t200\nSouth\t300")
    window.enter("paste_strata", "North\t210\nSouth\t310").press("use_pasted")
    assert [s.population_size for s in plan(store, separate).strata] == [210, 310]


def test_nonsense_changed_after_the_preview_is_not_used(store, separate):
    window = paste(Window("plan", study=separate), "North\t200\nSouth\t300")
    window.enter("paste_strata", "nonsense").press("use_pasted")
    assert plan(store, separate) == SEPARATE
    assert window.typed("paste_strata") == "nonsense"


@pytest.mark.parametrize(
    "text",
    [
        "nonsense",
        "North",
        "100",
        "North\t-5",
        "North\t1.5",
        "North\tabc",
        "North\t100\nNorth\t200",
        "North\t999999999999999999",
        "<script>\t<b>",
        "x" * 20_000,
    ],
)
def test_pasted_nonsense_is_explained_and_not_used(store, separate, text):
    window = paste(Window("plan", study=separate), text)
    assert 'class="hr-problem"' in window.html
    assert "use_pasted" not in window.buttons()
    assert "<script" not in window.html
    assert plan(store, separate) == SEPARATE
    assert window.typed("paste_strata") == text


def test_a_pasted_stratum_without_answers_can_be_taken_out(store, separate):
    window = paste(Window("plan", study=separate), "North\t150\nSouth\t250\nWest\t90")
    assert "no answers in the file" in window.text
    window.press("use_pasted")
    assert "West: 90 in the universe but no answer in the file" in window.problems[0]
    labels = [s.label for s in plan(store, separate).strata]
    window.type(f"stratum_{labels.index('West')}_REGION", "")
    assert window.problems == []
    assert plan(store, separate) == SEPARATE


def test_weights_with_a_zero(store):
    lines = orchard_csv().decode().splitlines()
    lines[5] = lines[5].rpartition(",")[0] + ",0"
    study = deliver(store, "", "\n".join(lines).encode(), "growers.csv").study_id
    save_plan(store, study, CHANCE)
    window = Window("plan", study=study)
    columns = next(w for w in window.test.selectbox if w.key == "plan_weights_column").options
    assert any(option.startswith("W ") for option in columns)
    window.choose("plan_weights_column", "W")
    (problem,) = window.problems
    assert "in W" in problem and "zero" in problem and "(answer" in problem
    figure = Window("figure", study=study)
    assert "Not yet for clients:" in figure.text and "zero" in figure.text


def test_groups_without_a_column(growers):
    window = Window("plan", study=growers).choose("plan_method", SamplingMethod.GROUPS)
    assert window.problems == ["! Say which column names the group drawn first. to the field"]
    window.choose("plan_clusters_column", "VILLAGE")
    assert window.problems == []
    window.type("plan_clusters", "5")
    assert "The file has 12 groups but the universe only 5" in window.problems[0]
    window.type("plan_clusters", "80")
    assert window.problems == []
    assert "at least ±" in window.text.replace("\u00b1", "±")


def test_a_column_the_file_has_lost(store):
    study = orchard(store, replace(SEPARATE, strata_column="GONE", weights_column="LOST"))
    window = Window("plan", study=study)
    assert {p.split(":")[0] for p in window.problems} == {
        "! The file has no column GONE",
        "! The file has no column LOST",
    }
    window.choose("plan_strata_column", "none").choose("plan_weights_column", "none")
    assert window.problems == []


@pytest.mark.parametrize(
    ("key", "mine"), [("plan_size", "900"), ("plan_universe", "everyone"), ("plan_source", "list")]
)
def test_a_plan_changed_in_another_window(store, growers, key, mine):
    first, second = Window("plan", study=growers), Window("plan", study=growers)
    first.type("plan_as_of", "1 May 2026")
    changed = plan(store, growers)
    second.type(key, mine)
    assert "changed in another window a moment ago" in second.problems[0]
    assert second.typed(key) == mine
    assert plan(store, growers) == changed
    assert second.typed("plan_as_of") == "1 May 2026"
    second.press(f"again_{key}")
    assert second.problems == []
    assert plan(store, growers).as_of == "1 May 2026"
    field = key.removeprefix("plan_").replace("size", "universe_size")
    assert str(getattr(plan(store, growers), field)) == mine


def test_mine_is_given_up_for_what_is_stored(growers):
    first, second = Window("plan", study=growers), Window("plan", study=growers)
    first.type("plan_size", "500")
    second.type("plan_size", "600").press("drop_plan_size")
    assert second.typed("plan_size") == "500"
    assert second.problems == []


def test_a_stratum_changed_in_another_window(store, separate):
    first, second = Window("plan", study=separate), Window("plan", study=separate)
    first.type("stratum_0_REGION", "160")
    second.type("stratum_1_REGION", "260")
    assert second.typed("stratum_1_REGION") == "260"
    second.press("again_stratum_1_REGION")
    assert [s.population_size for s in plan(store, separate).strata] == [160, 260]


@pytest.mark.parametrize(
    ("key", "option"),
    [("plan_method", SamplingMethod.QUOTA), ("plan_strata_column", "REGION")],
)
def test_a_choice_in_a_stale_window_changes_nothing(store, growers, key, option):
    first, second = Window("plan", study=growers), Window("plan", study=growers)
    first.type("plan_size", "500")
    second.choose(key, option)
    assert "changed in another window" in second.messages[0]
    assert plan(store, growers) == replace(CHANCE, universe_size=500)
    assert second.chosen(key) in (SamplingMethod.CHANCE, "none")


def test_pasted_counts_in_a_stale_window_stay_in_their_box(store, separate):
    first, second = Window("plan", study=separate), Window("plan", study=separate)
    paste(second, "North\t200\nSouth\t300")
    first.type("stratum_0_REGION", "160")
    second.press("use_pasted")
    assert "changed in another window" in second.messages[0]
    assert second.typed("paste_strata") == "North\t200\nSouth\t300"
    second.press("use_pasted")
    assert [s.population_size for s in plan(store, separate).strata] == [200, 300]


@pytest.mark.parametrize("method", list(SamplingMethod))
def test_every_method_says_what_follows_from_it(store, method):
    study = orchard(store, replace(CHANCE, method=method, clusters_column="VILLAGE"))
    window = Window("plan", study=study)
    words = {
        SamplingMethod.CHANCE: "Every unit on a list had a known chance.",
        SamplingMethod.EVERYBODY: "A census was tried.",
        SamplingMethod.GROUPS: "so the intervals get wider.",
        SamplingMethod.QUOTA: "Nobody was drawn by chance.",
        SamplingMethod.NOT_SURE: "none can be published.",
    }
    assert words[method] in window.text
    assert ("plan_replacement" in {c.key for c in window.test.checkbox}) == (
        method is SamplingMethod.CHANCE
    )
    assert window.problems == []
