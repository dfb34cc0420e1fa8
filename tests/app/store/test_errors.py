"""Errors are sentences for people."""

from __future__ import annotations

import errno
from datetime import UTC, datetime, timedelta

import pytest

from app.store.errors import (
    StaleVersionError,
    StoreError,
    UnknownStudyError,
    age_in_words,
    sentence_for,
)

NOW = datetime(2026, 3, 12, 9, 52, tzinfo=UTC)


@pytest.mark.parametrize(
    ("seconds", "words"),
    [
        (-5, "a moment ago"),
        (0, "a moment ago"),
        (59, "a moment ago"),
        (60, "one minute ago"),
        (125, "two minutes ago"),
        (12 * 60, "twelve minutes ago"),
        (13 * 60, "13 minutes ago"),
        (3599, "59 minutes ago"),
        (3600, "one hour ago"),
        (47 * 3600, "47 hours ago"),
        (48 * 3600, "two days ago"),
        (90 * 86400, "90 days ago"),
    ],
)
def test_age_in_words(seconds, words) -> None:
    assert age_in_words(NOW - timedelta(seconds=seconds), NOW) == words


def test_a_stale_version_says_when_and_what_to_do() -> None:
    error = StaleVersionError(NOW - timedelta(seconds=130), NOW)
    assert error.changed_at == NOW - timedelta(seconds=130)
    assert error.sentence.startswith("This was changed in another window two minutes ago: ")
    assert error.sentence.endswith("make your change again.")


def test_an_unknown_study_is_named_and_is_a_store_error() -> None:
    error = UnknownStudyError("abc")
    assert isinstance(error, StoreError)
    assert error.record_id == "abc"
    assert "no study" in error.sentence
    assert "abc" in error.sentence


@pytest.mark.parametrize(
    ("number", "words"),
    [
        (errno.ENOSPC, "disk that holds the studies is full"),
        (errno.EDQUOT, "disk that holds the studies is full"),
        (errno.EROFS, "cannot be written to"),
        (errno.EACCES, "cannot be written to"),
        (errno.EIO, "cannot be read"),
    ],
)
def test_trouble_with_the_disk_is_one_sentence(number, words) -> None:
    sentence = sentence_for(OSError(number, "x"))
    assert words in sentence
    assert sentence.count(".") == 1
