"""The gate: every request and socket is checked here before a screen or a readout sees it."""

from __future__ import annotations

from app.gate.asgi import ASGIApp, Message, Receive, Scope, Send, header_values, send_answer
from app.gate.request_checks import GateRules, refusal
from app.gate.security_headers import screen_policy, secured

_REFUSAL_POLICY = b"default-src 'none'; style-src 'self'; base-uri 'none'; frame-ancestors 'none'"


class Gate:
    """ASGI middleware that refuses what breaks a rule and puts strict headers on every answer.

    Parameters
    ----------
    app : ASGIApp
        What stands behind the gate.
    rules : GateRules
        What is let through.
    script_hashes : tuple of str
        Policy sources for the inline scripts of the screens' page.
    """

    def __init__(self, app: ASGIApp, rules: GateRules, script_hashes: tuple[str, ...] = ()) -> None:
        self._app = app
        self._rules = rules
        self._script_hashes = script_hashes

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one connection, or hand it on."""
        if scope["type"] not in {"http", "websocket"}:
            await self._app(scope, receive, send)
            return
        answer = refusal(scope, self._rules)
        if answer is not None:
            await send_answer(answer, scope, _with_headers(send, _REFUSAL_POLICY))
        elif scope["type"] == "websocket":
            await self._app(scope, receive, send)
        else:
            policy = screen_policy(header_values(scope, b"host")[0].lower(), self._script_hashes)
            await self._app(_without_origin(scope), receive, _with_headers(send, policy))


def _with_headers(send: Send, policy: bytes) -> Send:
    async def send_secured(message: Message) -> None:
        if message["type"] == "http.response.start":
            message = {**message, "headers": secured(list(message.get("headers", [])), policy)}
        await send(message)

    return send_secured


def _without_origin(scope: Scope) -> Scope:
    """Drop the checked origin, so that nobody behind the gate looks up addresses to judge it."""
    return {**scope, "headers": [pair for pair in scope["headers"] if pair[0] != b"origin"]}
