"""The service as a child process: a free port, a log, readiness, a clean end."""

import socket
import subprocess
import sys
import time
from pathlib import Path
from types import TracebackType
from typing import Self
from urllib.error import URLError
from urllib.request import urlopen

LOOPBACK = "127.0.0.1"
START = 180.0
"""Longest wait for readiness [s]: on a fresh machine the kernels are compiled first."""

STOP = 15.0
"""Longest wait for the end after a polite signal [s]."""


class ServiceDiedError(RuntimeError):
    """The child ended before it was ready."""


class Service:
    """Context manager: a ready service inside, none outside; on another port if `port` is busy."""

    def __init__(self, log: Path, port: int) -> None:
        self.log = log
        self.port = free_port(port)
        self.address = f"http://{LOOPBACK}:{self.port}"

    def __enter__(self) -> Self:
        with self.log.open("wb") as sink:
            command = [sys.executable, "-m", "forebay", "serve", "--host", LOOPBACK, "--port", str(self.port)]
            self.process = subprocess.Popen(command, stdout=sink, stderr=subprocess.STDOUT)  # noqa: S603
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

    def wait(self) -> None:
        """Return when the child ends or the user interrupts."""
        try:
            self.process.wait()
        except KeyboardInterrupt:
            self._stop()

    def _await_readiness(self) -> None:
        deadline = time.monotonic() + START
        while not is_ready(self.address):
            if self.process.poll() is not None or time.monotonic() > deadline:
                tail = self.log.read_text(encoding="utf-8", errors="replace")[-2000:]
                msg = f"the service did not become ready; the end of {self.log}:\n{tail}"
                raise ServiceDiedError(msg)
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


def is_ready(address: str) -> bool:
    """Whether /readyz answers 200 by now."""
    try:
        with urlopen(f"{address}/readyz", timeout=5) as response:
            return bool(response.status == 200)
    except (URLError, ConnectionError, TimeoutError):
        return False
