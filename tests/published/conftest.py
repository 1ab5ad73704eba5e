import pytest
from starlette.testclient import TestClient

from support.service import Service


@pytest.fixture(scope="session")
def service(client: TestClient) -> Service:
    return Service(client)
