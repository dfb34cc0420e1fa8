"""A study and the records that belong to it."""

from __future__ import annotations

from dataclasses import dataclass, field
from datetime import datetime
from enum import StrEnum

from app.study.figure_requests import FigureRequest


@dataclass(frozen=True, slots=True)
class HouseLimit:
    """The one width limit a house publishes by; half-widths, always.

    Parameters
    ----------
    share_points : float
        Largest half-width of a share, in percentage points.
    scale_part : float
        Largest half-width of an average on a scale, as a part of the scale's span.
    number_part : float
        Largest half-width of an average, total or median of a number, as a part of its value.
    note_part : float
        From this part of the limit on a figure is published with a note.
    smallest_base : int
        Figures on fewer answers are held back.
    """

    share_points: float = 10.0
    scale_part: float = 0.05
    number_part: float = 0.25
    note_part: float = 0.7
    smallest_base: int = 30


@dataclass(frozen=True, slots=True)
class Study:
    """One study.

    Parameters
    ----------
    id : str
        Random, part of addresses inside the workspace.
    name : str
        As people call it.
    decimal_mark : str
        "." or ","; the language of numbers.
    limit : HouseLimit
        The width limit figures are checked against.
    created_at, changed_at : datetime
        UTC, with time zone.
    version : int
        Raised at every write; a write with an older one is refused.
    """

    id: str
    name: str
    created_at: datetime
    changed_at: datetime
    version: int
    decimal_mark: str = "."
    limit: HouseLimit = field(default_factory=HouseLimit)


@dataclass(frozen=True, slots=True)
class StudyFile:
    """A fieldwork file as it was received.

    Parameters
    ----------
    reading : str
        JSON of how it is read (``app.intake`` makes and understands it).
    rows, columns : int
        Size of the answers as read.
    current : bool
        True for the file the figures are made from.
    """

    id: str
    study_id: str
    file_name: str
    fingerprint: str
    size: int
    reading: str
    rows: int
    columns: int
    received_at: datetime
    current: bool
    version: int


@dataclass(frozen=True, slots=True)
class KeptFigure:
    """A figure chosen for the readout.

    Parameters
    ----------
    position : int
        Place in the readout, from 0.
    headline : str
        The manager's headline; "" takes the one proposed from the sentence.
    comment : str
        Plain text under the figure.
    """

    id: str
    study_id: str
    request: FigureRequest
    position: int
    headline: str
    comment: str
    version: int


class LinkStatus(StrEnum):
    """What a link does when somebody opens it."""

    LIVE = "live"
    EXPIRED = "expired"
    REVOKED = "revoked"
    UNKNOWN = "unknown"


@dataclass(frozen=True, slots=True)
class Readout:
    """A published, frozen readout and its link.

    Parameters
    ----------
    number : int
        1, 2, 3 ... within the study.
    frozen : str
        JSON of everything the page shows.
    html : str
        The page as clients get it.
    methods_version : int
        ``METHODS_VERSION`` of the estimators it was made with.
    expires_at, revoked_at : datetime or None
        UTC.
    """

    id: str
    study_id: str
    number: int
    title: str
    frozen: str
    html: str
    methods_version: int
    published_at: datetime
    expires_at: datetime | None
    revoked_at: datetime | None
    version: int
