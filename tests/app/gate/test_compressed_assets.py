from __future__ import annotations

import gzip

import pytest

from app.gate.compressed_assets import CompressedAssets
from tests.support.asgi_calls import HOST, ask, http_scope

SCRIPT = b"let half = width;\n" * 500
PATHS = frozenset({"/static/a.js", "/static/small.js", "/static/font.woff2", "/static/gone.js"})
GZIP = [("host", HOST), ("accept-encoding", "br, gzip")]


class Files:
    def __init__(self):
        self.read = 0

    async def __call__(self, scope, _receive, send):
        self.read += 1
        body = b"x" if "small" in scope["path"] else SCRIPT
        headers = [
            (b"content-type", b"text/javascript"),
            (b"content-length", str(len(body)).encode()),
            (b"etag", b'"1"'),
            (b"cache-control", b"immutable"),
        ]
        status = 404 if "gone" in scope["path"] else 200
        await send({"type": "http.response.start", "status": status, "headers": headers})
        await send({"type": "http.response.body", "body": body[:7], "more_body": True})
        await send({"type": "http.response.body", "body": body[7:]})


def test_a_script_is_compressed_once():
    files = Files()
    app = CompressedAssets(files, PATHS)
    for _ in range(3):
        reply = ask(app, http_scope("/static/a.js", headers=GZIP))
        assert gzip.decompress(reply.body) == SCRIPT
        assert reply.header("content-encoding") == "gzip"
        assert reply.header("content-length") == str(len(reply.body))
        assert reply.header("content-type") == "text/javascript"
        assert reply.header("cache-control") == "immutable"
        assert reply.header("vary") == "accept-encoding"
        assert reply.header("etag") is None
    assert files.read == 1


@pytest.mark.parametrize(
    ("path", "headers"),
    [
        ("/static/a.js", [("host", HOST)]),
        ("/static/a.js", [("host", HOST), ("accept-encoding", "br")]),
        ("/static/a.js", [("host", HOST), ("accept-encoding", "gzip;q=0")]),
        ("/static/a.js", [("host", HOST), ("accept-encoding", "gzip;q=0.000")]),
        ("/static/a.js", [*GZIP, ("range", "bytes=0-5")]),
        ("/static/a.js", [*GZIP, ("if-none-match", '"1"')]),
        ("/static/small.js", GZIP),
        ("/static/font.woff2", GZIP),
        ("/media/a.js", GZIP),
        ("/readout/token", GZIP),
    ],
)
def test_all_else_goes_as_it_is(path, headers):
    reply = ask(CompressedAssets(Files(), PATHS), http_scope(path, headers=headers))
    assert reply.status == 200
    assert reply.header("content-encoding") is None
    assert reply.body == (b"x" if "small" in path else SCRIPT)


def test_a_missing_file_is_not_kept():
    files = Files()
    app = CompressedAssets(files, PATHS)
    for _ in range(2):
        reply = ask(app, http_scope("/static/gone.js", headers=GZIP))
        assert (reply.status, reply.body) == (404, SCRIPT)
    assert files.read == 2


def test_a_weighted_offer_counts():
    headers = [("host", HOST), ("accept-encoding", "deflate, gzip;q=0.5")]
    reply = ask(CompressedAssets(Files(), PATHS), http_scope("/static/a.js", headers=headers))
    assert reply.header("content-encoding") == "gzip"
