"""Requests and sockets put to an ASGI application without a server."""

from __future__ import annotations

import asyncio
from dataclasses import dataclass, field
from typing import Any

HOST = "127.0.0.1:8501"
Pairs = list[tuple[str, str]]


@dataclass(slots=True)
class Reply:
    """What came back; a socket that was let in has status 101."""

    status: int = 0
    headers: Pairs = field(default_factory=list)
    body: bytes = b""
    close_code: int | None = None

    @property
    def text(self) -> str:
        return self.body.decode()

    def header(self, name: str) -> str | None:
        found = [value for key, value in self.headers if key == name]
        assert len(found) <= 1, f"{name} was sent {len(found)} times"
        return found[0] if found else None


def http_scope(path: str, method: str = "GET", headers: Pairs | None = None, **more: Any):
    pairs = [("host", HOST)] if headers is None else headers
    return {
        "type": "http",
        "asgi": {"version": "3.0"},
        "http_version": "1.1",
        "method": method,
        "scheme": "http",
        "path": path,
        "raw_path": path.encode(),
        "root_path": "",
        "query_string": b"",
        "headers": [(name.encode(), value.encode()) for name, value in pairs],
        "client": ("127.0.0.1", 50000),
        "server": ("127.0.0.1", 8501),
        **more,
    }


def socket_scope(path: str = "/_stcore/stream", headers: Pairs | None = None, **more: Any):
    scope = http_scope(path, "GET", headers, subprotocols=[], **more)
    del scope["method"]
    return {**scope, "type": "websocket", "scheme": "ws"}


def ask(app: Any, scope: dict[str, Any], body: bytes = b"") -> Reply:
    """Run one exchange to its end."""
    reply = Reply()

    async def receive():
        if scope["type"] == "websocket":
            return {"type": "websocket.connect"}
        return {"type": "http.request", "body": body, "more_body": False}

    async def send(message):
        kind = message["type"]
        if kind == "http.response.start":
            reply.status = message["status"]
            reply.headers = [(k.decode().lower(), v.decode()) for k, v in message["headers"]]
        elif kind == "http.response.body":
            reply.body += message.get("body", b"")
        elif kind == "websocket.accept":
            reply.status = 101
        elif kind == "websocket.close":
            reply.close_code = message["code"]

    asyncio.run(app(scope, receive, send))
    return reply
