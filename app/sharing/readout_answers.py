"""What the store knows about a readout link when somebody opens it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

LinkStatus = Literal["live", "expired", "revoked", "unknown"]


@dataclass(frozen=True, slots=True)
class ReadoutAnswer:
    """State of one link, and the frozen page while it is live.

    Attributes
    ----------
    status : {"live", "expired", "revoked", "unknown"}
        Whether the link opens.
    html : str
        The whole page of a live link; empty otherwise.
    """

    status: LinkStatus
    html: str = ""


def nothing_published(_token_hash: str) -> ReadoutAnswer:
    """Answer for a store without readouts: no link is known.

    Parameters
    ----------
    _token_hash : str
        Hash of the token in the link.

    Returns
    -------
    ReadoutAnswer
        Always ``unknown``.
    """
    return ReadoutAnswer("unknown")
