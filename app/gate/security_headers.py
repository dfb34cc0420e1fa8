"""The headers that tell a browser what a page of ours may do, and who may frame or read it."""

from __future__ import annotations

import base64
import hashlib
import re

from app.gate.asgi import Headers

_INLINE_SCRIPT = re.compile(r"<script>(.*?)</script>", re.DOTALL)
_CLOSED_FEATURES = (
    "accelerometer camera display-capture geolocation gyroscope hid magnetometer microphone midi "
    "payment publickey-credentials-get screen-wake-lock serial usb xr-spatial-tracking"
)
_FIXED: Headers = [
    (b"x-content-type-options", b"nosniff"),
    (b"x-frame-options", b"DENY"),
    (b"referrer-policy", b"no-referrer"),
    (b"cross-origin-opener-policy", b"same-origin"),
    (b"cross-origin-resource-policy", b"same-origin"),
    (b"x-robots-tag", b"noindex, nofollow"),
    (b"permissions-policy", ", ".join(f"{f}=()" for f in _CLOSED_FEATURES.split()).encode()),
]
_OWN_POLICY = b"content-security-policy"
_FIXED_NAMES = {name for name, _ in _FIXED}


def script_hashes(page: str) -> tuple[str, ...]:
    """Give the policy sources that allow exactly the inline scripts of a page.

    Parameters
    ----------
    page : str
        HTML of the page.

    Returns
    -------
    tuple of str
        One quoted ``sha256-`` source for each inline script.
    """
    digests = (hashlib.sha256(s.encode()).digest() for s in _INLINE_SCRIPT.findall(page))
    return tuple(f"'sha256-{base64.b64encode(digest).decode()}'" for digest in digests)


def screen_policy(host: str, hashes: tuple[str, ...]) -> bytes:
    """Write the content security policy of the screens.

    Parameters
    ----------
    host : str
        Checked ``Host`` value of the request: some browsers do not count a socket as 'self'.
    hashes : tuple of str
        Sources that allow the inline scripts of the page.

    Returns
    -------
    bytes
        Value of the header. Styles may be inline because the charts and the grid set them so.
    """
    script = " ".join(("'self'", *hashes))
    policy = (
        f"default-src 'self'; script-src {script}; connect-src 'self' ws://{host}; "
        "style-src 'self' 'unsafe-inline'; img-src 'self' data: blob:; font-src 'self' data:; "
        "worker-src 'self' blob:; object-src 'none'; base-uri 'self'; form-action 'self'; "
        "frame-ancestors 'none'"
    )
    return policy.encode()


def secured(headers: Headers, policy: bytes) -> Headers:
    """Add our headers to those of an answer.

    Parameters
    ----------
    headers : Headers
        What the answer carries. A stricter policy of its own stays; leave for other origins to
        read it is taken out.
    policy : bytes
        Content security policy for an answer that has none.

    Returns
    -------
    Headers
        A new list.
    """
    kept = [
        (name, value)
        for name, value in headers
        if name.lower() not in _FIXED_NAMES and not name.lower().startswith(b"access-control-")
    ]
    if all(name.lower() != _OWN_POLICY for name, _ in kept):
        kept.append((_OWN_POLICY, policy))
    return kept + _FIXED
