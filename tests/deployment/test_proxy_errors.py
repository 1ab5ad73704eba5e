"""The proxy's real configuration in the real proxy: where it leads, what it refuses, whom it asks again."""

import http.client
import json
import re
import socket
import time

import pytest

from forebay.api.problems import MEDIA_TYPE, catalogue
from forebay.demo.child import LOOPBACK, free_port
from forebay.settings import Settings
from support.proxy import CONFIGURATION, PREFIX, Proxy, program
from support.replica_stub import ANSWER, BUSY, CUT, HANG, Stub

needs_proxy = pytest.mark.skipif(program() is None, reason="no nginx on this machine")

QUICK = {
    "client_max_body_size 64m": "client_max_body_size 64k",
    "proxy_read_timeout 45s": "proxy_read_timeout 1s",
    "proxy_next_upstream_timeout 40s": "proxy_next_upstream_timeout 900ms",
    "client_header_timeout 10s": "client_header_timeout 1s",
    "limit_conn clients 200": "limit_conn clients 8",
}
"""Limits made small, so that a test reaches them in a moment."""

LIMIT = 64 * 1024
SAMPLE = f"{PREFIX}/v1/field/sample"


@pytest.fixture
def stubs():
    with Stub("one") as one, Stub("two") as two:
        yield one, two


@pytest.fixture
def proxy(stubs, tmp_path):
    with Proxy(tmp_path, [stub.address for stub in stubs], QUICK) as running:
        yield running


def ask(proxy, method, path, body=None, headers=None):
    """Status, headers and JSON of one answer."""
    connection = http.client.HTTPConnection(LOOPBACK, proxy.port, timeout=20.0)
    connection.request(method, path, body, headers or {})
    answer = connection.getresponse()
    content = answer.read()
    connection.close()
    return answer.status, answer.headers, json.loads(content) if content.startswith(b"{") else content


def assert_problem(answer, status, code):
    """The proxy's own answer is one that the service could have given."""
    found, headers, problem = answer
    assert (found, problem["status"], problem["type"]) == (status, status, f"/problems/{code}")
    assert catalogue()[code].status == status
    assert problem["title"] == catalogue()[code].title
    assert headers["Content-Type"] == MEDIA_TYPE
    assert headers["Access-Control-Allow-Origin"] == "*"
    assert headers["Cache-Control"] == "no-store"
    assert problem["instance"] == f"urn:forebay:request:{headers['X-Request-ID']}"


def test_limit_of_the_proxy_is_the_one_of_the_service():
    text = CONFIGURATION.read_text(encoding="utf-8")
    (mebibytes,) = re.findall(r"client_max_body_size (\d+)m;", text)
    (told,) = re.findall(r'"limit":(\d+)', text)
    assert int(mebibytes) * 2**20 == int(told) == Settings.model_fields["max_body"].default


def test_proxy_waits_longer_than_the_service_computes():
    (seconds,) = re.findall(r"proxy_read_timeout (\d+)s;", CONFIGURATION.read_text(encoding="utf-8"))
    assert int(seconds) >= Settings.model_fields["deadline"].default + 10.0


@needs_proxy
def test_prefix_is_taken_off(proxy, stubs):
    for method, path in (("GET", "/livez"), ("POST", "/v1/field/sample?x=1")):
        assert ask(proxy, method, PREFIX + path)[0] == 200
    assert {path for stub in stubs for path, _ in stub.asked} == {"/livez", "/v1/field/sample?x=1"}


@needs_proxy
def test_nothing_is_served_beside_the_prefix(proxy, stubs):
    assert_problem(ask(proxy, "GET", "/v1/limits"), 404, "not-found")
    assert stubs[0].asked == stubs[1].asked == []


@needs_proxy
def test_root_and_problem_types_lead_below_the_prefix(proxy):
    status, headers, _ = ask(proxy, "GET", "/")
    assert (status, headers["Location"]) == (307, f"{PREFIX}/")
    status, headers, _ = ask(proxy, "GET", "/problems/busy")
    assert (status, headers["Location"]) == (308, f"{PREFIX}/problems/busy")


@needs_proxy
def test_counters_are_not_published(proxy, stubs):
    assert_problem(ask(proxy, "GET", f"{PREFIX}/metrics"), 404, "not-found")
    assert stubs[0].asked == stubs[1].asked == []


@needs_proxy
@pytest.mark.parametrize("declared", [True, False], ids=["declared", "chunked"])
def test_body_over_the_limit(proxy, stubs, declared):
    body = b" " * (LIMIT + 1)
    sent = body if declared else iter([body[:LIMIT], body[LIMIT:]])
    assert_problem(ask(proxy, "POST", SAMPLE, sent), 413, "body-too-large")
    assert stubs[0].asked == stubs[1].asked == []


@needs_proxy
def test_body_at_the_limit_passes(proxy):
    assert ask(proxy, "POST", SAMPLE, b" " * LIMIT)[2]["bytes"] == LIMIT


