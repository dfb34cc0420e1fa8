from __future__ import annotations

import re

import pytest

from app.gate.gate import Gate
from app.gate.request_checks import GateRules
from tests.support.asgi_calls import HOST, ask, http_scope, socket_scope

ADDRESS = f"http://{HOST}"
RULES = GateRules(
    address=ADDRESS,
    host_values=frozenset({HOST, "localhost:8501", "[::1]:8501"}),
    paths=frozenset({"/healthz", "/studies", "/static/js/a.js"}),
    path_patterns=(re.compile(r"/readout/[^/]+"),),
    not_found_page="<h1>There is no such page</h1>",
)
UPLOAD = "/_stcore/upload_file/session-1/file-1"
REFUSED = 1008


class Behind:
    """Stands behind the gate and remembers what reached it."""

    def __init__(self, headers=()):
        self.seen = []
        self.headers = list(headers)

    async def __call__(self, scope, _receive, send):
        self.seen.append(scope)
        if scope["type"] == "websocket":
            await send({"type": "websocket.accept"})
            return
        await send({"type": "http.response.start", "status": 200, "headers": self.headers})
        await send({"type": "http.response.body", "body": b"behind"})


def put(path="/", method="GET", headers=None, rules=RULES, behind=None, **more):
    behind = behind or Behind()
    reply = ask(Gate(behind, rules, ("'sha256-x'",)), http_scope(path, method, headers, **more))
    assert bool(behind.seen) == (reply.text == "behind")
    return reply


def knock(headers, path="/_stcore/stream", rules=RULES, **more):
    behind = Behind()
    reply = ask(Gate(behind, rules), socket_scope(path, headers, **more))
    assert bool(behind.seen) == (reply.status == 101)
    return reply


@pytest.mark.parametrize("host", [HOST, "localhost:8501", "LOCALHOST:8501", "[::1]:8501"])
def test_own_hosts_pass(host):
    assert put(headers=[("host", host)]).status == 200


@pytest.mark.parametrize(
    "hosts",
    [
        [],
        ["evil.example:8501"],
        ["127.0.0.1"],
        ["127.0.0.1:8502"],
        ["127.0.0.1:8501.evil.example"],
        ["evil@127.0.0.1:8501"],
        ["localhost.:8501"],
        [""],
        [HOST, HOST],
        [HOST, "evil.example"],
    ],
)
def test_any_other_host_is_refused(hosts):
    reply = put("/healthz", headers=[("host", host) for host in hosts])
    assert reply.status == 403
    assert ADDRESS in reply.text


@pytest.mark.parametrize(
    "origin",
    ["http://evil.example", "null", "", f"https://{HOST}", "http://127.0.0.1", "http://127.0.0.1:9",
     "http://localhost:8501", f"{ADDRESS}/", f"{ADDRESS}.evil.example"],
)  # fmt: skip
@pytest.mark.parametrize(("path", "method"), [("/", "GET"), (UPLOAD, "PUT"), ("/healthz", "HEAD")])
def test_a_foreign_origin_is_refused(origin, path, method):
    assert put(path, method, [("host", HOST), ("origin", origin)]).status == 403


def test_the_own_origin_passes_and_is_not_judged_again():
    behind = Behind()
    reply = put(UPLOAD, "PUT", [("host", HOST), ("origin", ADDRESS)], behind=behind)
    assert reply.status == 200
    assert b"origin" not in dict(behind.seen[0]["headers"])


@pytest.mark.parametrize("site", ["cross-site", "same-site"])
@pytest.mark.parametrize("mode", ["navigate", "cors", "no-cors"])
@pytest.mark.parametrize("method", ["PUT", "DELETE"])
def test_another_site_changes_nothing(site, mode, method):
    headers = [("host", HOST), ("sec-fetch-site", site), ("sec-fetch-mode", mode)]
    assert put(UPLOAD, method, headers).status == 403


