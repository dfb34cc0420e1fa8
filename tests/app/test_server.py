"""The real process: started once, asked many things, and stopped."""

from __future__ import annotations

import gzip
import http.client
import json
import re
import signal
import socket
import subprocess
import sys
from http.cookies import SimpleCookie
from pathlib import Path

import pytest
import streamlit
from starlette.applications import Starlette
from streamlit.proto.BackMsg_pb2 import BackMsg
from streamlit.proto.ForwardMsg_pb2 import ForwardMsg
from websockets.exceptions import InvalidStatus
from websockets.sync.client import connect

from app.__main__ import main
from app.screen_list import SCREEN_PATHS
from app.server import EXCEPTION_HANDLERS, middleware, own_routes
from app.settings import Settings
from app.sharing.link_tokens import make_token
from app.sharing.plain_pages import PLAIN_STYLE
from app.sharing.readout_answers import nothing_published
from tests.support.asgi_calls import ask, http_scope
from tests.support.running_server import ROOT, running_server


@pytest.fixture(scope="module")
def server(tmp_path_factory):
    with running_server(tmp_path_factory.mktemp("data")) as started:
        yield started


def request(server, path, method="GET", body=None, **headers):
    connection = http.client.HTTPConnection("127.0.0.1", server.port, timeout=10)
    sent = {name.replace("_", "-"): value for name, value in headers.items()}
    connection.request(method, path, body, sent)
    reply = connection.getresponse()
    reply.content = reply.read()
    connection.close()
    return reply


def open_socket(server, **more):
    return connect(f"ws://127.0.0.1:{server.port}/_stcore/stream", compression=None, **more)


def test_health_is_told_as_json(server):
    reply = request(server, "/healthz")
    assert reply.status == 200
    assert json.loads(reply.content)["ok"] is True
    assert reply.headers["content-type"] == "application/json"


def test_the_start_page_and_every_screen_are_the_platforms_page(server):
    for path in ("/", *(f"/{name}" for name in SCREEN_PATHS[1:])):
        reply = request(server, path)
        assert reply.status == 200
        assert b'<div id="root">' in reply.content


def test_answers_are_strict_and_do_not_name_the_server(server):
    headers = request(server, "/").headers
    assert "server" not in headers
    assert headers["x-content-type-options"] == "nosniff"
    assert headers["referrer-policy"] == "no-referrer"
    policy = headers["content-security-policy"]
    assert "script-src 'self' 'sha256-" in policy
    assert "unsafe-eval" not in policy
    assert f"ws://127.0.0.1:{server.port}" in policy


@pytest.mark.parametrize("host", ["evil.example", "evil.example:8501", "127.0.0.1", "localhost:1"])
@pytest.mark.parametrize("path", ["/", "/healthz", "/_stcore/health", "/readout/x"])
def test_a_foreign_host_is_refused(server, host, path):
    assert request(server, path, Host=host).status == 403


def test_a_proxy_is_refused(server):
    assert request(server, "/", X_Forwarded_For="192.0.2.1").status == 403


def test_the_platforms_own_doors_are_closed(server):
    for path in ("/_stcore/metrics", "/_stcore/agent/openapi.json", "/_stcore/agent/interact"):
        assert request(server, path).status == 404
        assert request(server, path, "POST").status == 404


def test_unknown_paths_are_our_own_page(server):
    for path in ("/nothing", "/studies/more", "/static/nothing.js", "/%5Fstcore/metrics"):
        reply = request(server, path)
        assert reply.status == 404
        assert b"There is no such page" in reply.content
    sheet = request(server, PLAIN_STYLE.path)
    assert sheet.status == 200


def test_a_link_nobody_made_and_a_guesser(server):
    first = request(server, f"/readout/{make_token()}")
    assert first.status == 404
    assert first.headers["cache-control"] == "no-store"
    statuses = [request(server, f"/readout/{make_token()}").status for _ in range(12)]
    assert statuses == [404] * 9 + [429] * 3
    assert request(server, "/").status == 200


def test_robots_stay_out_and_the_icon_is_ours(server):
    assert request(server, "/robots.txt").content == b"User-agent: *\nDisallow: /\n"
    icon = (ROOT / "app" / "icon.png").read_bytes()
    for path in ("/favicon.png", "/favicon.ico"):
        assert request(server, path).content == icon


def test_scripts_travel_compressed(server):
    folder = Path(streamlit.__file__).parent / "static"
    script = max((folder / "static" / "js").glob("index.*.js"), key=lambda f: f.stat().st_size)
    path = f"/{script.relative_to(folder).as_posix()}"
    plain = request(server, path)
    packed = request(server, path, Accept_Encoding="gzip")
    assert plain.content == script.read_bytes() == gzip.decompress(packed.content)
    assert len(packed.content) < len(plain.content) / 2
    assert "immutable" in packed.headers["cache-control"]


@pytest.mark.parametrize("origin", [None, "http://evil.example", "null", "http://localhost:9"])
def test_a_foreign_socket_is_refused(server, origin):
    with pytest.raises(InvalidStatus) as refused:
        open_socket(server, origin=origin)
    assert refused.value.response.status_code == 403


def test_the_own_socket_opens_uncompressed(server):
    offer = {"Sec-WebSocket-Extensions": "permessage-deflate"}
    with open_socket(server, origin=server.address, additional_headers=offer) as own:
        assert "sec-websocket-extensions" not in own.response.headers


