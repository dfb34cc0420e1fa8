"""Scripts and style sheets sent compressed; each is compressed once and kept."""

from __future__ import annotations

import asyncio
import gzip
from dataclasses import dataclass, field

from app.gate.asgi import ASGIApp, Headers, Message, Receive, Scope, Send, header_values

_COMPRESSIBLE = (".js", ".css", ".json", ".svg")
_LEVEL = 6
_SMALLEST = 1024
_REPLACED = {b"content-length", b"content-encoding", b"etag", b"last-modified", b"accept-ranges"}


@dataclass(slots=True)
class _Captured:
    status: int = 500
    headers: Headers = field(default_factory=list)
    chunks: list[bytes] = field(default_factory=list)

    @property
    def body(self) -> bytes:
        return b"".join(self.chunks)

    async def take(self, message: Message) -> None:
        if message["type"] == "http.response.start":
            self.status, self.headers = message["status"], list(message["headers"])
        else:
            self.chunks.append(message.get("body", b""))


class CompressedAssets:
    """ASGI middleware that compresses static files outside the event loop, once each.

    Parameters
    ----------
    app : ASGIApp
        What stands behind.
    paths : frozenset of str
        Paths of the static files; the list bounds what is kept. Their names carry a hash of
        their content, so a kept copy never ages.
    """

    def __init__(self, app: ASGIApp, paths: frozenset[str]) -> None:
        self._app = app
        self._paths = frozenset(path for path in paths if path.endswith(_COMPRESSIBLE))
        self._kept: dict[str, _Captured] = {}

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Send the kept copy, or make it first."""
        if not self._may_compress(scope):
            await self._app(scope, receive, send)
            return
        asset = self._kept.get(scope["path"])
        if asset is None:
            asset = _Captured()
            await self._app(scope, receive, asset.take)
            if asset.status == 200 and len(asset.body) >= _SMALLEST:
                asset = await asyncio.to_thread(_compressed, asset)
                self._kept[scope["path"]] = asset
        start = {"type": "http.response.start", "status": asset.status, "headers": asset.headers}
        await send(start)
        await send({"type": "http.response.body", "body": asset.body})

    def _may_compress(self, scope: Scope) -> bool:
        if scope["type"] != "http" or scope["path"] not in self._paths:
            return False
        partial = header_values(scope, b"range") or header_values(scope, b"if-none-match")
        return scope["method"] == "GET" and not partial and _takes_gzip(scope)


def _takes_gzip(scope: Scope) -> bool:
    offers = ",".join(header_values(scope, b"accept-encoding")).replace(" ", "").split(",")
    return any(o == "gzip" or (o.startswith("gzip;q=") and o[7:].strip("0.")) for o in offers)


def _compressed(asset: _Captured) -> _Captured:
    body = gzip.compress(asset.body, _LEVEL)
    headers = [pair for pair in asset.headers if pair[0].lower() not in _REPLACED]
    headers += [
        (b"content-encoding", b"gzip"),
        (b"content-length", str(len(body)).encode()),
        (b"vary", b"accept-encoding"),
    ]
    return _Captured(asset.status, headers, [body])
