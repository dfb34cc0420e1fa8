"""What every test of a screen starts from: an empty store in a folder of its own."""

from __future__ import annotations

import pytest

from tests.support.screen_windows import screens_on


@pytest.fixture
def store(tmp_path, monkeypatch):
    with screens_on(tmp_path / "data", monkeypatch) as opened:
        yield opened
