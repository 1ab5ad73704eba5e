"""A running service, and its contract as a client finds it."""

import json
from urllib.request import urlopen

import pytest

from forebay.demo.child import Service


@pytest.fixture(scope="session")
def service(tmp_path_factory):
    with Service(tmp_path_factory.mktemp("service") / "service.log", port=0) as running:
        yield running


@pytest.fixture(scope="session")
def contract(service, tmp_path_factory):
    """File of the OpenAPI document that the service hands out."""
    path = tmp_path_factory.mktemp("contract") / "openapi.json"
    with urlopen(f"{service.address}/openapi.json", timeout=60.0) as answer:
        path.write_text(json.dumps(json.load(answer)), encoding="utf-8")
    return path
