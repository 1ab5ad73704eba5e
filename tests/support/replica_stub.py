"""A replica that does as it is told: answers, hangs, cuts the connection."""

import json
import threading
import time
from http.server import BaseHTTPRequestHandler, ThreadingHTTPServer
from types import TracebackType
from typing import Self

from typing_extensions import override

from forebay.demo.child import LOOPBACK

ANSWER, BUSY, CUT, HANG = "answer", "busy", "cut", "hang"

HANG_SECONDS = 5.0
"""How long a hanging replica says nothing; the proxy of the tests waits for a second."""


class _Server(ThreadingHTTPServer):
    daemon_threads = True

    @override
    def handle_error(self, request: object, client_address: object) -> None:
        """Say nothing: a proxy that has stopped waiting closes the connection, which is what is tested."""


class Stub:
    """Context manager: a replica named `name` that behaves as `manner` says."""

    def __init__(self, name: str, manner: str = ANSWER) -> None:
        self.manner = manner
        self.asked: list[tuple[str, dict[str, str]]] = []
        stub = self

        class Handler(BaseHTTPRequestHandler):
            protocol_version = "HTTP/1.1"

            def do_GET(self) -> None:
                length = int(self.headers.get("Content-Length", 0))
                body = self.rfile.read(length)
                stub.asked.append((self.path, {key.lower(): value for key, value in self.headers.items()}))
                if stub.manner == CUT:
                    self.close_connection = True
                    return
                if stub.manner == HANG:
                    time.sleep(HANG_SECONDS)
                self._write(503 if stub.manner == BUSY else 200, {"replica": name, "bytes": len(body)})

            do_POST = do_GET  # noqa: N815  (the library's own name)

            def _write(self, status: int, answer: dict[str, object]) -> None:
                text = json.dumps(answer).encode()
                self.send_response(status)
                self.send_header("Content-Type", "application/json")
                self.send_header("Content-Length", str(len(text)))
                self.end_headers()
                self.wfile.write(text)

            @override
            def log_message(self, format: str, *args: object) -> None:
                """Say nothing: the tests look at what was asked."""

        self._server = _Server((LOOPBACK, 0), Handler)
        self.address = f"{LOOPBACK}:{self._server.server_address[1]}"

    def __enter__(self) -> Self:
        threading.Thread(target=self._server.serve_forever, daemon=True).start()
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self._server.shutdown()
        self._server.server_close()
