"""The secret in a readout link: made once, shown once, stored only as a hash."""

from __future__ import annotations

import hashlib
import hmac
import re
import secrets

TOKEN_BYTES = 24  # 192 random bits

_SHAPE = re.compile(r"[A-Za-z0-9_-]{22,64}")


def make_token() -> str:
    """Make the secret part of a new link.

    Returns
    -------
    str
        32 url-safe characters that carry 192 random bits.
    """
    return secrets.token_urlsafe(TOKEN_BYTES)


def looks_like_token(text: str) -> bool:
    """Say whether a text could be a token at all, so that junk costs no look-up.

    Parameters
    ----------
    text : str
        Last part of the address somebody opened.

    Returns
    -------
    bool
        True for 22 to 64 url-safe characters (22 carry 128 bits).
    """
    return _SHAPE.fullmatch(text) is not None


def hash_token(token: str) -> str:
    """Give the form in which a token is stored and looked up.

    Parameters
    ----------
    token : str
        Secret part of a link.

    Returns
    -------
    str
        SHA-256 in 64 hexadecimal digits. No salt and no slow hash: nobody can guess 128 random
        bits, and the hash must find its row.

    References
    ----------
    National Institute of Standards and Technology (2015), FIPS 180-4, Secure Hash Standard.
    """
    return hashlib.sha256(token.encode()).hexdigest()


def same_token(token: str, stored_hash: str) -> bool:
    """Compare a token with a stored hash in a time that tells nothing.

    Parameters
    ----------
    token : str
        What somebody sent.
    stored_hash : str
        What ``hash_token`` gave when the link was made.

    Returns
    -------
    bool
        True if they belong together.
    """
    return hmac.compare_digest(hash_token(token).encode(), stored_hash.encode())
