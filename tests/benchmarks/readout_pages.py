"""A published readout page against a static file of about its size, from the same server."""

from __future__ import annotations

import gzip
import tempfile
from dataclasses import replace
from datetime import UTC, datetime, timedelta
from http.client import HTTPConnection
from itertools import cycle, islice
from pathlib import Path

import streamlit

from app.sharing.link_tokens import hash_token, make_token
from app.sharing.readout_page import render_page
from app.sharing.readout_style import READOUT_STYLE
from app.store import open_database
from app.study.records import to_json
from estimators import METHODS_VERSION
from tests.benchmarks.timing import Result, in_turn, median_of
from tests.support.frozen_examples import example_readout
from tests.support.running_server import running_server

_ASSETS = Path(streamlit.__file__).parent / "static"


def page_of(figures: int) -> str:
    """Return a readout page with so many figures, four kinds in turn."""
    frozen = example_readout()
    many = tuple(islice(cycle(frozen.figures), figures))
    return render_page(replace(frozen, figures=many), style_href=READOUT_STYLE.path)


def rendering(figures: int, runs: int) -> Result:
    """Write the page once."""
    page = page_of(figures).encode()
    seconds = median_of(lambda: page_of(figures), runs)
    packed = len(gzip.compress(page, 6))
    note = f"{figures} figures, {len(page) / 1e3:.0f} KB, {packed / 1e3:.1f} KB compressed"
    return Result("readout page, written", seconds, note=note)


def serving(figures: int, requests: int, runs: int) -> Result:
    """Ask for the page over loopback, in turn with a static file of about its size."""
    html = page_of(figures)
    asset = _asset_near(len(html.encode()))
    with tempfile.TemporaryDirectory() as folder:
        token = _published(Path(folder), html)
        with running_server(Path(folder)) as server:
            connection = HTTPConnection("127.0.0.1", server.port, timeout=30)

            def ask(path: str) -> None:
                for _ in range(requests):
                    connection.request("GET", path)
                    answer = connection.getresponse()
                    assert answer.status == 200, f"{path}: {answer.status}"
                    answer.read()

            name = f"/static/{asset.relative_to(_ASSETS / 'static').as_posix()}"
            ours, other = in_turn(lambda: ask(f"/readout/{token}"), lambda: ask(name), runs)
            connection.close()
    rate = requests / ours
    note = (
        f"{rate:,.0f} pages a second of {len(html.encode()) / 1e3:.0f} KB against "
        f"{requests / other:,.0f} files of {asset.stat().st_size / 1e3:.0f} KB; 70 % of the rate "
        "is the limit"
    )
    return Result(
        "readout page, served", ours / requests, "a static file", other / requests, 1 / 0.7, note
    )


def _asset_near(size: int) -> Path:
    files = [path for path in (_ASSETS / "static").rglob("*") if path.is_file()]
    return min(files, key=lambda path: abs(path.stat().st_size - size))


def _published(folder: Path, html: str) -> str:
    database = open_database(folder)
    study, token = database.create_study("Measured"), make_token()
    database.publish(
        study.id,
        lambda _number: (to_json(example_readout()), html),
        title="Measured",
        methods_version=METHODS_VERSION,
        token_hash=hash_token(token),
        expires_at=datetime.now(UTC) + timedelta(days=1),
    )
    return token
