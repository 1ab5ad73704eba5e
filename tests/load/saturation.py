"""The service with more clients than it can serve: what they get, how long watchers wait, what it holds."""

import http.client
import json
import threading
import time
from collections import Counter
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass, field
from itertools import cycle
from multiprocessing import get_context
from typing import Any

from forebay.api.examples import CHANNEL, OPEN_WATER
from forebay.demo.child import LOOPBACK
from support.running import memory_of

GRID = {"grid": {"x": [-100, 100], "nx": 500, "y": [-100, 100], "ny": 400}}
"""Places of a large request: 200,000 points."""

MIX: tuple[tuple[str, dict[str, Any], int], ...] = (
    *[("/v1/field/sample", {"layout": OPEN_WATER, "at": {"x": [5, 9], "y": [1, 2]}}, 200)] * 12,
    *[("/v1/stagnation/search", {"layout": OPEN_WATER}, 200)] * 4,
    *[("/v1/field/sample", {"layout": {"depth": 0}, "at": {"x": [5], "y": [1]}}, 422)] * 2,
    ("/v1/withdrawal/trace", {"layout": CHANNEL}, 200),
    ("/v1/field/sample", {"layout": OPEN_WATER, "at": GRID}, 200),
)
"""Route, body and status of what a client sends in turn: mostly small, some large, some wrong."""

SMALL = MIX[:1]
"""What the rate of small requests is measured with."""


@dataclass
class Tally:
    """What clients got.

    statuses : answers by status;  surprises : answers that were neither what the mix says nor an honest 503
    waits : times that a watcher waited for /livez [s];  memory : resident memory of all processes [bytes]
    """

    statuses: Counter[int] = field(default_factory=Counter)
    surprises: list[str] = field(default_factory=list)
    waits: list[float] = field(default_factory=list)
    memory: list[int] = field(default_factory=list)

    def quantile(self, share: float) -> float:
        """Time that all but `1 - share` of the watcher's requests waited at most [s]."""
        return sorted(self.waits)[int(share * (len(self.waits) - 1))]


def saturate(port: int, process: int, *, seconds: float, clients: int) -> Tally:
    """Send the mix from many clients for a time, while another process watches.

    The watcher is a process of its own, since threads of this one wait for each other.
    """
    tally, ended = Tally(), threading.Event()
    threads = [threading.Thread(target=_send, args=(port, MIX, i, tally, ended)) for i in range(clients)]
    with ProcessPoolExecutor(1, get_context("spawn")) as watcher:
        watching = watcher.submit(watch, port, process, seconds=seconds)
        for thread in threads:
            thread.start()
        try:
            tally.waits, tally.memory = watching.result()
        finally:
            ended.set()
            for thread in threads:
                thread.join()
    return tally


def rate(port: int, method: str, path: str, body: str | None, *, seconds: float) -> float:
    """Requests a second of four clients that send one and the same."""
    counts, ended = Counter[int](), time.monotonic() + seconds

    def send(client: int) -> None:
        connection = http.client.HTTPConnection(LOOPBACK, port, timeout=60.0)
        while time.monotonic() < ended:
            connection.request(method, path, body)
            answer = connection.getresponse()
            answer.read()
            assert answer.status == 200, answer.status
            counts[client] += 1
        connection.close()

    threads = [threading.Thread(target=send, args=(client,)) for client in range(4)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    return sum(counts.values()) / seconds


def small_and_empty(port: int, *, seconds: float) -> tuple[float, float]:
    """Requests a second of a small computation, and of the route that does nothing."""
    route, body, _ = SMALL[0]
    small = rate(port, "POST", route, json.dumps(body), seconds=seconds)
    return small, rate(port, "GET", "/livez", None, seconds=seconds)


def _send(port: int, mix: tuple[Any, ...], first: int, tally: Tally, ended: threading.Event) -> None:
    connection = http.client.HTTPConnection(LOOPBACK, port, timeout=120.0)
    for route, body, expected in cycle((*mix[first % len(mix) :], *mix[: first % len(mix)])):
        if ended.is_set():
            connection.close()
            return
        try:
            connection.request("POST", route, json.dumps(body))
            answer = connection.getresponse()
            content = answer.read()
        except (OSError, http.client.HTTPException) as error:
            tally.surprises.append(repr(error))
            connection.close()
            continue
        tally.statuses[answer.status] += 1
        is_honest = answer.status == 503 and answer.headers.get("Retry-After") is not None
        if answer.status != expected and not is_honest:
            tally.surprises.append(f"{route} {answer.status} {content[:200]!r}")


def watch(port: int, process: int, *, seconds: float) -> tuple[list[float], list[int]]:
    """Times of /livez [s], and resident memory of a process and all below it at those moments [bytes]."""
    waits, memory, ends = [], [], time.monotonic() + seconds
    while time.monotonic() < ends:
        started = time.perf_counter()
        connection = http.client.HTTPConnection(LOOPBACK, port, timeout=60.0)
        connection.request("GET", "/livez")
        assert connection.getresponse().status == 200
        connection.close()
        waits.append(time.perf_counter() - started)
        memory.append(memory_of(process))
        time.sleep(0.05)
    return waits, memory
