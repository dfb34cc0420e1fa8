"""What can go wrong with kept things, each as one plain sentence.

::

    StoreError
        StaleVersionError       somebody else wrote first
        AlreadyKeptError        the same figure stands in the readout already
        DamagedFileError        kept bytes are gone or altered
        NewerDatabaseError      written by a newer release
        UnknownRecordError
            UnknownStudyError  UnknownFileError  UnknownQuestionError
            UnknownFigureError  UnknownReadoutError
"""

from __future__ import annotations

import errno
from datetime import datetime

_NUMBER_WORDS = (
    *("no", "one", "two", "three", "four", "five", "six"),
    *("seven", "eight", "nine", "ten", "eleven", "twelve"),
)

FULL_DISK = (
    "The disk that holds the studies is full, so nothing was changed: free some space, "
    "then try again."
)
READ_ONLY = (
    "The folder that holds the studies cannot be written to, so nothing was changed: "
    "give this program the right to write there, then try again."
)
BUSY = (
    "The studies are busy with another change, so nothing was changed: try again in a few seconds."
)
UNREADABLE = (
    "The folder that holds the studies cannot be read: check that the disk is connected and "
    "that this program may open the folder, then try again."
)


class StoreError(Exception):
    """Something could not be kept or found; the message is a sentence for people."""

    @property
    def sentence(self) -> str:
        """The message, as people read it."""
        return str(self)


class StaleVersionError(StoreError):
    """Somebody else wrote first; show the newer state and let the person change it again.

    Parameters
    ----------
    changed_at : datetime
        When the newer state was written, UTC.
    now : datetime
        The present, UTC; for the words "two minutes ago".
    """

    def __init__(self, changed_at: datetime, now: datetime) -> None:
        self.changed_at = changed_at
        super().__init__(
            f"This was changed in another window {age_in_words(changed_at, now)}: your change was "
            "not saved over it, so look at the newer state and make your change again."
        )


class AlreadyKeptError(StoreError):
    """The same figure stands in the readout already; change that one."""


class DamagedFileError(StoreError):
    """Kept bytes are gone or altered; upload the file again."""


class NewerDatabaseError(StoreError):
    """The data folder was written by a newer release; start that one."""


class UnknownRecordError(StoreError):
    """Nothing is kept under this id; it was probably deleted in another window."""

    what = "record"

    def __init__(self, record_id: str) -> None:
        self.record_id = record_id
        super().__init__(
            f"There is no {self.what} under this address ({record_id}): it was probably deleted; "
            "go back to the list and choose another."
        )


class UnknownStudyError(UnknownRecordError):
    """No study has this id; go back to the list of studies."""

    what = "study"


class UnknownFileError(UnknownRecordError):
    """No uploaded file has this id; go back to the study's files."""

    what = "fieldwork file"


class UnknownQuestionError(UnknownRecordError):
    """The study has no question with this key; go back to its questions."""

    what = "question"


class UnknownFigureError(UnknownRecordError):
    """No kept figure has this id; go back to the kept figures."""

    what = "kept figure"


class UnknownReadoutError(UnknownRecordError):
    """No readout has this id; go back to the study's readouts."""

    what = "readout"


def age_in_words(then: datetime, now: datetime) -> str:
    """Return how long ago something was, "two minutes ago"."""
    minutes = int((now - then).total_seconds() // 60)
    if minutes < 1:
        return "a moment ago"
    if minutes < 60:
        return f"{_counted(minutes, 'minute')} ago"
    if minutes < 48 * 60:
        return f"{_counted(minutes // 60, 'hour')} ago"
    return f"{_counted(minutes // (24 * 60), 'day')} ago"


def _counted(count: int, unit: str) -> str:
    number = _NUMBER_WORDS[count] if count < len(_NUMBER_WORDS) else str(count)
    return f"{number} {unit}" if count == 1 else f"{number} {unit}s"


def sentence_for(error: OSError) -> str:
    """Return the plain sentence for trouble with files and folders."""
    if error.errno in (errno.ENOSPC, errno.EDQUOT):
        return FULL_DISK
    if error.errno in (errno.EROFS, errno.EACCES, errno.EPERM):
        return READ_ONLY
    return UNREADABLE
