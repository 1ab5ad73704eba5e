"""One application for all tests over HTTP, with one worker process."""

import time
from collections.abc import Iterator
from typing import TYPE_CHECKING

import pytest
from starlette.testclient import TestClient

if TYPE_CHECKING:
    from fastapi import FastAPI

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