@needs_proxy
def test_address_and_headers_too_long(proxy):
    assert_problem(ask(proxy, "GET", f"{PREFIX}/livez?" + "x" * 9000), 414, "address-too-long")
    answer = ask(proxy, "GET", f"{PREFIX}/livez", headers={"X-Long": "x" * 9000})
    assert_problem(answer, 431, "headers-too-large")


def raw(proxy, text, wait=10.0):
    """What comes back for bytes that need not be HTTP."""
    with socket.create_connection((LOOPBACK, proxy.port), timeout=wait) as plug:
        plug.sendall(text)
        parts = []
        while part := plug.recv(65536):
            parts.append(part)
    return b"".join(parts)


@needs_proxy
@pytest.mark.parametrize("text", [b"\x16\x03\x01\r\n\r\n", b"GET /forebay/livez HTTP/1.1\r\n\r\n"])
def test_malformed_request(proxy, text):
    head, body = raw(proxy, text).split(b"\r\n\r\n", 1)
    assert head.startswith(b"HTTP/1.1 400 ")
    assert MEDIA_TYPE.encode() in head
    assert json.loads(body)["title"] == catalogue()["malformed-request"].title


@needs_proxy
def test_slow_headers_are_not_waited_for(proxy):
    started = time.monotonic()
    raw(proxy, b"GET /forebay/livez HTTP/1.1\r\nHost: x\r\nX-Slow:")
    assert time.monotonic() - started < 8.0  # a second, and a machine that does other things beside


@needs_proxy
def test_connections_of_one_client_are_counted(proxy, stubs):
    for stub in stubs:
        stub.manner = HANG
    plugs = [socket.create_connection((LOOPBACK, proxy.port)) for _ in range(8)]
    for plug in plugs:
        plug.sendall(b"GET /forebay/livez HTTP/1.1\r\nHost: x\r\n\r\n")
    time.sleep(0.3)
    answer = ask(proxy, "GET", f"{PREFIX}/livez")
    assert_problem(answer, 503, "busy")
    assert answer[1]["Retry-After"] == "1"
    for plug in plugs:
        plug.close()


@needs_proxy
def test_no_replica(tmp_path):
    with Proxy(tmp_path, [f"{LOOPBACK}:{free_port(0)}" for _ in range(2)]) as proxy:
        answer = ask(proxy, "POST", SAMPLE, b"{}")
    assert_problem(answer, 502, "unreachable")
    assert answer[1]["Retry-After"] == "1"


@needs_proxy
@pytest.mark.parametrize("manner", [CUT, BUSY])
def test_another_replica_is_asked_instead(proxy, stubs, manner):
    stubs[0].manner = manner
    for _ in range(6):
        status, _, answer = ask(proxy, "POST", SAMPLE, b"{}")
        assert (status, answer["replica"]) == (200, "two")
    assert stubs[0].asked  # so that the other one was needed


@needs_proxy
def test_replica_that_comes_back_is_asked_at_once(proxy, stubs):
    stubs[0].manner = CUT
    for _ in range(6):
        ask(proxy, "POST", SAMPLE, b"{}")
    stubs[0].manner = ANSWER
    assert {ask(proxy, "POST", SAMPLE, b"{}")[2]["replica"] for _ in range(6)} == {"one", "two"}


@needs_proxy
def test_answer_of_busy_replicas_passes_as_it_is(proxy, stubs):
    for stub in stubs:
        stub.manner = BUSY
    status, headers, answer = ask(proxy, "POST", SAMPLE, b"{}")
    assert (status, headers["Content-Type"], answer["bytes"]) == (503, "application/json", 2)


@needs_proxy
def test_hanging_replicas_are_not_waited_for_twice(proxy, stubs):
    for stub in stubs:
        stub.manner = HANG
    started = time.monotonic()
    assert_problem(ask(proxy, "POST", SAMPLE, b"{}"), 504, "deadline-exceeded")
    assert time.monotonic() - started < 4.0  # one time-out of a second; the replicas hang for five
    assert len(stubs[0].asked) + len(stubs[1].asked) == 1


@needs_proxy
@pytest.mark.parametrize(("given", "is_kept"), [("job-17.a", True), ("a b", False), ("x" * 81, False)])
def test_request_id(proxy, stubs, given, is_kept):
    ask(proxy, "GET", f"{PREFIX}/livez", headers={"X-Request-ID": given})
    ((_, headers),) = stubs[0].asked + stubs[1].asked
    passed = headers["x-request-id"]
    assert passed == given if is_kept else re.fullmatch("[0-9a-f]{32}", passed)


@needs_proxy
def test_log_is_one_json_line_a_request(proxy, stubs):
    ask(proxy, "POST", SAMPLE, b"secret of the body")
    deadline = time.monotonic() + 5.0
    log = proxy.folder / "access.log"
    while not log.read_text(encoding="utf-8") and time.monotonic() < deadline:
        time.sleep(0.02)
    (line,) = log.read_text(encoding="utf-8").splitlines()
    assert "secret" not in line
    entry = json.loads(line)
    assert (entry["path"], entry["status"]) == (SAMPLE, 200)
    assert entry["replica"] in {stub.address for stub in stubs}
