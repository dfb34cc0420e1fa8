"""What a request or socket must show before it may pass: where it is, where it came from."""

from __future__ import annotations

import re
from dataclasses import dataclass

from app.gate.asgi import Answer, Scope, header_values

_SMALL_BODY = 1024
UPLOAD_PATH = re.compile(r"/_stcore/upload_file/([\w-]+)/([\w-]+)")
SOCKET_PATH = "/_stcore/stream"

_OPEN_PREFIX = "/media/"
_OPEN_PATHS = frozenset({"/", "/_stcore/health", "/_stcore/host-config"})
_READING = ("GET", "HEAD")
_UPLOADING = ("PUT", "DELETE")
_FORWARDING = re.compile(rb"x-forwarded-.*|forwarded|x-real-ip")


@dataclass(frozen=True, slots=True)
class GateRules:
    """What the gate lets through.

    Attributes
    ----------
    address : str
        Where a person on this computer should go instead.
    host_values : frozenset of str
        Exact ``Host`` headers, lower case, with port.
    paths : frozenset of str
        Further exact paths that are open: own routes, screens, static files.
    path_patterns : tuple of re.Pattern
        Further paths that are open, matched whole.
    not_found_page : str
        HTML for any other path.
    has_public_address : bool
        Whether a proxy was named; nothing is answered then, because there is no sign-in.
    """

    address: str
    host_values: frozenset[str]
    paths: frozenset[str]
    path_patterns: tuple[re.Pattern[str], ...] = ()
    not_found_page: str = "Not found"
    has_public_address: bool = False


def refusal(scope: Scope, rules: GateRules) -> Answer | None:
    """Name the first rule a request or socket breaks.

    Parameters
    ----------
    scope : Scope
        Scope of type ``http`` or ``websocket``.
    rules : GateRules
        What is let through.

    Returns
    -------
    Answer or None
        The answer to give in its place, or None if it may pass.
    """
    for check in (_no_proxy, _own_host, _own_origin, _own_site, _known_path, _no_stray_body):
        answer = check(scope, rules)
        if answer is not None:
            return answer
    return None


def _no_proxy(scope: Scope, rules: GateRules) -> Answer | None:
    forwarded = any(_FORWARDING.fullmatch(name) for name, _ in scope["headers"])
    if not forwarded and not rules.has_public_address:
        return None
    sentence = (
        "Halfwidth is closed to requests that come through a proxy or for a public address, "
        f"because this version has no sign-in; on its own computer it is open at {rules.address} "
        "while no public address is set."
    )
    return Answer(403, sentence)


def _own_host(scope: Scope, rules: GateRules) -> Answer | None:
    hosts = header_values(scope, b"host")
    if len(hosts) == 1 and hosts[0].lower() in rules.host_values:
        return None
    return Answer(403, f"Halfwidth does not answer to this address; open {rules.address} instead.")


def _own_origin(scope: Scope, rules: GateRules) -> Answer | None:
    origins = header_values(scope, b"origin")
    own = ["http://" + header_values(scope, b"host")[0].lower()]
    if origins == own or (not origins and scope["type"] == "http"):
        return None
    return _foreign_page(rules)


def _own_site(scope: Scope, rules: GateRules) -> Answer | None:
    sites = header_values(scope, b"sec-fetch-site")
    if all(site in {"same-origin", "none"} for site in sites):
        return None
    followed_link = header_values(scope, b"sec-fetch-mode") == ["navigate"]
    if followed_link and scope.get("method") in _READING:
        return None
    return _foreign_page(rules)


def _foreign_page(rules: GateRules) -> Answer:
    return Answer(
        403, f"Another page may not use Halfwidth for you; open {rules.address} yourself."
    )


def _known_path(scope: Scope, rules: GateRules) -> Answer | None:
    path = scope["path"]
    if scope["type"] == "websocket":
        return None if path == SOCKET_PATH else Answer(404, "There is no socket at this address.")
    if UPLOAD_PATH.fullmatch(path):
        allowed = _UPLOADING
    elif _is_open(path, rules):
        allowed = _READING
    else:
        return Answer(404, rules.not_found_page, b"text/html; charset=utf-8")
    if scope["method"] in allowed:
        return None
    methods = ", ".join(allowed)
    return Answer(
        405, f"This address takes {methods} only.", headers=((b"allow", methods.encode()),)
    )


def _is_open(path: str, rules: GateRules) -> bool:
    return (
        path in _OPEN_PATHS
        or path in rules.paths
        or path.startswith(_OPEN_PREFIX)
        or any(pattern.fullmatch(path) for pattern in rules.path_patterns)
    )


def _no_stray_body(scope: Scope, _rules: GateRules) -> Answer | None:
    if scope["type"] == "websocket" or scope["method"] == "PUT":
        return None
    lengths = header_values(scope, b"content-length")
    most = _SMALL_BODY if _takes_back_an_upload(scope) else 0
    stated = all(n.isascii() and n.isdigit() and int(n) <= most for n in lengths)
    if not header_values(scope, b"transfer-encoding") and stated:
        return None
    return Answer(413, "This address takes no body.")


def _takes_back_an_upload(scope: Scope) -> bool:
    """Whether the front end takes back an upload; it then sends a few bytes along."""
    return scope["method"] == "DELETE" and UPLOAD_PATH.fullmatch(scope["path"]) is not None
