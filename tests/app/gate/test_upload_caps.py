from __future__ import annotations

import asyncio

import pytest

from app.gate.upload_caps import MEBIBYTE, UploadCaps, UploadLimits
from tests.support.asgi_calls import HOST, ask, http_scope

LIMITS = UploadLimits(file_bytes=2 * MEBIBYTE, files=3, session_bytes=4 * MEBIBYTE)


async def behind(_scope, _receive, send):
    await send({"type": "http.response.start", "status": 204, "headers": []})
    await send({"type": "http.response.body", "body": b""})


def caps(held=None, app=behind):
    return UploadCaps(app, LIMITS, lambda session: (held or {}).get(session, {}))


def upload(size, file="new", session="one", more=()):
    length = [] if size is None else [("content-length", str(size))]
    path = f"/_stcore/upload_file/{session}/{file}"
    return http_scope(path, "PUT", [("host", HOST), *length, *more])


def test_a_file_up_to_its_cap_passes():
    assert ask(caps(), upload(2 * MEBIBYTE)).status == 204


def test_a_larger_file_is_refused_with_the_cap():
    reply = ask(caps(), upload(2 * MEBIBYTE + 65 * 1024))
    assert (reply.status, reply.text) == (413, "A file may have at most 2 MB.")


@pytest.mark.parametrize(
    "scope",
    [
        upload(None),
        upload("many"),
        upload("-5"),
        upload(5, more=[("transfer-encoding", "chunked")]),
        upload(5, more=[("content-length", "6")]),
    ],
)
def test_an_upload_states_its_length(scope):
    assert ask(caps(), scope).status == 411


def test_the_number_of_files_of_one_session_is_capped():
    held = {"one": {"a": 1, "b": 1, "c": 1}}
    assert ask(caps(held), upload(1)).status == 413
    assert ask(caps(held), upload(1, session="two")).status == 204
    assert ask(caps(held), upload(1, file="a")).status == 204, "the same file once more"


def test_the_bytes_of_one_session_are_capped():
    held = {"one": {"a": 2 * MEBIBYTE, "b": 1 * MEBIBYTE}}
    assert ask(caps(held), upload(MEBIBYTE)).status == 204
    reply = ask(caps(held), upload(2 * MEBIBYTE))
    assert (reply.status, "at most 4 MB" in reply.text) == (413, True)


def test_files_on_their_way_count_and_are_forgotten_afterwards():
    async def story():
        gate_open = asyncio.Event()

        async def slow(scope, receive, send):
            await gate_open.wait()
            await behind(scope, receive, send)

        app = caps(app=slow)
        statuses = {}

        async def one(file):
            async def send(message):
                statuses.setdefault(file, message.get("status"))

            await app(upload(1, file=file), None, send)

        waiting = [asyncio.create_task(one(file)) for file in "abc"]
        await asyncio.sleep(0)
        await one("d")
        gate_open.set()
        await asyncio.gather(*waiting)
        await one("e")
        return statuses, dict(app._on_the_way)

    statuses, on_the_way = asyncio.run(story())
    assert statuses == {"a": 204, "b": 204, "c": 204, "d": 413, "e": 204}
    assert on_the_way == {}


def test_an_upload_that_breaks_off_is_forgotten():
    async def broken(_scope, _receive, _send):
        raise ConnectionError("gone")

    app = caps(app=broken)
    with pytest.raises(ConnectionError):
        ask(app, upload(1))
    assert dict(app._on_the_way) == {}


def test_other_requests_are_not_looked_at():
    path = "/_stcore/upload_file/one/a"
    assert ask(caps({"one": dict.fromkeys("abc", 1)}), http_scope(path, "DELETE")).status == 204
    assert ask(caps(), http_scope("/")).status == 204
