"""One application for all tests over HTTP, with one worker process."""

import time
from collections.abc import Callable, Iterator
from functools import cache
from typing import TYPE_CHECKING

import pytest
from starlette.testclient import TestClient

if TYPE_CHECKING:
    from fastapi import FastAPI
    from httpx2 import Response

ORIGIN = {"Origin": "https://tool.example"}
"""A page of another origin sends this."""

START = 300.0
"""Longest wait for readiness [s]: a fresh machine compiles every kernel first."""


@pytest.fixture(scope="session")
def app() -> "FastAPI":
    from forebay.app import create_app
    from forebay.settings import Settings

    return create_app(Settings(workers=1, max_body=16 * 2**20))


@pytest.fixture(scope="session")
def client(app: "FastAPI") -> Iterator[TestClient]:
    with TestClient(app, raise_server_exceptions=False, headers=ORIGIN) as running:
        yield running


@pytest.fixture(scope="session")
def ready_client(client: TestClient) -> TestClient:
    deadline = time.monotonic() + START
    while (answer := client.get("/readyz")).status_code != 200:
        assert time.monotonic() < deadline, answer.text
        assert "failed" not in answer.json()["detail"], answer.text
        time.sleep(0.05)
    return client


@pytest.fixture(scope="session")
def answer_to_example(ready_client: TestClient) -> "Callable[[str, str], Response]":
    """Answer to an operation's example, read in a unit system; asked for once, since some take long."""
    from forebay.api.routers.registry import OPERATIONS
    from support.http import example

    @cache
    def post(operation_id: str, system: str) -> "Response":
        request = example(operation_id, unit_system=system)
        if system == "us":  # the same numbers describe another site; its water has to stay liquid
            water = request.get("layout", {}).get("water") or request.get("fluid")
            if water is not None:
                water["temperature"] = 60.0
        return ready_client.post(OPERATIONS[operation_id].path, json=request)

    return post
