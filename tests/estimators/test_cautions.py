from __future__ import annotations

import pytest

from estimators import Caution, cautions

ALL = [thing for thing in vars(cautions).values() if isinstance(thing, Caution)]
ALL += [cautions.answers_missing(12, 9), cautions.single_cluster_strata(["north", "south"])]


def test_codes_are_unique():
    assert len({c.code for c in ALL}) == len(ALL)


@pytest.mark.parametrize("caution", ALL, ids=lambda c: c.code)
def test_sentences_are_plain(caution):
    assert not caution.sentence[0].islower()
    assert caution.sentence.endswith(".")
    for jargon in ("variance", "PSU", "fpc", "linear", "estimator", "degrees of freedom"):
        assert jargon not in caution.sentence


def test_numbers_and_names_are_said():
    missing = cautions.answers_missing(1200, 191).sentence
    assert (
        missing == "1,009 of 1,200 gave no answer; the figure assumes they are like those who did."
    )
    assert "in stratum north," in cautions.single_cluster_strata(["north"]).sentence
    many = cautions.single_cluster_strata(["a", "b", "c", "d"]).sentence
    assert "4 strata (a, b, c ...)" in many
