"""Readouts: numbered, frozen, opened by links that end."""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, datetime, timedelta, timezone

import pytest

from app.store import StoreError, UnknownReadoutError, UnknownStudyError
from app.study.study import LinkStatus, Readout


def make(number: int) -> tuple[str, str]:
    return f'{{"number":{number}}}', f"<h1>Readout {number}</h1>"


def publish(database, study, token_hash: str, *, making=make, expires_at=None) -> Readout:
    return database.publish(
        study.id,
        making,
        title="Spring",
        methods_version=3,
        token_hash=token_hash,
        expires_at=expires_at,
    )


def test_a_readout_is_found_as_it_was_published(database, study, clock) -> None:
    end = datetime(2026, 6, 1, tzinfo=UTC)
    readout = publish(database, study, "a", expires_at=end)
    assert readout == Readout(
        id=readout.id,
        study_id=study.id,
        number=1,
        title="Spring",
        frozen='{"number":1}',
        html="<h1>Readout 1</h1>",
        methods_version=3,
        published_at=clock.present,
        expires_at=end,
        revoked_at=None,
        version=1,
    )
    assert database.readout(readout.id) == readout
    assert database.readouts(study.id) == (readout,)


def test_readouts_are_numbered_within_a_study_and_listed_newest_first(database, study) -> None:
    other = database.create_study("Other")
    for token_hash in "abc":
        publish(database, study, token_hash)
    assert publish(database, other, "d").number == 1
    assert [readout.number for readout in database.readouts(study.id)] == [3, 2, 1]


def test_whoever_is_overtaken_makes_the_page_again_with_the_next_number(database, study) -> None:
    made = []

    def overtaken_once(number: int) -> tuple[str, str]:
        if not made:
            publish(database, study, "faster")
        made.append(number)
        return make(number)

    readout = publish(database, study, "slower", making=overtaken_once)
    assert made == [1, 2]
    assert (readout.number, readout.html) == (2, "<h1>Readout 2</h1>")
    assert len(database.readouts(study.id)) == 2


def test_whoever_is_overtaken_over_and_over_is_told(database, study, clock) -> None:
    def always_overtaken(number: int) -> tuple[str, str]:
        publish(database, study, f"faster {number}")
        return make(number)

    with pytest.raises(StoreError, match="busy"):
        publish(database, study, "slower", making=always_overtaken)
    assert database.find_by_token_hash("slower", clock())[0] is LinkStatus.UNKNOWN


def test_a_page_that_cannot_be_made_leaves_nothing(database, study, clock) -> None:
    def fails(_number: int) -> tuple[str, str]:
        raise ZeroDivisionError

    with pytest.raises(ZeroDivisionError):
        publish(database, study, "a", making=fails)
    assert database.readouts(study.id) == ()
    assert database.find_by_token_hash("a", clock())[0] is LinkStatus.UNKNOWN


def test_a_study_deleted_while_the_page_is_made_is_named(database, study) -> None:
    def too_late(number: int) -> tuple[str, str]:
        database.delete_study(study.id)
        return make(number)

    with pytest.raises(UnknownStudyError):
        publish(database, study, "a", making=too_late)


def test_one_token_never_opens_two_readouts(database, study, clock) -> None:
    publish(database, study, "a")
    with pytest.raises(Exception, match="UNIQUE"):
        publish(database, study, "a")
    assert len(database.readouts(study.id)) == 1
    assert database.find_by_token_hash("a", clock()) == (LinkStatus.LIVE, "<h1>Readout 1</h1>")


def test_a_link_is_live_to_the_last_moment_before_it_expires(database, study) -> None:
    end = datetime(2026, 6, 1, 12, tzinfo=UTC)
    publish(database, study, "a", expires_at=end)
    moment = timedelta(microseconds=1)
    assert database.find_by_token_hash("a", end - moment)[0] is LinkStatus.LIVE
    assert database.find_by_token_hash("a", end) == (LinkStatus.EXPIRED, "")


def test_moments_of_other_time_zones_are_understood(database, study) -> None:
    east = timezone(timedelta(hours=5))
    end = datetime(2026, 6, 1, 12, tzinfo=east)
    readout = publish(database, study, "a", expires_at=end)
    assert database.readout(readout.id).expires_at == datetime(2026, 6, 1, 7, tzinfo=UTC)
    before = datetime(2026, 6, 1, 6, 59, tzinfo=UTC)
    assert database.find_by_token_hash("a", before)[0] is LinkStatus.LIVE
    assert database.find_by_token_hash("a", end)[0] is LinkStatus.EXPIRED


def test_a_moment_without_time_zone_is_a_bug(database, study) -> None:
    with pytest.raises(Exception, match="needs a time zone"):
        publish(database, study, "a", expires_at=datetime(2026, 6, 1))
    assert database.readouts(study.id) == ()


def test_a_link_without_end_stays_live(database, study) -> None:
    publish(database, study, "a")
    assert database.find_by_token_hash("a", datetime(2999, 1, 1, tzinfo=UTC))[0] is LinkStatus.LIVE


def test_a_withdrawn_link_says_so_even_after_its_end(database, study, clock) -> None:
    end = clock.present + timedelta(days=1)
    readout = publish(database, study, "a", expires_at=end)
    withdrawn = database.revoke_readout(readout.id)
    assert withdrawn == replace(readout, revoked_at=clock.present, version=2)
    assert database.readout(readout.id) == withdrawn
    assert database.find_by_token_hash("a", clock()) == (LinkStatus.REVOKED, "")
    assert database.find_by_token_hash("a", end) == (LinkStatus.REVOKED, "")


def test_withdrawing_twice_keeps_the_first_moment(database, study, clock) -> None:
    first = database.revoke_readout(publish(database, study, "a").id)
    clock.go_on(hours=1)
    assert database.revoke_readout(first.id) == first


def test_a_replaced_link_is_withdrawn_and_the_new_one_opens_the_same_page(
    database, study, clock
) -> None:
    readout = publish(database, study, "a", expires_at=clock.present + timedelta(days=1))
    end = clock.present + timedelta(days=9)
    replaced = database.replace_link(readout.id, "b", end)
    assert replaced == replace(readout, expires_at=end, version=2)
    assert database.readouts(study.id) == (replaced,)
    assert database.find_by_token_hash("a", clock()) == (LinkStatus.REVOKED, "")
    assert database.find_by_token_hash("b", clock()) == (LinkStatus.LIVE, readout.html)


def test_a_withdrawn_readout_is_opened_again_by_a_new_link_only(database, study, clock) -> None:
    readout = database.revoke_readout(publish(database, study, "a").id)
    assert database.replace_link(readout.id, "b", None).revoked_at is None
    assert database.find_by_token_hash("a", clock())[0] is LinkStatus.REVOKED
    assert database.find_by_token_hash("b", clock())[0] is LinkStatus.LIVE


def test_unknown_readouts_are_named(database) -> None:
    for way in (
        lambda: database.readout("nowhere"),
        lambda: database.revoke_readout("nowhere"),
        lambda: database.replace_link("nowhere", "a", None),
    ):
        with pytest.raises(UnknownReadoutError, match="no readout"):
            way()