def test_a_link_from_another_site_opens_but_its_page_cannot_load_parts():
    foreign = [("host", HOST), ("sec-fetch-site", "cross-site")]
    assert put("/studies", headers=[*foreign, ("sec-fetch-mode", "navigate")]).status == 200
    for mode in ("no-cors", "cors"):
        assert put("/media/a", headers=[*foreign, ("sec-fetch-mode", mode)]).status == 403


@pytest.mark.parametrize("site", ["same-origin", "none"])
def test_own_pages_and_typed_addresses_pass(site):
    assert put(UPLOAD, "PUT", [("host", HOST), ("sec-fetch-site", site)]).status == 200


@pytest.mark.parametrize(
    "name",
    ["x-forwarded-for", "x-forwarded-host", "x-forwarded-proto", "x-forwarded-anything",
     "forwarded", "x-real-ip"],
)  # fmt: skip
def test_a_proxy_in_front_is_refused_because_there_is_no_sign_in(name):
    reply = put("/readout/token", headers=[("host", HOST), (name, "1.2.3.4")])
    assert reply.status == 403
    assert "no sign-in" in reply.text
    with_origin = [("host", HOST), ("origin", ADDRESS), (name, "1.2.3.4")]
    assert knock(with_origin).close_code == REFUSED


def test_a_public_address_closes_everything():
    rules = GateRules(ADDRESS, RULES.host_values, RULES.paths, has_public_address=True)
    for path in ("/", "/healthz", "/studies", "/nothing"):
        assert put(path, rules=rules).status == 403
    assert knock([("host", HOST), ("origin", ADDRESS)], rules=rules).close_code == REFUSED


@pytest.mark.parametrize(
    "path",
    ["/", "/healthz", "/studies", "/readout/token", "/static/js/a.js", "/media/abc.csv",
     "/_stcore/health", "/_stcore/host-config"],
)  # fmt: skip
def test_known_paths_are_read_and_nothing_else(path):
    assert put(path).status == 200
    assert put(path, "HEAD").status == 200
    for method in ("POST", "PUT", "DELETE", "PATCH", "OPTIONS", "TRACE"):
        reply = put(path, method)
        assert (reply.status, reply.header("allow")) == (405, "GET, HEAD")


@pytest.mark.parametrize(
    "path",
    ["/nothing", "/Studies", "//studies", "/studies/x", "/readout", "/readout/", "/readout/a/b",
     "/_stcore/metrics", "/_stcore/metrics/", "/_stcore/agent/interact", "/_stcore/agent/mcp",
     "/_stcore/script-health-check", "/_stcore/stream", "/_stcore/bidi-components/x/y.js",
     "/component/x/index.html", "/auth/login", "/oauth2callback", "/static/js/none.js",
     "/static/../main.py", "/app/static/x", "/manifest.json", "/studies/_stcore/health", ""],
)  # fmt: skip
def test_any_other_path_is_our_own_not_found(path):
    for method in ("GET", "POST"):
        reply = put(path, method)
        assert (reply.status, reply.text) == (404, RULES.not_found_page)
        assert reply.header("content-type") == "text/html; charset=utf-8"


def test_uploads_are_written_and_deleted_but_not_read():
    assert put(UPLOAD, "PUT").status == 200
    assert put(UPLOAD, "DELETE").status == 200
    assert put(UPLOAD, "GET").header("allow") == "PUT, DELETE"
    assert put("/_stcore/upload_file/a/b/c", "PUT").status == 404
    assert put("/_stcore/upload_file/../x", "PUT").status == 404


@pytest.mark.parametrize("name", ["content-length", "transfer-encoding"])
def test_a_body_where_none_belongs_is_refused(name):
    value = "5000" if name == "content-length" else "chunked"
    for path, method in (("/", "GET"), ("/readout/token", "GET"), (UPLOAD, "DELETE")):
        assert put(path, method, [("host", HOST), (name, value)]).status == 413
    assert put("/", headers=[("host", HOST), ("content-length", "0")]).status == 200


