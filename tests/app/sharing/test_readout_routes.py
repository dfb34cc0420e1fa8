from __future__ import annotations

import pytest
from starlette.applications import Starlette

from app.sharing.link_tokens import hash_token, make_token
from app.sharing.plain_pages import PLAIN_STYLE
from app.sharing.readout_answers import ReadoutAnswer, nothing_published
from app.sharing.readout_routes import readout_routes
from app.sharing.wrong_tries import WrongTries
from tests.support.asgi_calls import ask, http_scope

LIVE, OLD, CLOSED = make_token(), make_token(), make_token()
LINKS = {
    hash_token(LIVE): ReadoutAnswer("live", "<p>42 %</p>"),
    hash_token(OLD): ReadoutAnswer("expired"),
    hash_token(CLOSED): ReadoutAnswer("revoked"),
}


class Store:
    def __init__(self):
        self.asked = []

    def find(self, token_hash):
        self.asked.append(token_hash)
        return LINKS.get(token_hash, ReadoutAnswer("unknown"))


@pytest.fixture
def store():
    return Store()


@pytest.fixture
def app(store):
    tries = WrongTries(limit=3, clock=lambda: 0.0)
    return Starlette(routes=readout_routes(store.find, tries, [PLAIN_STYLE]))


def open_link(app, token, method="GET", client="192.0.2.1"):
    return ask(app, http_scope(f"/readout/{token}", method, client=(client, 1)))


@pytest.mark.parametrize(
    ("token", "status", "words"),
    [
        (LIVE, 200, "<p>42 %</p>"),
        (OLD, 410, "has expired"),
        (CLOSED, 410, "was withdrawn"),
        (make_token(), 404, "no readout at this link"),
        ("short", 404, "no readout at this link"),
    ],
)
@pytest.mark.parametrize("method", ["GET", "HEAD"])
def test_each_state_of_a_link_has_its_answer(app, token, status, words, method):
    reply = open_link(app, token, method)
    assert reply.status == status
    assert words in reply.text or method == "HEAD"
    assert reply.header("cache-control") == "no-store"
    assert reply.header("referrer-policy") == "no-referrer"
    assert "noindex" in reply.header("x-robots-tag")
    policy = reply.header("content-security-policy")
    assert "default-src 'none'" in policy
    assert "unsafe-inline" not in policy
    assert "script-src" not in policy


def test_the_store_is_asked_by_hash_and_never_for_junk(app, store):
    open_link(app, LIVE)
    open_link(app, "junk")
    assert store.asked == [hash_token(LIVE)]


def test_wrong_tries_are_slowed_but_right_links_open_all_the_same(app):
    answers = [open_link(app, make_token()) for _ in range(4)]
    assert [answer.status for answer in answers] == [404, 404, 404, 429]
    assert answers[-1].header("retry-after") == "60"
    assert "wait 60 seconds" in answers[-1].text
    assert open_link(app, LIVE).status == 200
    assert open_link(app, OLD).status == 410
    assert open_link(app, make_token(), client="192.0.2.2").status == 404


def test_old_links_are_no_wrong_tries(app):
    for _ in range(10):
        assert open_link(app, OLD).status == 410
    assert open_link(app, make_token()).status == 404


def test_one_wrong_link_is_slowed_wherever_it_is_tried(app):
    token = make_token()
    statuses = [open_link(app, token, client=f"192.0.2.{n}").status for n in range(4)]
    assert statuses == [404, 404, 404, 429]


def test_nothing_but_reading(app):
    for method in ("POST", "PUT", "DELETE"):
        assert open_link(app, LIVE, method).status == 405


def test_pages_carry_no_inline_style_or_script_and_name_a_style_sheet_that_is_served(app):
    page = open_link(app, OLD).text
    assert "<style" not in page
    assert " style=" not in page
    assert "<script" not in page
    assert f'href="{PLAIN_STYLE.path}"' in page
    sheet = ask(app, http_scope(PLAIN_STYLE.path))
    assert (sheet.status, sheet.text) == (200, PLAIN_STYLE.text)
    assert sheet.header("content-type").startswith("text/css")
    assert "immutable" in sheet.header("cache-control")


def test_a_client_is_not_shown_the_way_to_the_studies(app):
    for token in (OLD, CLOSED, make_token()):
        assert "<a " not in open_link(app, token).text


def test_without_a_store_no_link_is_known():
    assert nothing_published("any") == ReadoutAnswer("unknown", "")
