"""The addresses of the screens, in journey order: one path segment each."""

from __future__ import annotations

SCREEN_PATHS = ("studies", "file", "questions", "plan", "figure", "readouts")
