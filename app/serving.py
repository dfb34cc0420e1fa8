"""Listening and serving: the socket, what is loaded before the first request, uvicorn."""

from __future__ import annotations

import errno
import gc
import importlib
import socket
from collections.abc import Callable
from typing import Any

import uvicorn

from app.settings import StartError

BACKLOG = 128
_LARGEST_MESSAGE = 32 * 1024 * 1024  # inbound; widget values of a screen are far smaller
_PING_SECONDS = 30
_HEAVY_MODULES = (
    "numpy",
    "pandas",
    "plotly.graph_objects",
    "pyarrow",
    "scipy.stats",
    "sqlalchemy",
    "streamlit.elements.plotly_chart",
    "streamlit.runtime.scriptrunner",
    "streamlit.web.server.starlette",
)


def listening_socket(host: str, port: int) -> socket.socket:
    """Take the port before anything slow is loaded.

    Parameters
    ----------
    host : str
        IPv4 or IPv6 address.
    port : int
        0 for any free port.

    Returns
    -------
    socket.socket
        Listening. It names its protocol, because asyncio sends small frames without delay only
        on sockets that say they are TCP.

    Raises
    ------
    StartError
        If the port is taken, reserved, or the address is not one of this computer.
    """
    family = socket.AF_INET6 if ":" in host else socket.AF_INET
    listener = socket.socket(family, socket.SOCK_STREAM, socket.IPPROTO_TCP)
    try:
        listener.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        listener.bind((host, port))
        listener.listen(BACKLOG)
    except OSError as error:
        listener.close()
        raise StartError(_why_not(error, host, port)) from error
    return listener


def warm_up() -> None:
    """Load the heavy modules, then put all they made out of reach of the garbage collector.

    Streamlit collects garbage after every run of a screen; without the freeze that walks through
    every object of these modules and costs more than most runs themselves.
    """
    for name in _HEAVY_MODULES:
        importlib.import_module(name)
    gc.collect()
    gc.freeze()


def serve(app: Any, listener: socket.socket, on_open: Callable[[], None]) -> None:  # noqa: ANN401
    """Serve until the process is told to stop.

    Parameters
    ----------
    app : ASGI application
        What ``build_app`` gave.
    listener : socket.socket
        What ``listening_socket`` gave.
    on_open : callable
        Called once when requests are answered.
    """
    _Server(_config(app), on_open).run(sockets=[listener])


class _Server(uvicorn.Server):
    def __init__(self, config: uvicorn.Config, on_open: Callable[[], None]) -> None:
        super().__init__(config)
        self._on_open = on_open

    async def startup(self, sockets: list[socket.socket] | None = None) -> None:
        await super().startup(sockets)
        self._on_open()


def _config(app: Any) -> uvicorn.Config:  # noqa: ANN401
    return uvicorn.Config(
        app,
        access_log=False,  # its lines would hold the tokens of readout links
        log_level="warning",
        use_colors=False,
        lifespan="on",
        workers=1,  # sessions and uploads live in one process
        proxy_headers=False,
        server_header=False,
        backlog=BACKLOG,
        ws="websockets-sansio",
        ws_per_message_deflate=False,
        ws_max_size=_LARGEST_MESSAGE,
        ws_ping_interval=_PING_SECONDS,
        ws_ping_timeout=_PING_SECONDS,
        timeout_graceful_shutdown=1,
    )


def _why_not(error: OSError, host: str, port: int) -> str:
    reasons = {
        errno.EADDRINUSE: f"port {port} is already in use, perhaps by Halfwidth itself",
        errno.EACCES: f"port {port} is reserved for the system",
        errno.EADDRNOTAVAIL: f"this computer has no address {host}",
    }
    reason = reasons.get(
        error.errno or 0, f"{host} port {port} cannot be opened ({error.strerror})"
    )
    return f"Halfwidth cannot start: {reason}; choose another with --port or --host."
