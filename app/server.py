"""The web server: Streamlit's screens, the readout route and the gate in front of both."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from pathlib import Path

import streamlit
from starlette.middleware import Middleware
from starlette.requests import Request
from starlette.responses import (
    FileResponse,
    HTMLResponse,
    JSONResponse,
    PlainTextResponse,
    RedirectResponse,
    Response,
)
from starlette.routing import Route

from app.gate.compressed_assets import CompressedAssets
from app.gate.gate import Gate
from app.gate.request_checks import GateRules
from app.gate.security_headers import script_hashes, secured
from app.gate.upload_caps import MEBIBYTE, UploadCaps, UploadLimits
from app.screen_list import SCREEN_PATHS
from app.settings import VERSION, Settings
from app.sharing.plain_pages import PAGE_POLICY, PLAIN_STYLE, page_failed, page_not_found
from app.sharing.readout_answers import nothing_published
from app.sharing.readout_routes import PAGE_HEADERS, FindPage, readout_routes
from app.sharing.style_sheets import StyleSheet
from app.sharing.wrong_tries import WrongTries

MAIN_SCRIPT = Path(__file__).with_name("main.py").resolve()
ICON = Path(__file__).with_name("icon.png").resolve()

_PLATFORM_FILES = Path(streamlit.__file__).parent / "static"
_READOUT_LINK = re.compile(r"/readout/[^/]+")
_ICON_PATHS = ("/favicon.png", "/favicon.ico")


def build_app(
    settings: Settings,
    find_page: FindPage = nothing_published,
    *,
    script: Path = MAIN_SCRIPT,
    styles: Sequence[StyleSheet] = (),
) -> streamlit.App:
    """Put the screens, the routes and the gate together.

    Parameters
    ----------
    settings : Settings
        Where the server listens and who may speak to it; the port must be the real one.
    find_page : callable
        Hash of a token to a ``ReadoutAnswer``; called in a worker thread.
    script : Path
        Entry script of the screens.
    styles : sequence of StyleSheet
        Style sheets of the readout page, beside that of the plain pages.

    Returns
    -------
    streamlit.App
        An ASGI application; one per process.
    """
    routes = own_routes(find_page, (PLAIN_STYLE, *styles))
    return streamlit.App(
        script,
        routes=routes,
        middleware=middleware(settings, routes),
        exception_handlers=EXCEPTION_HANDLERS,
    )


def own_routes(find_page: FindPage, styles: Sequence[StyleSheet] = (PLAIN_STYLE,)) -> list[Route]:
    """Give the routes that do not belong to a screen.

    Parameters
    ----------
    find_page : callable
        Hash of a token to a ``ReadoutAnswer``.
    styles : sequence of StyleSheet
        Style sheets to serve.

    Returns
    -------
    list of Route
        Health, robots, icon, readout and style sheets.
    """
    return [
        Route("/healthz", _healthz),
        Route("/robots.txt", _robots),
        Route("/studies", _studies),
        *(Route(path, _icon) for path in _ICON_PATHS),
        *readout_routes(find_page, WrongTries(), styles),
    ]


def middleware(settings: Settings, routes: Sequence[Route]) -> list[Middleware]:
    """Give what every request passes, outermost first: gate, upload caps, compression.

    Parameters
    ----------
    settings : Settings
        Where the server listens.
    routes : sequence of Route
        Own routes, whose paths the gate leaves open.

    Returns
    -------
    list of Middleware
        For a Starlette application.
    """
    assets = _asset_paths()
    index = (_PLATFORM_FILES / "index.html").read_text(encoding="utf-8")
    limits = UploadLimits(file_bytes=streamlit.get_option("server.maxUploadSize") * MEBIBYTE)
    return [
        Middleware(
            Gate, rules=_gate_rules(settings, routes, assets), script_hashes=script_hashes(index)
        ),
        Middleware(UploadCaps, limits=limits, held=_held_uploads),
        Middleware(CompressedAssets, paths=assets),
    ]


def _gate_rules(settings: Settings, routes: Sequence[Route], assets: frozenset[str]) -> GateRules:
    screens = {f"/{name}{end}" for name in SCREEN_PATHS for end in ("", "/")}
    return GateRules(
        address=settings.address,
        host_values=settings.host_values,
        paths=frozenset(route.path for route in routes) | assets | screens,
        path_patterns=(_READOUT_LINK,),
        not_found_page=page_not_found(),
        has_public_address=settings.public_address is not None,
    )


def _asset_paths() -> frozenset[str]:
    folder = _PLATFORM_FILES / "static"
    files = (path for path in folder.rglob("*") if path.is_file())
    return frozenset(f"/static/{path.relative_to(folder).as_posix()}" for path in files)


def _held_uploads(session: str) -> Mapping[str, int]:
    """Ask the platform which files it holds for a session, with their sizes."""
    manager = streamlit.runtime.get_instance().uploaded_file_mgr
    files = dict(manager.file_storage.get(session, {}))  # type: ignore[attr-defined]
    return {file: len(record.data) for file, record in files.items()}


def _healthz(_request: Request) -> Response:
    return JSONResponse({"ok": True, "version": VERSION}, headers={"cache-control": "no-store"})


def _robots(_request: Request) -> Response:
    return PlainTextResponse("User-agent: *\nDisallow: /\n")


def _studies(_request: Request) -> Response:
    """Lead to the first screen, whose address is the root."""
    return RedirectResponse("/", 307, headers={"cache-control": "no-store"})


def _icon(_request: Request) -> Response:
    return FileResponse(ICON, media_type="image/png")


def _failed(_request: Request, _error: Exception) -> Response:
    """Answer a fault of ours; this runs outside the gate, so the headers are put on here."""
    response = HTMLResponse(page_failed(), 500, headers=PAGE_HEADERS)
    response.raw_headers = secured(response.raw_headers, PAGE_POLICY.encode())
    return response


EXCEPTION_HANDLERS = {Exception: _failed}
