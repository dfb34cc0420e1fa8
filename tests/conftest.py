"""What every test may rely on: seeded chance, and what is skipped without being asked for."""

from __future__ import annotations

import os
import shutil

import numpy as np
import pytest

BROWSER_NAMES = ("chromium", "chromium-browser", "google-chrome")


def pytest_addoption(parser):
    parser.addoption("--slow", action="store_true", help="also run tests marked slow")


def pytest_collection_modifyitems(config, items):
    without_slow = pytest.mark.skip(reason="slow: run with --slow")
    without_browser = pytest.mark.skip(reason="no Chromium found: install it to run browser tests")
    for item in items:
        if "slow" in item.keywords and not config.getoption("--slow"):
            item.add_marker(without_slow)
        if "browser" in item.path.parts and browser_path() is None and not os.environ.get("CI"):
            item.add_marker(without_browser)


def browser_path() -> str | None:
    """Return the browser on this machine; where tests must not be skipped its absence fails."""
    named = os.environ.get("HALFWIDTH_BROWSER")
    found = (shutil.which(name) for name in BROWSER_NAMES)
    return named or next((path for path in found if path), None)


@pytest.fixture
def rng():
    return np.random.default_rng(20260312)
