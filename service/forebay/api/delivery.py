"""How an answer leaves: with an entity tag, not at all if the client holds it, and compressed if it asks."""

import gzip
from collections.abc import Callable, Mapping
from types import MappingProxyType

import anyio
import brotli
import zstandard
from starlette.datastructures import Headers, MutableHeaders
from starlette.types import ASGIApp, Message, Receive, Scope, Send

from forebay.api.entity_tag import REVALIDATED, encoded_tag, entity_tag, is_known

SMALLEST = 10_000
"""Bytes from which an answer is compressed."""

IN_THREAD = 128 * 1024
"""Bytes from which it is compressed in a thread, so that the event loop goes on."""

ENCODERS: Mapping[str, Callable[[bytes], bytes]] = MappingProxyType(
    {
        "zstd": lambda body: zstandard.compress(body, 1),
        "br": lambda body: brotli.compress(body, quality=1),
        "gzip": lambda body: gzip.compress(body, 1, mtime=0),
    }
)
"""Content encodings in the order of preference, each at its fastest level: the same bytes every time."""

DENSE = ("image/png", "application/pdf", "font/")
"""Media types that are compressed already."""

TAGGED = ("/v1/", "/openapi.json", "/docs-assets/")
"""Beginnings of the addresses whose answers to GET change with the version only."""


def content_encoding(accept: str | None) -> str | None:
    """Encoding that Accept-Encoding prefers among ours (RFC 9110, 12.5.3); None for none."""
    qualities = dict(_coding(part) for part in (accept or "").split(",")[:32] if part.strip())
    rest = qualities.get("*", 0.0)
    best = max(ENCODERS, key=lambda name: qualities.get(name, rest))
    return best if qualities.get(best, rest) > 0.0 else None


def _coding(part: str) -> tuple[str, float]:
    name, _, parameter = (piece.strip().lower() for piece in part.partition(";"))
    try:
        return name, float(parameter.removeprefix("q=")) if parameter else 1.0
    except ValueError:
        return name, 0.0


class Delivery:
    """Tags, spares or compresses answers that are sent in one piece; passes on all others."""

    def __init__(self, app: ASGIApp) -> None:
        self.app = app

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        started: list[Message] = []

        async def deliver(message: Message) -> None:
            if message["type"] == "http.response.start":
                started.append(message)
                return
            start = started.pop() if started else None
            if start is not None:
                whole = not message.get("more_body", False)
                parcel = await _packed(scope, start, message.get("body", b"")) if whole else None
                await send(start)
                message = message if parcel is None else {**message, "body": parcel}
            await send(message)

        await self.app(scope, receive, deliver)


async def _packed(scope: Scope, start: Message, body: bytes) -> bytes:
    """What is sent of an answer's body; its headers are changed with it."""
    asked, headers = Headers(scope=scope), MutableHeaders(scope=start)
    if start["status"] == 200 and "etag" not in headers and _is_tagged(scope):
        headers.update({"ETag": entity_tag(scope["path"], body)})
        headers["Cache-Control"] = headers.get("Cache-Control", REVALIDATED["Cache-Control"])
        if is_known(headers["etag"], asked.get("if-none-match")):
            start["status"] = 304
            del headers["content-length"]
            return b""
    if len(body) < SMALLEST or headers.get("content-type", "").startswith(DENSE):
        return body
    headers.add_vary_header("Accept-Encoding")
    encoding = content_encoding(asked.get("accept-encoding"))
    return body if encoding is None else await _compressed(body, encoding, headers)


def _is_tagged(scope: Scope) -> bool:
    path = scope["path"].removeprefix(scope.get("root_path", ""))
    return scope["method"] == "GET" and str(path).startswith(TAGGED)


async def _compressed(body: bytes, encoding: str, headers: MutableHeaders) -> bytes:
    compress = ENCODERS[encoding]
    packed = await anyio.to_thread.run_sync(compress, body) if len(body) >= IN_THREAD else compress(body)
    headers.update({"Content-Encoding": encoding, "Content-Length": str(len(packed))})
    if "etag" in headers:
        headers["ETag"] = encoded_tag(headers["etag"], encoding)
    return packed
