"""Clients that are slow, silent, or send what cannot be read."""

import time
from contextlib import ExitStack

import orjson
import pytest

from support.heavy import LARGE
from support.http import SAMPLE, a_layout, a_sample, assert_problem
from support.running import eventually

PROMPT = 5.0
"""Longest time for an answer that takes milliseconds [s]: a crowded machine gives a process its turn late."""

HEAD = f"POST {SAMPLE} HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\nContent-Length: {{}}\r\n\r\n"


def is_prompt(service):
    started = time.monotonic()
    alive = service.get("/livez").status_code == 200
    computing = service.post(SAMPLE, a_sample()).status_code == 200
    return alive and computing and time.monotonic() - started < PROMPT


def test_body_byte_by_byte_is_answered_and_holds_nobody_up(service):
    content = orjson.dumps(a_sample())
    with service.connect() as connection:
        connection.sendall(HEAD.format(len(content)).encode())
        for byte in content:
            connection.sendall(bytes((byte,)))
        assert is_prompt(service)
        assert connection.recv(12) == b"HTTP/1.1 200"


def test_many_half_open_connections_hold_nobody_up(service):
    with ExitStack() as open_ones:
        for number in range(100):
            connection = open_ones.enter_context(service.connect())
            connection.sendall(b"POST /v1/fie" if number % 2 else HEAD.format(1000).encode())
        assert is_prompt(service)
    eventually(lambda: service.metric("forebay_requests_running") == 1, 5.0)


def test_reader_that_reads_nothing_holds_nobody_up(service):
    content = orjson.dumps(LARGE)
    with service.connect() as connection:
        connection.sendall(HEAD.format(len(content)).encode() + content)
        eventually(lambda: service.metric("forebay_computations_waiting_or_running") == 1, 10.0)
        eventually(lambda: service.metric("forebay_computations_waiting_or_running") == 0, 60.0)
        assert is_prompt(service)
    eventually(lambda: service.metric("forebay_requests_running") == 1, 5.0)


@pytest.mark.parametrize("has_length", [True, False])
def test_body_over_the_limit_is_refused(service, has_length):
    chunk = b" " * 2**20
    content = chunk * 21 if has_length else (chunk for _ in range(21))
    import httpx2

    headers = {"Content-Type": "application/json", "Origin": "x"}
    response = httpx2.post(service.address + SAMPLE, content=content, headers=headers, timeout=60.0)
    assert assert_problem(response, 413, "body-too-large")["limit"] == 20_000_000
    assert is_prompt(service)


@pytest.mark.parametrize("opening", [b"[", b'{"a":', b'{"layout":{"elements":['])
def test_deep_json_is_refused_at_once(service, opening):
    started = time.monotonic()
    response = service.post(SAMPLE, opening * 100_000)
    assert response.status_code in {400, 422}
    assert_problem(response, response.status_code, response.json()["type"].rsplit("/", 1)[1])
    assert time.monotonic() - started < PROMPT
    assert is_prompt(service)


def test_ten_megabytes_of_invalid_points_get_a_short_answer(service):
    body = orjson.dumps(a_sample(at={"points": [["no", None]] * 900_000}))
    assert len(body) > 10_000_000
    started = time.monotonic()
    response = service.post(SAMPLE, body)
    assert_problem(response, 422, "invalid-request")
    # a tenth of a second for each megabyte, ten times that on a crowded machine
    assert time.monotonic() - started < 10.0
    assert "no" not in str([error["detail"].split() for error in response.json()["errors"]])


@pytest.mark.parametrize(
    "line", [b"NONSENSE\r\n\r\n", b"GET / HTTP/9\r\n\r\n", b"\x16\x03\x01\x02\x00\x01\x00\r\n\r\n"]
)
def test_what_is_not_http_is_refused(service, line):
    with service.connect() as connection:
        connection.sendall(line)
        assert connection.recv(1000).startswith(b"HTTP/1.1 400")
    assert is_prompt(service)


def test_names_are_not_echoed(service):
    name = "a-name-nobody-should-read-in-a-log"
    layout = a_layout(elements=[a_layout()["elements"][0] | {"name": name, "discharge": -1}])
    response = service.post(SAMPLE, a_sample(layout=layout))
    assert_problem(response, 422, "invalid-request")
    assert name not in response.text
    assert name not in service.log.read_text(encoding="utf-8")
