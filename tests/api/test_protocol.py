"""Methods, media types, sizes and headers of every answer."""

import asyncio
import itertools
import json

import pytest
from starlette.testclient import TestClient

from forebay.api.body_limit import DRAIN_LIMITS, BodyLimit
from forebay.api.problems import Problem
from forebay.api.routers.registry import OPERATIONS
from forebay.app import create_app
from forebay.settings import Settings
from support.http import SAMPLE, a_sample, assert_problem

PATHS = [operation.path for operation in OPERATIONS.values()]


def test_unknown_address(client):
    assert_problem(client.get("/v2/field"), 404, "not-found")
    assert_problem(client.post("/v1/field/sample/"), 404, "not-found")


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize("method", ["GET", "PUT", "DELETE", "PATCH"])
def test_wrong_method_on_a_compute_route(client, path, method):
    response = client.request(method, path)
    assert_problem(response, 405, "method-not-allowed")
    assert response.headers["allow"] == "OPTIONS, POST"


@pytest.mark.parametrize(
    ("path", "allowed"),
    [(SAMPLE, "OPTIONS, POST"), ("/v1/water", "GET, HEAD, OPTIONS"), ("/", "GET, HEAD, OPTIONS")],
)
def test_options_lists_the_methods(client, path, allowed):
    response = client.options(path)
    assert response.status_code == 204
    assert response.content == b""
    assert response.headers["allow"] == allowed


def test_options_of_an_unknown_address(client):
    assert_problem(client.options("/v2/field"), 404, "not-found")


def test_wrong_method_on_a_catalogue(client):
    response = client.post("/v1/limits", json={})
    assert_problem(response, 405, "method-not-allowed")
    assert response.headers["allow"] == "GET, HEAD, OPTIONS"


@pytest.mark.parametrize("path", ["/livez", "/v1/limits", "/v1/criteria", "/docs", "/openapi.json"])
def test_head_is_get_without_a_body(client, path):
    full, head = client.get(path), client.head(path)
    assert head.status_code == full.status_code == 200
    assert head.content == b""
    assert head.headers["content-length"] == full.headers["content-length"]


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize(
    "accept", ["application/xml", "application/xml;q=0.9, image/webp", "*/*;q=0", "nonsense"]
)
def test_unknown_media_type_is_refused_with_the_list(client, path, accept):
    problem = assert_problem(client.post(path, json={}, headers={"Accept": accept}), 406, "not-acceptable")
    assert problem["offered"]


@pytest.mark.parametrize(
    "accept", ["*/*", "application/*", "application/json", "text/html, */*;q=0.1", "", None]
)
def test_json_is_the_default(client, accept):
    response = client.post(SAMPLE, json=a_sample(), headers={"Accept": accept} if accept is not None else {})
    assert response.status_code == 200
    assert response.headers["content-type"] == "application/json"


def test_quality_decides(client):
    response = client.post(
        SAMPLE, json=a_sample(), headers={"Accept": "application/json;q=0.5, text/csv;q=0.9"}
    )
    assert response.headers["content-type"].startswith("text/csv")


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize(
    "content_type",
    [
        "text/plain",
        "application/x-www-form-urlencoded",
        "application/json; charset=utf-16",
        "multipart/form-data",
    ],
)
def test_body_of_another_type_is_refused(client, path, content_type):
    response = client.post(path, content=b"{}", headers={"Content-Type": content_type})
    assert_problem(response, 415, "unsupported-media-type")


@pytest.mark.parametrize(
    "content_type", ["application/json", "application/json; charset=UTF-8", "Application/JSON"]
)
def test_json_may_name_its_charset(client, content_type):
    body = b'{"layout": {"depth": 4}, "at": {"points": [[0, 0]]}}'
    assert client.post(SAMPLE, content=body, headers={"Content-Type": content_type}).status_code == 200


def test_compressed_body_is_refused(client):
    response = client.post(SAMPLE, content=b"\x1f\x8b", headers={"Content-Encoding": "gzip"})
    assert_problem(response, 415, "unsupported-media-type")
    assert response.headers["accept-encoding"] == "identity"


@pytest.mark.parametrize("path", PATHS)
def test_oversize_body_is_refused_by_its_length(client, app, path):
    limit = app.state.limits.max_body
    response = client.post(path, content=b" " * (limit + 1))
    assert assert_problem(response, 413, "body-too-large")["limit"] == limit


