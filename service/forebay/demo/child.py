"""The service as a child process: a free port, a log, readiness, a clean end."""

import json
import os
import socket
import subprocess
import sys
import time
from pathlib import Path
from types import TracebackType
from typing import Self
from urllib.error import HTTPError, URLError
from urllib.request import urlopen

LOOPBACK = "127.0.0.1"
START = 900.0
"""Longest wait for readiness [s]: on a fresh machine the kernels are compiled first, which takes minutes."""

ANSWER = 5.0
"""Longest wait for one word about readiness [s]."""

READY = "ready"
FAILED = "failed"
"""Word by which /readyz says that waiting is of no use."""

PATIENCE = {"FOREBAY_DEADLINE": "600", "FOREBAY_DRAIN": "0"}
"""Settings of the child unless the environment has others: an answer may take long, and nobody else asks."""

STOP = 15.0
"""Longest wait for the end after a polite signal [s]."""


class ServiceError(RuntimeError):
    """The child ended, or said that it cannot become ready."""


class Service:
    """Context manager: a ready service inside, none outside; on another port if `port` is busy."""

    def __init__(self, log: Path, port: int) -> None:
        self.log = log
        self.port = free_port(port)
        self.address = f"http://{LOOPBACK}:{self.port}"

    def __enter__(self) -> Self:
        with self.log.open("wb") as sink:
            command = [sys.executable, "-m", "forebay", "serve", "--host", LOOPBACK, "--port", str(self.port)]
            self.process = subprocess.Popen(  # noqa: S603
                command, stdout=sink, stderr=subprocess.STDOUT, env=PATIENCE | os.environ
            )
        try:
            self._await_readiness()
        except BaseException:
            self._stop()
            raise
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self._stop()

    def _await_readiness(self) -> None:
        deadline = time.monotonic() + START
        while (state := readiness(self.address)) != READY:
            if FAILED in state or self.process.poll() is not None or time.monotonic() > deadline:
                tail = self.log.read_text(encoding="utf-8", errors="replace")[-2000:]
                msg = f"the service did not become ready; the end of {self.log}:\n{tail}"
                raise ServiceError(msg)
            time.sleep(0.1)

    def _stop(self) -> None:
        self.process.terminate()
        try:
            self.process.wait(timeout=STOP)
        except subprocess.TimeoutExpired:
            self.process.kill()
            self.process.wait()


def free_port(wanted: int) -> int:
    """`wanted` if nothing listens there, else any free port of the loopback interface."""
    for port in (wanted, 0):
        with socket.socket() as probe:
            probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
            try:
                probe.bind((LOOPBACK, port))
            except OSError:
                continue
            return int(probe.getsockname()[1])
    msg = "no free port on the loopback interface"
    raise RuntimeError(msg)


def readiness(address: str) -> str:
    """`ready`, or what /readyz says instead; empty while nothing listens."""
    try:
        with urlopen(f"{address}/readyz", timeout=ANSWER):
            return READY
    except HTTPError as error:
        return str(json.load(error).get("detail", ""))
    except (URLError, ConnectionError, TimeoutError):
        return ""