def test_a_socket_with_the_own_origin_gets_in_and_keeps_it():
    behind = Behind()
    headers = [("host", HOST), ("origin", ADDRESS)]
    assert ask(Gate(behind, RULES), socket_scope(headers=headers)).status == 101
    assert (b"origin", ADDRESS.encode()) in behind.seen[0]["headers"]


@pytest.mark.parametrize(
    "headers",
    [
        [("host", HOST)],
        [("host", HOST), ("origin", "http://evil.example")],
        [("host", HOST), ("origin", "null")],
        [("host", HOST), ("origin", ADDRESS), ("origin", ADDRESS)],
        [("host", HOST), ("origin", ADDRESS), ("sec-fetch-site", "same-site")],
        [("host", HOST), ("origin", ADDRESS), ("sec-fetch-site", "cross-site"),
         ("sec-fetch-mode", "navigate")],
        [("host", "evil.example:8501"), ("origin", "http://evil.example:8501")],
        [("origin", ADDRESS)],
    ],
)  # fmt: skip
def test_any_other_socket_is_refused(headers):
    assert knock(headers).close_code == REFUSED


def test_there_is_one_socket():
    assert knock([("host", HOST), ("origin", ADDRESS)], "/other").close_code == REFUSED


def test_the_start_and_stop_of_the_process_pass():
    behind = Behind()

    async def lifespan_only(scope, _receive, _send):
        behind.seen.append(scope)

    ask(Gate(lifespan_only, RULES), {"type": "lifespan"})
    assert behind.seen == [{"type": "lifespan"}]


@pytest.mark.parametrize(
    ("path", "host"), [("/", HOST), ("/nothing", HOST), ("/", "evil.example"), ("/readout/a", HOST)]
)
def test_strict_headers_are_on_every_answer(path, host):
    reply = put(path, headers=[("host", host)])
    assert reply.header("x-content-type-options") == "nosniff"
    assert reply.header("referrer-policy") == "no-referrer"
    assert reply.header("x-frame-options") == "DENY"
    assert reply.header("cross-origin-opener-policy") == "same-origin"
    assert reply.header("cross-origin-resource-policy") == "same-origin"
    assert "camera=()" in reply.header("permissions-policy")
    assert "frame-ancestors 'none'" in reply.header("content-security-policy")


def test_a_screen_may_run_its_own_scripts_and_talk_to_its_own_socket_only():
    policy = put("/", headers=[("host", "localhost:8501")]).header("content-security-policy")
    parts = dict(part.strip().split(" ", 1) for part in policy.split(";"))
    assert parts["script-src"] == "'self' 'sha256-x'"
    assert parts["connect-src"] == "'self' ws://localhost:8501"
    assert parts["default-src"] == "'self'"
    assert parts["object-src"] == "'none'"


def test_a_stricter_policy_of_the_page_stays_and_other_origins_may_not_read():
    behind = Behind(
        [
            (b"content-security-policy", b"default-src 'none'"),
            (b"Access-Control-Allow-Origin", b"*"),
            (b"X-Frame-Options", b"SAMEORIGIN"),
            (b"content-type", b"text/html"),
        ]
    )
    reply = put("/readout/token", behind=behind)
    assert reply.header("content-security-policy") == "default-src 'none'"
    assert reply.header("access-control-allow-origin") is None
    assert reply.header("x-frame-options") == "DENY"
    assert reply.header("content-type") == "text/html"


@pytest.mark.parametrize(
    ("length", "status"), [("2", 200), ("1024", 200), ("1025", 413), ("-1", 413)]
)
def test_taking_back_an_upload_may_send_a_few_bytes_along(length, status):
    headers = [("host", HOST), ("content-length", length)]
    assert put(UPLOAD, "DELETE", headers).status == status
    assert put("/healthz", "GET", headers).status == 413
