"""The method note is complete for every way of sampling and claims nothing that is not so."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.sharing.method_notes import method_note
from app.study.figure_requests import FigureRequest, Statistic
from app.study.figures import compute_figure
from app.study.sampling_plan import SamplingMethod
from tests.support.studies import chance, choice, data_of, garden_data, strata, yes_no

NB = "\u00a0"
YES = FigureRequest("Q4", Statistic.SHARE, ("Yes",))
COUNTED = "The size of the universe is counted: the more of it was asked, the narrower."
ENDLESS = "The universe is treated as endless."


def note(data, *requests):
    return dict(method_note(data, [compute_figure(data, r) for r in requests or (YES,)]))


@pytest.mark.parametrize("method", list(SamplingMethod))
def test_every_method_has_every_item(method):
    more = {"clusters_column": "shop"} if method is SamplingMethod.GROUPS else {}
    data = data_of(
        {"Q4": ["Yes", "No"] * 20, "shop": [float(i // 4) for i in range(40)]},
        [choice("Q4", "Yes", "No")],
        chance(400, method=method, **more),
    )
    assert not data.built.fallback
    items = note(data)
    assert list(items) == [
        "Whom the figures speak for",
        "How people got in",
        "Who answered",
        "Weights",
        "How sure",
        "What is held back",
        "Numbers",
        "What the intervals leave out",
        "What this note does not say",
    ]
    assert all(text.endswith(".") and "  " not in text for text in items.values())
    expected = COUNTED if method in (SamplingMethod.CHANCE, SamplingMethod.EVERYBODY) else ENDLESS
    assert items["How sure"] == f"Intervals at the 95{NB}% level, by Wilson. {expected}"
    assert items["Weights"] == "None: every answer counts the same."


def test_the_sample_study():
    data = garden_data()
    spend = FigureRequest("Q5", Statistic.MEDIAN, confidence=0.9)
    brands = FigureRequest("Q7", Statistic.SHARE, ("Q7_1",))
    items = note(data, FigureRequest("Q1", Statistic.AVERAGE), brands, spend)
    assert items["Whom the figures speak for"] == (
        f"All independent garden centres in the four regions: 1,184{NB}garden centres (as of "
        "1 January 2026; source: register of the garden trade association)."
    )
    assert items["How people got in"] == (
        "Drawn by chance from a list. This was done separately by \u201cRegion\u201d. Each could "
        "be drawn once at most."
    )
    assert items["Who answered"].startswith("395 of 1,184 garden centres answered. Don\u2019t know")
    assert items["Who answered"].endswith("like those with the same \u201cRegion\u201d who did.")
    assert items["Weights"] == (
        "Each answer stands for its part of all garden centres with the same \u201cRegion\u201d."
    )
    assert items["How sure"].startswith(
        f"Intervals at the 90{NB}% and 95{NB}% level, by Student\u2019s t, Wilson and Woodruff. "
    )
    assert "at least 30 answers" in items["What is held back"]


def test_an_unknown_universe():
    items = note(yes_no(30, 50))
    assert items["Whom the figures speak for"] == (
        "All kiosks; their number is not known, so it is treated as endless."
    )
    assert items["How sure"].endswith(ENDLESS)


def test_drawn_twice():
    items = note(yes_no(30, 50, chance(400, replacement=True)))
    assert items["How people got in"].endswith("Each could be drawn more than once.")
    assert items["How sure"].endswith(ENDLESS)
    left_over = chance(400, replacement=True, method=SamplingMethod.EVERYBODY)
    assert note(yes_no(30, 50, left_over))["How sure"].endswith(COUNTED)


def stratified(**more):
    return data_of(
        {"Q4": ["Yes", "No"] * 20, "area": [*"NNSS"] * 10, "w": [1.5, 2.0] * 20},
        [choice("Q4", "Yes", "No"), choice("area", "N", "S")],
        replace(chance(strata_column="area", strata=strata(N=100, S=300)), **more),
    )


def test_an_attempted_census_by_strata_was_not_drawn_separately():
    items = note(stratified(method=SamplingMethod.EVERYBODY))
    assert items["How people got in"] == (
        "Everybody was invited and some answered. The intervals assume that, within each "
        "\u201cQuestion area\u201d, those who did not answer resemble those who did."
    )


def test_strata_that_are_not_used_are_not_claimed():
    for method in (SamplingMethod.QUOTA, SamplingMethod.NOT_SURE):
        items = note(stratified(method=method))
        assert "area" not in items["How people got in"] + items["Weights"]


def test_weights_delivered_with_the_file():
    items = note(stratified(weights_column="w"))
    assert items["Weights"] == "Weights as delivered with the file, column w."


def test_groups_are_counted():
    data = data_of(
        {"Q4": ["Yes", "No"] * 20, "shop": [float(i // 4) for i in range(40)]},
        [choice("Q4", "Yes", "No")],
        chance(method=SamplingMethod.GROUPS, clusters_column="shop", universe_clusters=60),
    )
    items = note(data)
    assert items["How people got in"].endswith("10 of 60 groups were drawn.")
    assert items["How sure"].endswith("the more of them were drawn, the narrower.")


def test_rows_set_aside_are_counted():
    data = data_of({"Q4": ["Yes", "No", None, None]}, [choice("Q4", "Yes", "No")])
    text = note(data)["Who answered"]
    assert text.startswith("2 kiosks answered; 2 rows in which nothing was answered are set aside.")


def test_a_readout_without_figures():
    assert dict(method_note(yes_no(3, 3), []))["How sure"] == "There are no figures."
