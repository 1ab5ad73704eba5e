"""A running service that tests may hurt: its processes, its counters, bare connections to it."""

import os
import socket
import subprocess
import sys
import time
from collections.abc import Callable, Mapping
from pathlib import Path
from types import MappingProxyType

import httpx2
import orjson

from forebay.demo.child import LOOPBACK, free_port

START = 600.0
"""Longest wait for readiness [s]: on a fresh machine the kernels are compiled first."""

PATIENCE = 120.0
"""Longest wait for an answer [s]; what is measured has bounds of its own."""

NOTHING: Mapping[str, str] = MappingProxyType({})


class Running:
    """A service process on loopback, with settings of its own, and other variables of its environment."""

    def __init__(self, log: Path, environment: Mapping[str, str] = NOTHING, /, **settings: str) -> None:
        self.port = free_port(0)
        self.address = f"http://{LOOPBACK}:{self.port}"
        self.log = log
        # made once: a client takes as long as many requests; a connection serves one request
        self.client = httpx2.Client(timeout=PATIENCE, limits=httpx2.Limits(max_keepalive_connections=0))
        variables = {f"FOREBAY_{name.upper()}": value for name, value in settings.items()}
        command = [sys.executable, "-m", "forebay", "serve", "--port", str(self.port)]
        with log.open("wb") as sink:
            self.process = subprocess.Popen(
                command, stdout=sink, stderr=subprocess.STDOUT, env={**os.environ, **environment, **variables}
            )

    def wait_until_ready(self) -> None:
        """Wait until it says so: its workers prepare nothing any more."""
        deadline = time.monotonic() + START
        while not (self.is_alive() and self.get("/readyz").status_code == 200):
            log = self.log.read_text(encoding="utf-8")
            assert self.process.poll() is None, log[-3000:]
            assert '"preparation failed"' not in log, log[-3000:]
            assert time.monotonic() < deadline
            time.sleep(0.2)

    def is_alive(self) -> bool:
        """Whether it listens and answers."""
        try:
            return self.get("/livez").status_code == 200
        except httpx2.TransportError:
            return False

    def post(self, path: str, body: object, **headers: str) -> httpx2.Response:
        """Answer to a body."""
        content = body if isinstance(body, bytes) else orjson.dumps(body)
        sent = {"Content-Type": "application/json", "Origin": "https://tool.example", **headers}
        return self.client.post(self.address + path, content=content, headers=sent)

    def get(self, path: str, **headers: str) -> httpx2.Response:
        """Answer to a GET."""
        return self.client.get(self.address + path, headers=headers)

    def connect(self) -> socket.socket:
        """A bare connection."""
        return socket.create_connection((LOOPBACK, self.port), timeout=PATIENCE)

    def metric(self, name: str) -> float:
        """Value of one line of /metrics."""
        lines = (line.rsplit(" ", 1) for line in self.get("/metrics").text.splitlines())
        return float(next(value for key, value in lines if key == name))

    def ended(self, reason: str) -> float:
        """Workers that ended before their work did."""
        return self.metric(f'forebay_workers_ended_total{{reason="{reason}"}}')

    def descendants(self) -> set[int]:
        """Process ids of everything that the service has started."""
        parents = _parents()
        found = {self.process.pid}
        while more := {pid for pid, parent in parents.items() if parent in found} - found:
            found |= more
        return found - {self.process.pid}

    def busy_worker(self) -> int:
        """Process id of the worker at work: one without children that takes processor time."""
        found: list[int] = []

        def is_found() -> bool:
            parents = set(_parents().values())
            before = {pid: processor_time(pid) for pid in self.descendants() - parents}
            time.sleep(0.05)
            found[:] = [pid for pid, start in before.items() if processor_time(pid) > start]
            return bool(found)

        eventually(is_found, PATIENCE)
        return found[0]

    def stop(self) -> None:
        """End it, whatever state it is in."""
        self.client.close()
        self.process.kill()
        self.process.wait()


def _parents() -> dict[int, int]:
    """Parent of every process."""
    parents = {}
    for entry in Path("/proc").iterdir():
        if entry.name.isdigit():
            try:
                stat = (entry / "stat").read_text(encoding="utf-8")
            except OSError:
                continue  # it has ended meanwhile
            parents[int(entry.name)] = int(stat.rsplit(")", 1)[1].split()[1])
    return parents


def processor_time(pid: int) -> float:
    """Processor time of a process [s]; 0 if it has ended."""
    try:
        fields = Path(f"/proc/{pid}/stat").read_text(encoding="utf-8").rsplit(")", 1)[1].split()
    except OSError:
        return 0.0
    return (int(fields[11]) + int(fields[12])) / os.sysconf("SC_CLK_TCK")


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


def eventually(is_so: Callable[[], bool], seconds: float) -> float:
    """Time until something is so [s]; fails if it takes longer than `seconds`."""
    started = time.monotonic()
    while not is_so():
        assert time.monotonic() - started < seconds, f"not so within {seconds} s"
        time.sleep(0.01)
    return time.monotonic() - started
