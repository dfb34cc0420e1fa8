"""The addresses a client opens: the readout behind a link, and the style of its page."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from starlette.requests import Request
from starlette.responses import HTMLResponse, Response
from starlette.routing import Route

from app.sharing.link_tokens import hash_token, looks_like_token
from app.sharing.plain_pages import (
    PAGE_POLICY,
    link_expired,
    link_unknown,
    link_withdrawn,
    too_many_tries,
)
from app.sharing.readout_answers import ReadoutAnswer
from app.sharing.style_sheets import StyleSheet
from app.sharing.wrong_tries import WrongTries, address_key, link_key

FindPage = Callable[[str], ReadoutAnswer]

PAGE_HEADERS = {
    "cache-control": "no-store",
    "content-security-policy": PAGE_POLICY,
    "referrer-policy": "no-referrer",
    "x-robots-tag": "noindex, nofollow",
}
_ONE_YEAR = 365 * 24 * 60 * 60


def readout_routes(
    find_page: FindPage, tries: WrongTries, styles: Sequence[StyleSheet]
) -> list[Route]:
    """Give the routes of the readout.

    Parameters
    ----------
    find_page : callable
        Hash of a token to the state of its link; called in a worker thread.
    tries : WrongTries
        Where wrong tries are counted.
    styles : sequence of StyleSheet
        Style sheets the pages use.

    Returns
    -------
    list of Route
        ``/readout/{token}`` and one route for each style sheet.
    """

    def readout(request: Request) -> Response:
        token = request.path_params["token"]
        token_hash = hash_token(token)
        answer = find_page(token_hash) if looks_like_token(token) else ReadoutAnswer("unknown")
        if answer.status == "unknown":
            host = request.client.host if request.client else None
            wait = tries.count(address_key(host), link_key(token_hash))
            return _not_known(wait)
        return _known(answer)

    return [Route("/readout/{token}", readout), *(_style_route(sheet) for sheet in styles)]


def _known(answer: ReadoutAnswer) -> Response:
    if answer.status == "live":
        return HTMLResponse(answer.html, headers=PAGE_HEADERS)
    page = link_expired() if answer.status == "expired" else link_withdrawn()
    return HTMLResponse(page, 410, headers=PAGE_HEADERS)


def _not_known(wait: int) -> Response:
    if wait:
        headers = {**PAGE_HEADERS, "retry-after": str(wait)}
        return HTMLResponse(too_many_tries(wait), 429, headers=headers)
    return HTMLResponse(link_unknown(), 404, headers=PAGE_HEADERS)


def _style_route(sheet: StyleSheet) -> Route:
    headers = {"cache-control": f"public, immutable, max-age={_ONE_YEAR}"}

    def style(_request: Request) -> Response:
        return Response(sheet.text, media_type="text/css", headers=headers)

    return Route(sheet.path, style)
