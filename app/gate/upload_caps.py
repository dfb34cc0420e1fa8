"""How much one browser session may upload: bytes per file, files and bytes in all."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from app.gate.asgi import Answer, ASGIApp, Receive, Scope, Send, header_values, send_answer
from app.gate.request_checks import UPLOAD_PATH

MEBIBYTE = 1024 * 1024
_FRAMING = 64 * 1024  # a multipart body is a little longer than the file inside


@dataclass(frozen=True, slots=True)
class UploadLimits:
    """The caps: bytes of one file, number of files and bytes held by one session."""

    file_bytes: int = 200 * MEBIBYTE
    files: int = 20
    session_bytes: int = 1024 * MEBIBYTE


class UploadCaps:
    """ASGI middleware that refuses an upload over a cap before its body is read.

    Parameters
    ----------
    app : ASGIApp
        What stands behind.
    limits : UploadLimits
        The caps.
    held : callable
        Session id to ``{file id: bytes}`` of the files the server holds for it now. Files on
        their way are counted here on top.
    """

    def __init__(
        self, app: ASGIApp, limits: UploadLimits, held: Callable[[str], Mapping[str, int]]
    ) -> None:
        self._app = app
        self._limits = limits
        self._held = held
        self._on_the_way: defaultdict[str, dict[str, int]] = defaultdict(dict)

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Let an upload through, or say which cap it breaks."""
        upload = UPLOAD_PATH.fullmatch(scope["path"]) if scope["type"] == "http" else None
        if upload is None or scope["method"] != "PUT":
            await self._app(scope, receive, send)
            return
        session, file = upload.groups()
        size = _declared_size(scope)
        answer = self._refusal(session, file, size)
        if answer is not None:
            await send_answer(answer, scope, send)
            return
        self._on_the_way[session][file] = size or 0
        try:
            await self._app(scope, receive, send)
        finally:
            self._forget(session, file)

    def _refusal(self, session: str, file: str, size: int | None) -> Answer | None:
        if size is None:
            return Answer(411, "An upload must state its length.")
        limits, others = self._limits, self._others(session, file)
        if size > limits.file_bytes + _FRAMING:
            return Answer(413, f"A file may have at most {_mebibytes(limits.file_bytes)}.")
        if len(others) >= limits.files:
            return Answer(413, f"At most {limits.files} files at a time: reload the page first.")
        if sum(others.values()) + size > limits.session_bytes + _FRAMING:
            most = _mebibytes(limits.session_bytes)
            return Answer(
                413, f"All files together may have at most {most}: reload the page first."
            )
        return None

    def _others(self, session: str, file: str) -> dict[str, int]:
        files = {**self._held(session), **self._on_the_way.get(session, {})}
        files.pop(file, None)
        return files

    def _forget(self, session: str, file: str) -> None:
        self._on_the_way[session].pop(file, None)
        if not self._on_the_way[session]:
            del self._on_the_way[session]


def _declared_size(scope: Scope) -> int | None:
    lengths = header_values(scope, b"content-length")
    if header_values(scope, b"transfer-encoding") or len(lengths) != 1:
        return None
    return int(lengths[0]) if lengths[0].isascii() and lengths[0].isdigit() else None


def _mebibytes(size: int) -> str:
    return f"{size // MEBIBYTE} MB"
