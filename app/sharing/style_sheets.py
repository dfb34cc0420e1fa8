"""Style sheets of the plain pages, each under an address that carries its content's hash."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass

STYLE_PREFIX = "/readout-style/"


@dataclass(frozen=True, slots=True)
class StyleSheet:
    """One style sheet: its text and the path it is served at."""

    text: str

    @property
    def path(self) -> str:
        """Path with the hash of the text, so that a browser may keep the copy for good."""
        return f"{STYLE_PREFIX}{hashlib.sha256(self.text.encode()).hexdigest()[:20]}.css"
