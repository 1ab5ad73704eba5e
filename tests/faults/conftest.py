"""Services that fault tests may hurt."""

from collections.abc import Callable, Iterator, Mapping
from pathlib import Path

import pytest

from support.running import NOTHING, Running


@pytest.fixture(scope="session")
def service(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Running]:
    """One worker, room for one more computation, ready; for tests that leave it as it was."""
    running = Running(
        tmp_path_factory.mktemp("faults") / "service.log",
        workers="1",
        queue="1",
        max_body="20000000",
        deadline="60",
    )
    try:
        running.wait_until_ready()
        yield running
    finally:
        running.stop()


@pytest.fixture
def another(tmp_path: Path) -> Iterator[Callable[..., Running]]:
    """Start services with settings of their own; they end with the test."""
    started: list[Running] = []

    def start(environment: Mapping[str, str] = NOTHING, /, **settings: str) -> Running:
        log = tmp_path / f"service-{len(started)}.log"
        running = Running(log, environment, **settings)
        started.append(running)
        return running

    yield start
    for running in started:
        running.stop()
