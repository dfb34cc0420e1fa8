"""Kept figures: once each, in order, with headline and comment."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.store import AlreadyKeptError, StaleVersionError, UnknownFigureError
from app.study.figure_requests import FigureRequest, Statistic
from app.study.study import KeptFigure

REQUESTS = [
    FigureRequest(f"q{number}", Statistic.SHARE, ("9", "10"), "region", "north", 0.9, "jeffreys")
    for number in range(4)
]


@pytest.fixture
def four(database, study):
    return [database.keep_figure(study.id, request) for request in REQUESTS]


def order(database, study) -> list[str]:
    kept = database.kept_figures(study.id)
    assert [figure.position for figure in kept] == list(range(len(kept)))
    return [figure.request.question for figure in kept]


def test_figures_are_kept_at_the_end(database, study, four) -> None:
    assert database.kept_figures(study.id) == tuple(four)
    assert four[2] == KeptFigure(four[2].id, study.id, REQUESTS[2], 2, "", "", 1)


def test_the_same_request_twice_is_the_same_kept_figure(database, study, four) -> None:
    changed = database.save_kept(replace(four[1], headline="Ours"))
    assert database.keep_figure(study.id, REQUESTS[1]) == changed
    assert len(database.kept_figures(study.id)) == 4


def test_the_same_request_in_another_study_is_another_figure(database, study, four) -> None:
    other = database.create_study("Other")
    assert database.keep_figure(other.id, REQUESTS[0]).id != four[0].id
    assert len(database.kept_figures(study.id)) == 4


def test_request_headline_and_comment_are_saved_but_not_the_place(database, study, four) -> None:
    wanted = replace(
        four[1],
        request=replace(REQUESTS[1], confidence=0.99),
        headline="Most are satisfied",
        comment="Asked in March.\nSee page 2.",
    )
    database.move_kept(four[1].id, 3)
    saved = database.save_kept(wanted)
    assert saved == replace(wanted, version=2, position=3)
    assert database.kept_figures(study.id)[3] == saved


def test_an_older_version_is_refused(database, study, four, clock) -> None:
    database.save_kept(replace(four[0], headline="First"))
    clock.go_on(minutes=5)
    with pytest.raises(StaleVersionError, match="five minutes ago"):
        database.save_kept(replace(four[0], headline="Second"))
    assert database.kept_figures(study.id)[0].headline == "First"


def test_a_request_of_another_kept_figure_is_refused(database, study, four) -> None:
    with pytest.raises(AlreadyKeptError, match="in the readout already"):
        database.save_kept(replace(four[0], request=REQUESTS[1]))
    assert order(database, study) == ["q0", "q1", "q2", "q3"]


def test_removing_closes_the_gap(database, study, four) -> None:
    database.remove_kept(four[1].id)
    assert order(database, study) == ["q0", "q2", "q3"]
    assert database.keep_figure(study.id, REQUESTS[1]).position == 3


@pytest.mark.parametrize(
    ("place", "expected"),
    [
        (0, ["q2", "q0", "q1", "q3"]),
        (1, ["q0", "q2", "q1", "q3"]),
        (2, ["q0", "q1", "q2", "q3"]),
        (3, ["q0", "q1", "q3", "q2"]),
        (99, ["q0", "q1", "q3", "q2"]),
        (-1, ["q2", "q0", "q1", "q3"]),
    ],
)
def test_moving(database, study, four, place, expected) -> None:
    moved = database.move_kept(four[2].id, place)
    assert moved == database.kept_figures(study.id)
    assert order(database, study) == expected
    assert {figure.version for figure in moved} == {1}


def test_unknown_figures_are_named(database, four) -> None:
    database.remove_kept(four[0].id)
    for way in (
        lambda: database.remove_kept(four[0].id),
        lambda: database.move_kept(four[0].id, 0),
        lambda: database.save_kept(four[0]),
    ):
        with pytest.raises(UnknownFigureError, match="no kept figure"):
            way()
