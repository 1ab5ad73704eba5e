"""A running service for the examples of the README."""

import pytest

from forebay.demo.child import Service


@pytest.fixture(scope="session")
def service(tmp_path_factory):
    with Service(tmp_path_factory.mktemp("service") / "service.log", port=0) as running:
        yield running