def test_the_number_of_uploads_of_one_session_is_capped(server):
    token = SimpleCookie(request(server, "/_stcore/health").headers["set-cookie"])
    cookie = token["_streamlit_xsrf"]
    with open_socket(server, origin=server.address, subprotocols=["streamlit"]) as own:
        upload = f"/_stcore/upload_file/{_new_session(own).initialize.session_id}"
        headers = {
            "Cookie": f"_streamlit_xsrf={cookie.coded_value}",
            "X_Xsrftoken": cookie.value,
            "Content_Type": "multipart/form-data; boundary=cut",
            "Origin": server.address,
        }
        body = (
            b'--cut\r\nContent-Disposition: form-data; name="f"; filename="f.csv"\r\n\r\n'
            b"a,b\r\n--cut--\r\n"
        )
        statuses = [
            request(server, f"{upload}/{n}", "PUT", body, **headers).status for n in range(21)
        ]
        assert statuses == [204] * 20 + [413]
        assert request(server, f"{upload}/3", "DELETE", **headers).status == 204
        assert request(server, f"{upload}/20", "PUT", body, **headers).status == 204
        headers["Origin"] = "http://evil.example"
        assert request(server, f"{upload}/20", "DELETE", **headers).status == 403


def _new_session(own):
    back = BackMsg()
    back.rerun_script.query_string = ""
    own.send(back.SerializeToString())
    while True:
        forward = ForwardMsg()
        forward.ParseFromString(own.recv(timeout=10))
        if forward.WhichOneof("type") == "new_session":
            return forward.new_session


def test_the_token_of_a_link_is_written_down_nowhere(server):
    token = make_token()
    request(server, f"/readout/{token}")
    request(server, f"/readout/{token}?x={token}", Host="evil.example")
    said = server.output()
    assert said.startswith(f"Halfwidth is open at {server.address}\n")
    assert token not in said
    assert "readout" not in said


def test_it_ends_at_once_when_told_to_though_a_page_is_open(tmp_path):
    with running_server(tmp_path) as started:
        with open_socket(started, origin=started.address) as own:
            _new_session(own)
            assert started.stop() < 3
        assert started.process.returncode in (0, -signal.SIGTERM)
        assert "ASGI" not in started.output()
        port = started.port
    with running_server(tmp_path, port=port) as again:
        assert again.address == started.address


def test_the_configuration_is_found_from_any_folder(tmp_path):
    with (
        running_server(tmp_path / "data", folder=tmp_path) as started,
        open_socket(started, origin=started.address) as own,
    ):
        told = _new_session(own)
        assert told.config.toolbar_mode == told.config.ToolbarMode.MINIMAL
        assert told.config.gather_usage_stats is False


def test_with_a_public_address_it_says_why_it_refuses(tmp_path):
    named = {"HALFWIDTH_PUBLIC_ADDRESS": "https://survey.example.org"}
    with running_server(tmp_path, environment=named) as started:
        assert request(started, "/").status == 403
        assert request(started, "/", Host="survey.example.org").status == 403
        assert "this version has no sign-in" in started.output()


def start(*options, folder=ROOT, **environment):
    command = [sys.executable, "-m", "app", *options]
    more = {"PYTHONPATH": str(ROOT), **environment}
    return subprocess.run(command, cwd=folder, env=more, capture_output=True, text=True, timeout=30)


def test_another_host_is_refused_with_the_reason_and_code_2():
    ended = start("--host", "0.0.0.0")
    assert (ended.returncode, ended.stdout) == (2, "")
    assert re.fullmatch(
        r"Halfwidth does not open at 0\.0\.0\.0, only on this computer .* because sign-in and TLS "
        r"are not part of this version\.\n",
        ended.stderr,
    )


def test_each_other_reason_not_to_start_is_one_sentence_and_code_2(tmp_path, capsys):
    (tmp_path / "file").write_text("")
    with socket.create_server(("127.0.0.1", 0)) as taken:
        port = str(taken.getsockname()[1])
        for options in (
            ["--port", "http"],
            ["--bogus"],
            ["--data", str(tmp_path / "file" / "data")],
            ["--data", str(tmp_path), "--port", port],
        ):
            assert main(options, {}) == 2
            said = capsys.readouterr()
            assert said.out == ""
            assert re.fullmatch(r"Halfwidth cannot [^\n]+\.\n", said.err)


def test_a_fault_of_ours_is_told_without_its_details(tmp_path):
    def broken(_token_hash):
        raise RuntimeError("secret detail")

    routes = own_routes(broken)
    app = Starlette(
        routes=routes,
        middleware=middleware(Settings("127.0.0.1", 8501, tmp_path), routes),
        exception_handlers=EXCEPTION_HANDLERS,
    )
    told = []

    async def remembered(scope, receive, send):
        with pytest.raises(RuntimeError, match="secret detail"):  # for the terminal
            await app(scope, receive, send)
        told.append(scope["path"])

    reply = ask(remembered, http_scope(f"/readout/{make_token()}"))
    assert told
    assert reply.status == 500
    assert "secret" not in reply.text
    assert "could not be shown" in reply.text
    assert reply.header("cache-control") == "no-store"
    assert reply.header("x-content-type-options") == "nosniff"
    assert "default-src 'none'" in reply.header("content-security-policy")


def test_own_routes_keep_off_the_platforms_paths():
    paths = [route.path for route in own_routes(nothing_published)]
    assert {"/healthz", "/readout/{token}", "/robots.txt"} <= set(paths)
    assert not [path for path in paths if path.startswith(("/_stcore", "/static", "/media"))]


def test_the_name_of_the_first_screen_leads_to_the_root():
    routes = {route.path: route for route in own_routes(nothing_published)}
    reply = ask(Starlette(routes=[routes["/studies"]]), http_scope("/studies"))
    assert (reply.status, reply.header("location")) == (307, "/")
