"""The service with more clients than it can serve: what they get, how long watchers wait, what it holds."""

import http.client
import json
import os
import threading
import time
from collections import Counter
from dataclasses import dataclass, field
from itertools import cycle
from pathlib import Path
from typing import Any

from forebay.api.examples import CHANNEL, OPEN_WATER
from forebay.demo.child import LOOPBACK

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
    """Send the mix from many clients for a time, watching."""
    tally, ended = Tally(), threading.Event()
    threads = [threading.Thread(target=_send, args=(port, MIX, i, tally, ended)) for i in range(clients)]
    threads += [threading.Thread(target=_watch, args=(port, process, tally, ended))]
    for thread in threads:
        thread.start()
    time.sleep(seconds)
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


def _watch(port: int, process: int, tally: Tally, ended: threading.Event) -> None:
    while not ended.wait(0.05):
        started = time.perf_counter()
        connection = http.client.HTTPConnection(LOOPBACK, port, timeout=60.0)
        connection.request("GET", "/livez")
        assert connection.getresponse().status == 200
        connection.close()
        tally.waits.append(time.perf_counter() - started)
        tally.memory.append(memory_of(process))


def memory_of(process: int) -> int:
    """Resident memory of a process and of all below it [bytes]."""
    total, waiting = 0, [process]
    while waiting:
        current = waiting.pop()
        folder = Path("/proc") / str(current)
        try:
            total += int((folder / "statm").read_text().split()[1]) * os.sysconf("SC_PAGE_SIZE")
            waiting += [
                int(child) for child in (folder / "task" / str(current) / "children").read_text().split()
            ]
        except FileNotFoundError:
            continue  # it has ended meanwhile
    return total
