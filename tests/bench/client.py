"""The application called in this process: no sockets, no client library in the measured time."""

import asyncio
from collections.abc import Sequence
from typing import Any

from fastapi import FastAPI


class InProcess:
    """Posts straight to the ASGI application."""

    def __init__(self, app: FastAPI) -> None:
        self.app = app
        self.loop = asyncio.new_event_loop()
        self.lifespan = app.router.lifespan_context(app)
        self.loop.run_until_complete(self.lifespan.__aenter__())

    def close(self) -> None:
        """End the application's lifespan."""
        self.loop.run_until_complete(self.lifespan.__aexit__(None, None, None))
        self.loop.close()

    def post(self, path: str, body: bytes) -> tuple[int, bytes]:
        """Status and body of one answer."""
        return self.loop.run_until_complete(self._post(path, body))

    def many(self, path: str, bodies: Sequence[bytes]) -> None:
        """Requests one after another."""

        async def repeat() -> None:
            for body in bodies:
                status, answer = await self._post(path, body)
                assert status == 200, answer

        self.loop.run_until_complete(repeat())

    async def _post(self, path: str, body: bytes) -> tuple[int, bytes]:
        scope: dict[str, Any] = {
            "type": "http",
            "asgi": {"version": "3.0"},
            "http_version": "1.1",
            "method": "POST",
            "scheme": "http",
            "path": path,
            "raw_path": path.encode(),
            "root_path": "",
            "query_string": b"",
            "headers": [
                (b"host", b"127.0.0.1:8620"),
                (b"content-type", b"application/json"),
                (b"content-length", str(len(body)).encode()),
                (b"accept", b"application/json"),
            ],
            "client": ("127.0.0.1", 50000),
            "server": ("127.0.0.1", 8620),
            "state": {},
        }
        sent = asyncio.Event()
        parts: list[bytes] = []
        status = 0
        asked = False

        async def receive() -> dict[str, Any]:
            nonlocal asked
            if not asked:
                asked = True
                return {"type": "http.request", "body": body, "more_body": False}
            await sent.wait()
            return {"type": "http.disconnect"}

        async def send(message: Any) -> None:
            nonlocal status
            if message["type"] == "http.response.start":
                status = message["status"]
            elif message["type"] == "http.response.body":
                parts.append(message.get("body", b""))
                if not message.get("more_body", False):
                    sent.set()

        await self.app(scope, receive, send)
        return status, b"".join(parts)
