from collections.abc import Iterator

import pytest
from starlette.testclient import TestClient

from support.service import Service


@pytest.fixture(scope="session")
def service() -> Iterator[Service]:
    from forebay.app import create_app
    from forebay.settings import Settings

    with TestClient(create_app(Settings())) as client:
        yield Service(client)