def test_oversize_body_is_refused_while_it_arrives(client, app):
    chunk, sent = b" " * 2**20, []

    def endless():
        for _ in range(4 * app.state.limits.max_body // len(chunk)):
            sent.append(len(chunk))
            yield chunk

    assert_problem(client.post(SAMPLE, content=endless()), 413, "body-too-large")


LIMIT = 1024


def refused(chunks, *, declared):
    """Messages sent back, and how much was taken of a body in chunks on its way to a limit of 1 KiB."""
    taken, sent = [], []

    async def receive():
        taken.append(next(chunks, b""))
        return {"type": "http.request", "body": taken[-1], "more_body": bool(taken[-1])}

    async def send(message):
        sent.append((message, sum(map(len, taken))))

    async def reads_all(scope, receive, send):
        while (await receive())["more_body"]:
            pass

    headers = [(b"content-length", str(declared).encode())] if declared else []
    asyncio.run(BodyLimit(reads_all, LIMIT)({"type": "http", "headers": headers}, receive, send))
    return sent, sum(map(len, taken))


@pytest.mark.parametrize("declared", [3 * LIMIT, None])
def test_rest_of_a_refused_body_is_taken_in_after_the_answer(declared):
    # a client that sends everything before it reads would otherwise meet a closed connection
    sent, taken = refused(iter([b" " * 512] * 6), declared=declared)
    (start, _), (content, before), (end, _) = sent
    assert start["status"] == 413
    assert json.loads(content["body"])["type"] == "/problems/body-too-large"
    assert before <= LIMIT + 512
    assert taken == 3 * LIMIT
    assert end == {"type": "http.response.body", "body": b""}


def test_endless_body_is_not_taken_in_for_ever():
    _, taken = refused(itertools.repeat(b" " * 512), declared=None)
    assert taken <= DRAIN_LIMITS * LIMIT + 512


async def never_asked(scope, receive, send):
    raise AssertionError("a refused body reached the application")


def test_silent_client_is_not_waited_for_for_ever(monkeypatch):
    monkeypatch.setattr("forebay.api.body_limit.DRAIN_SECONDS", 0.01)
    sent = []

    async def send(message):
        sent.append(message)

    async def silent():
        await asyncio.Event().wait()

    scope = {"type": "http", "headers": [(b"content-length", b"2000")]}
    asyncio.run(BodyLimit(never_asked, LIMIT)(scope, silent, send))
    assert sent[-1] == {"type": "http.response.body", "body": b""}


def test_body_that_stops_coming_is_not_waited_for_for_ever(monkeypatch):
    monkeypatch.setattr("forebay.api.body_limit.STALL_SECONDS", 0.01)
    scope = {"type": "http", "headers": []}

    async def silent():
        await asyncio.Event().wait()

    async def reads(scope, receive, send):
        await receive()

    with pytest.raises(Problem) as raised:
        asyncio.run(BodyLimit(reads, LIMIT)(scope, silent, never_sent))
    assert (raised.value.status, raised.value.code) == (408, "body-timeout")


async def never_sent(message):
    raise AssertionError("nothing is sent by the limit itself")


def test_client_that_waits_for_its_answer_is_not_taken_for_a_stalled_body(monkeypatch):
    monkeypatch.setattr("forebay.api.body_limit.STALL_SECONDS", 0.01)
    messages = [{"type": "http.request", "body": b"{}", "more_body": False}]

    async def receive():
        if messages:
            return messages.pop()
        await asyncio.sleep(0.1)
        return {"type": "http.disconnect"}

    async def reads_and_waits(scope, receive, send):
        await receive()
        assert (await receive())["type"] == "http.disconnect"

    asyncio.run(BodyLimit(reads_and_waits, LIMIT)({"type": "http", "headers": []}, receive, never_sent))


def test_index_links_below_any_prefix(client):
    answer = client.get("/", headers={"Accept": "application/json"}).json()
    assert answer["service"] == "forebay"
    for link in answer["links"].values():
        assert "://" not in link
        assert not link.startswith("/")
        assert client.get("/" + link).status_code in {200, 503}  # 503: not ready yet


def test_reader_is_led_from_the_index_to_the_documentation(client):
    page = "text/html,application/xhtml+xml;q=0.9,*/*;q=0.8"
    response = client.get("/", headers={"Accept": page}, follow_redirects=False)
    assert response.status_code == 307
    assert response.headers["location"] == "docs"


def test_index_without_the_documentation_page():
    plain = TestClient(create_app(Settings(workers=1, docs=False)))
    response = plain.get("/", headers={"Accept": "text/html, */*;q=0.8"})
    assert "documentation" not in response.json()["links"]


def test_standing_headers(client):
    headers = client.post(SAMPLE, json=a_sample()).headers
    assert headers["cache-control"] == "private, no-cache"
    assert client.get("/livez").headers["cache-control"] == "no-store"
    assert headers["x-content-type-options"] == "nosniff"
    assert headers["content-security-policy"].startswith("default-src 'none'")
    assert "Accept" in headers["vary"]
    assert headers["server-timing"].startswith("parse;dur=")


def test_request_id_is_taken_over(client):
    assert client.get("/livez", headers={"X-Request-ID": "abc-1"}).headers["x-request-id"] == "abc-1"


@pytest.mark.parametrize("asked", ["with space", "x" * 200, "a;b", '{"a":1}'])
def test_unsafe_request_id_is_replaced(client, asked):
    given = client.get("/livez", headers={"X-Request-ID": asked}).headers["x-request-id"]
    assert given != asked
    assert len(given) == 36


def test_preflight(client):
    headers = {
        "Access-Control-Request-Method": "POST",
        "Access-Control-Request-Headers": "content-type, traceparent",
    }
    response = client.options(SAMPLE, headers=headers)
    assert response.status_code == 204
    assert response.headers["access-control-allow-origin"] == "*"
    assert response.headers["access-control-allow-headers"] == "content-type, traceparent"
    assert "POST" in response.headers["access-control-allow-methods"]


def test_page_of_another_origin_can_read_the_headers_it_needs(client):
    exposed = client.get("/livez").headers["access-control-expose-headers"]
    assert {"Retry-After", "X-Request-ID", "Server-Timing"} <= set(exposed.split(", "))


@pytest.mark.parametrize("operation", OPERATIONS.values(), ids=OPERATIONS)
def test_every_example_is_answered(answer_to_example, operation):
    response = answer_to_example(operation.operation_id, "si")
    assert response.status_code == 200, response.text[:2000]
    assert response.headers["content-type"] == operation.media_types[0]
