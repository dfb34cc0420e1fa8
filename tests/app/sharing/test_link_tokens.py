from __future__ import annotations

import base64
import re

import pytest

from app.sharing.link_tokens import hash_token, looks_like_token, make_token, same_token


def test_a_token_carries_at_least_128_bits_in_url_safe_letters():
    token = make_token()
    assert re.fullmatch(r"[A-Za-z0-9_-]+", token)
    assert len(base64.urlsafe_b64decode(token)) * 8 >= 128
    assert looks_like_token(token)


def test_every_bit_of_a_token_varies_and_none_comes_twice():
    tokens = [base64.urlsafe_b64decode(make_token()) for _ in range(500)]
    assert len(set(tokens)) == 500
    ever_set, always_set = 0, -1
    for token in tokens:
        bits = int.from_bytes(token)
        ever_set, always_set = ever_set | bits, always_set & bits
    assert ever_set == 2 ** (8 * len(tokens[0])) - 1
    assert always_set == 0


def test_the_hash_is_sha_256():
    # FIPS 180-2 (2002), appendix B.1: the message "abc"
    published = "ba7816bf 8f01cfea 414140de 5dae2223 b00361a3 96177a9c b410ff61 f20015ad"
    assert hash_token("abc") == published.replace(" ", "")


def test_only_the_same_token_matches():
    token = make_token()
    assert same_token(token, hash_token(token))
    assert not same_token(make_token(), hash_token(token))
    assert not same_token(token, token)
    assert not same_token("", "")


@pytest.mark.parametrize(
    "text", ["", "short", "a" * 21, "a" * 65, "a" * 21 + "/", "ä" * 30, "a" * 30 + "\n"]
)
def test_junk_is_no_token(text):
    assert not looks_like_token(text)
