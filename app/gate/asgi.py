"""The few ASGI shapes the gate speaks: types, header look-up and short answers."""

from __future__ import annotations

from collections.abc import Awaitable, Callable, MutableMapping
from dataclasses import dataclass
from typing import Any

Scope = MutableMapping[str, Any]
Message = MutableMapping[str, Any]
Receive = Callable[[], Awaitable[Message]]
Send = Callable[[Message], Awaitable[None]]
ASGIApp = Callable[[Scope, Receive, Send], Awaitable[None]]
Headers = list[tuple[bytes, bytes]]

PLAIN_TEXT = b"text/plain; charset=utf-8"


@dataclass(frozen=True, slots=True)
class Answer:
    """A whole answer: status, text, media type and what further headers it needs."""

    status: int
    text: str
    media_type: bytes = PLAIN_TEXT
    headers: tuple[tuple[bytes, bytes], ...] = ()


def header_values(scope: Scope, name: bytes) -> list[str]:
    """Give every value of one header.

    Parameters
    ----------
    scope : Scope
        Connection scope; its header names are in lower case, as ASGI demands.
    name : bytes
        Header name in lower case.

    Returns
    -------
    list of str
        In the order sent; empty if the header is absent.
    """
    return [value.decode("latin-1") for key, value in scope["headers"] if key == name]


async def send_answer(answer: Answer, scope: Scope, send: Send) -> None:
    """Send a whole answer to a request, or close a socket before it opens.

    Parameters
    ----------
    answer : Answer
        What to say. A page never sees the words of a refused socket, so none are sent: the
        server turns the close into status 403.
    scope : Scope
        Scope of the request or socket.
    send : Send
        Where to say it.
    """
    if scope["type"] == "websocket":
        await send({"type": "websocket.close", "code": 1008})
        return
    body = answer.text.encode()
    headers = [
        (b"content-type", answer.media_type),
        (b"content-length", str(len(body)).encode()),
        (b"cache-control", b"no-store"),
        *answer.headers,
    ]
    await send({"type": "http.response.start", "status": answer.status, "headers": headers})
    await send({"type": "http.response.body", "body": body})
