"""The proxy of the deployment on loopback: the real program, its real configuration, with other addresses."""

import os
import shutil
import socket
import subprocess
import sys
import time
from contextlib import suppress
from pathlib import Path
from typing import Self

from forebay.demo.child import LOOPBACK, READY, free_port, readiness
from support.tree import ROOT

CONFIGURATION = ROOT / "service" / "deploy" / "nginx.conf"

PREFIX = "/forebay"
"""Where the proxy publishes the service."""

START = 600.0
"""Longest wait for a replica [s]: on a fresh machine it compiles its kernels first."""


def program() -> str | None:
    """The proxy, which is not on an ordinary user's path."""
    return shutil.which("nginx") or shutil.which("nginx", path="/usr/sbin:/usr/local/sbin")


class Replica:
    """One service process at a port that stays its own, so that it can end and come back."""

    def __init__(self, log: Path, root_path: str = "") -> None:
        self.log = log
        self._environment = {**os.environ, "FOREBAY_ROOT_PATH": root_path, "FOREBAY_WORKERS": "1"}
        self.port = free_port(0)
        self.address = f"{LOOPBACK}:{self.port}"
        self.process: subprocess.Popen[bytes] | None = None

    def start(self) -> None:
        """Start it and wait until it is ready."""
        command = [sys.executable, "-m", "forebay", "serve", "--host", LOOPBACK, "--port", str(self.port)]
        with self.log.open("ab") as sink:
            self.process = subprocess.Popen(
                command, stdout=sink, stderr=subprocess.STDOUT, env=self._environment
            )
        deadline = time.monotonic() + START
        while readiness(f"http://{self.address}") != READY:
            assert self.process.poll() is None, self.log.read_text(encoding="utf-8")[-2000:]
            assert time.monotonic() < deadline, "the replica did not become ready"
            time.sleep(0.05)

    def stop(self, timeout: float = 30.0) -> None:
        """Ask it to end, as a deployment does, and wait until it has."""
        if self.process is not None:
            self.process.terminate()
            self.process.wait(timeout=timeout)
            self.process = None

    def kill(self) -> None:
        """End it without a word."""
        assert self.process is not None
        self.process.kill()
        self.process.wait()
        self.process = None


def configuration(folder: Path, port: int, replicas: list[str], changes: dict[str, str]) -> str:
    """The configuration with the addresses of this machine; each of them has to be there to be replaced."""
    text = CONFIGURATION.read_text(encoding="utf-8")
    placed = {
        "listen 8080;": f"listen {LOOPBACK}:{port};",
        "172.30.86.11:8620": replicas[0],
        "172.30.86.12:8620": replicas[1],
        "/tmp/": f"{folder}/",  # noqa: S108  (the configuration's own)
        "/dev/stdout": f"{folder}/access.log",
        "/dev/stderr": f"{folder}/error.log",
        **changes,
    }
    for written, meant in placed.items():
        assert written in text, written
        text = text.replace(written, meant)
    return text


class Proxy:
    """Context manager: the proxy listening inside, gone outside."""

    def __init__(self, folder: Path, replicas: list[str], changes: dict[str, str] | None = None) -> None:
        self.folder = folder
        self.port = free_port(0)
        self.root = f"http://{LOOPBACK}:{self.port}"
        self.address = self.root + PREFIX
        self._text = configuration(folder, self.port, replicas, changes or {})

    def __enter__(self) -> Self:
        file = self.folder / "nginx.conf"
        file.write_text(self._text, encoding="utf-8")
        name = program()
        assert name is not None
        command = [name, "-e", f"{self.folder}/error.log", "-c", str(file), "-g", "daemon off;"]
        self._process = subprocess.Popen(command)
        while not self._listens():
            assert self._process.poll() is None, (self.folder / "error.log").read_text(encoding="utf-8")
            time.sleep(0.02)
        return self

    def _listens(self) -> bool:
        with suppress(ConnectionError), socket.create_connection((LOOPBACK, self.port), timeout=5.0):
            return True
        return False

    def __exit__(self, *_: object) -> None:
        self._process.terminate()
        self._process.wait(timeout=30.0)
