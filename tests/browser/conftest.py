"""One server and one browser for the tests of a module."""

from __future__ import annotations

import pytest

from tests.support.browser_pages import started_browser
from tests.support.running_server import running_server


@pytest.fixture(scope="module")
def server(tmp_path_factory):
    with running_server(tmp_path_factory.mktemp("data")) as started:
        yield started


@pytest.fixture(scope="module")
def browser():
    with started_browser() as started:
        yield started
